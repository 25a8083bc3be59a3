import type { ReactiveController, ReactiveControllerHost } from "lit";
import type { Feed } from "./feed.ts";

/** Keeps its host drawn while something outside changes: opened when the host appears, closed when it goes. */
export class Listening implements ReactiveController {
  readonly #host: ReactiveControllerHost;
  readonly #open: (changed: () => void) => (() => void) | undefined;
  #close: (() => void) | undefined;

  /** @param open subscribes and returns how to unsubscribe; undefined while there is nothing to listen to yet (then `reopen` later) */
  constructor(host: ReactiveControllerHost, open: (changed: () => void) => (() => void) | undefined) {
    this.#host = host;
    this.#open = open;
    host.addController(this);
  }

  hostConnected(): void {
    this.reopen();
  }

  hostDisconnected(): void {
    this.#close?.();
    this.#close = undefined;
  }

  reopen(): void {
    this.#close?.();
    this.#close = this.#open(() => this.#host.requestUpdate());
  }
}

const everyHalfSecond = new Set<() => void>();
let _timer: ReturnType<typeof setInterval> | undefined;

/** Draws its host twice a second: ages grow and the present moves without any message. One timer serves all. */
export function ticking(host: ReactiveControllerHost, onTick?: () => void): Listening {
  return new Listening(host, (changed) => {
    const tick = onTick ?? changed;
    everyHalfSecond.add(tick);
    _timer ??= setInterval(() => {
      for (const each of everyHalfSecond) each();
    }, 500);
    return () => everyHalfSecond.delete(tick);
  });
}

/** Draws its host when link, engine, alarms or events change. */
export function followingFeed(host: ReactiveControllerHost & { feed: Feed | undefined }): Listening {
  return new Listening(host, (changed) => host.feed?.watch(changed));
}
