import type { ReactiveController, ReactiveControllerHost } from "lit";
import type { ViewName } from "./route.ts";
import { viewNames, views } from "./views.ts";

/** Views that are not on the screen are fetched this long after the first one: by then it has its data. */
const restAfterMs = 1500;

/**
 * Fetches the file of a view when it is first shown, and the other views' soon after: the first one is on the screen early, and when the
 * link goes later, every view still opens.
 */
export class ViewLoader implements ReactiveController {
  readonly #host: ReactiveControllerHost;
  readonly #ready = new Set<ViewName>();
  readonly #asked = new Set<ViewName>();
  readonly #failed = new Map<ViewName, Error>();
  #rest: ReturnType<typeof setTimeout> | undefined;

  constructor(host: ReactiveControllerHost) {
    this.#host = host;
    host.addController(this);
  }

  hostConnected(): void {}

  hostDisconnected(): void {
    clearTimeout(this.#rest);
  }

  /** Whether the view can be drawn; if not yet, it is asked for, and the host is drawn again when it has come or failed. */
  want(view: ViewName): "ready" | "loading" | Error {
    if (this.#ready.has(view)) return "ready";
    const error = this.#failed.get(view);
    if (error) return error;
    void this.#load(view);
    return "loading";
  }

  async #load(view: ViewName): Promise<void> {
    if (this.#asked.has(view)) return;
    this.#asked.add(view);
    try {
      await views[view].load();
      this.#ready.add(view);
      this.#rest ??= setTimeout(() => viewNames.forEach((each) => void this.#load(each)), restAfterMs);
    } catch (error) {
      this.#failed.set(view, error as Error);
    }
    this.#host.requestUpdate();
  }
}
