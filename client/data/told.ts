import type { ReactiveController, ReactiveControllerHost } from "lit";

/** A command on its way: whether one is, and why the last was not taken. A form asks it to `send`, and draws the rest. */
export class Told implements ReactiveController {
  busy = false;
  trouble: string | undefined;
  readonly #host: ReactiveControllerHost;

  constructor(host: ReactiveControllerHost) {
    this.#host = host;
    host.addController(this);
  }

  hostConnected(): void {}

  /** Resolves with whether it was done. */
  async send(command: () => Promise<unknown>): Promise<boolean> {
    if (this.busy) return false;
    this.busy = true;
    this.trouble = undefined;
    this.#host.requestUpdate();
    try {
      await command();
      return true;
    } catch (error) {
      this.trouble = (error as Error).message;
      return false;
    } finally {
      this.busy = false;
      this.#host.requestUpdate();
    }
  }
}
