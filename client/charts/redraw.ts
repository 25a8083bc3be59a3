import type { LitElement, ReactiveController } from "lit";
import { onTheme } from "./colours.ts";

/** Has a chart drawn again when its size, the theme or the fonts have changed, as long as it is on the page. */
export class Redraw implements ReactiveController {
  readonly #host: LitElement;
  readonly #draw: (always: boolean) => void;
  readonly #gone: () => void;
  #stop: (() => void)[] = [];

  /** `draw(false)`: the size may be another; `draw(true)`: draw in any case. `gone`: let go of what was drawn. */
  constructor(host: LitElement, draw: (always: boolean) => void, gone: () => void) {
    this.#host = host;
    this.#draw = draw;
    this.#gone = gone;
    host.addController(this);
  }

  hostConnected(): void {
    const resized = new ResizeObserver(() => this.#draw(false));
    resized.observe(this.#host);
    this.#stop = [() => resized.disconnect(), onTheme(() => this.#draw(true))];
    void document.fonts.ready.then(() => this.#draw(true));
  }

  hostDisconnected(): void {
    for (const stop of this.#stop) stop();
    this.#gone();
  }
}
