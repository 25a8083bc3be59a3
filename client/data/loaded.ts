import type { ReactiveController, ReactiveControllerHost } from "lit";

const retryMs = 3000;

/**
 * One answer of the server for a key: asked again when the key changes, and by itself after an error. While a new key loads, the old answer
 * stays, marked `loading`.
 */
export class Loaded<T> implements ReactiveController {
  value: T | undefined;
  error: Error | undefined;
  loading = false;
  readonly #host: ReactiveControllerHost;
  readonly #ask: (key: string, signal: AbortSignal) => Promise<T>;
  #key: string | undefined;
  #abort: AbortController | undefined;
  #retry: ReturnType<typeof setTimeout> | undefined;

  constructor(host: ReactiveControllerHost, ask: (key: string, signal: AbortSignal) => Promise<T>) {
    this.#host = host;
    this.#ask = ask;
    host.addController(this);
  }

  hostConnected(): void {}

  hostDisconnected(): void {
    this.#abort?.abort();
    clearTimeout(this.#retry);
    this.#key = undefined;
  }

  /** Asks unless this key is the one that was asked last. */
  want(key: string): void {
    if (key === this.#key) return;
    this.#key = key;
    void this.#load(key);
  }

  /** Asks again for the same key, quietly. */
  refresh(): void {
    if (this.#key !== undefined && !this.loading) void this.#load(this.#key);
  }

  async #load(key: string): Promise<void> {
    this.#abort?.abort();
    clearTimeout(this.#retry);
    const abort = new AbortController();
    this.#abort = abort;
    this.loading = true;
    try {
      this.value = await this.#ask(key, abort.signal);
      this.error = undefined;
    } catch (error) {
      if (abort.signal.aborted) return;
      this.error = error as Error;
      this.#retry = setTimeout(() => void this.#load(key), retryMs);
    }
    this.loading = false;
    this.#host.requestUpdate();
  }
}
