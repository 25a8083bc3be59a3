import type { ReactiveController, ReactiveControllerHost } from "lit";
import type { RehearsalRequest, RehearsalResult, RehearsalStanding } from "../../core/rehearsal/index.ts";
import { api } from "./api.ts";

const lookEveryMs = 150;

/** One rehearsal at a time: started, looked at until it is done, cancelled when another is asked for. What it came to last stays meanwhile. */
export class Rehearsing implements ReactiveController {
  result: RehearsalResult | undefined;
  /** the name of the rehearsal that `result` came of */
  id: string | undefined;
  running: Extract<RehearsalStanding, { state: "running" }> | undefined;
  failed: string | undefined;
  readonly #host: ReactiveControllerHost;
  #asked = 0;
  #current: string | undefined;

  constructor(host: ReactiveControllerHost) {
    this.#host = host;
    host.addController(this);
  }

  hostConnected(): void {}

  hostDisconnected(): void {
    void this.cancel();
  }

  async start(stream: string, request: RehearsalRequest): Promise<void> {
    await this.cancel();
    const asked = ++this.#asked;
    this.failed = undefined;
    this.#say({ state: "running", doing: "starting", done: 0, total: 1, restMs: null });
    try {
      const { rehearsal } = await api.rehearse(stream, request);
      if (asked !== this.#asked) return void api.cancelRehearsal(rehearsal).catch(() => {});
      this.#current = rehearsal;
      for (;;) {
        const standing = await api.rehearsal(rehearsal);
        if (asked !== this.#asked) return;
        if (standing.state !== "running") return this.#ended(rehearsal, standing);
        this.#say(standing);
        await new Promise((resolve) => setTimeout(resolve, lookEveryMs));
      }
    } catch (error) {
      if (asked === this.#asked) this.#ended(undefined, { state: "failed", says: (error as Error).message });
    }
  }

  async cancel(): Promise<void> {
    const current = this.#current;
    this.#asked++;
    this.#current = undefined;
    this.#say(undefined);
    // One that is done already is not there to be cancelled.
    if (current !== undefined) await api.cancelRehearsal(current).catch(() => {});
  }

  #ended(id: string | undefined, standing: Exclude<RehearsalStanding, { state: "running" }>): void {
    this.#current = undefined;
    if (standing.state === "done") {
      this.result = standing.result;
      this.id = id;
    } else if (standing.state === "failed") this.failed = standing.says;
    this.#say(undefined);
  }

  #say(running: Rehearsing["running"]): void {
    this.running = running;
    this.#host.requestUpdate();
  }
}
