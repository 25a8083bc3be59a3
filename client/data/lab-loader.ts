import type { ReactiveControllerHost } from "lit";
import type { LabResult } from "../../core/messages/index.ts";
import { api } from "./api.ts";
import type { Feed } from "./feed.ts";
import { Loaded } from "./loaded.ts";
import { stretchAbout } from "./time-window.ts";

/** The laboratory's results of one stream in and about a window; asked for again when one came in, was corrected or withdrawn. */
export class LabLoader {
  readonly #loaded: Loaded<{ results: LabResult[] }>;
  /** cursor of the newest change that was asked for */
  #known = 0;

  constructor(host: ReactiveControllerHost) {
    this.#loaded = new Loaded(host, (key, signal) => {
      const [stream, from, to] = key.split(" ");
      return api.lab(stream, Number(from), Number(to), signal);
    });
  }

  /** Says what the screen shows now. Cheap: it may be called on every drawing. */
  want(stream: string, window: { from: number; to: number }, feed: Feed): void {
    const asked = stretchAbout(window);
    this.#loaded.want(`${stream} ${asked.from} ${asked.to}`);
    const newest = feed.events.findLast((event) => event.stream === stream && event.kind.startsWith("lab result"));
    if ((newest?.cursor ?? 0) <= this.#known) return;
    this.#known = newest?.cursor ?? 0;
    this.#loaded.refresh();
  }

  /** Those that stand, within [from, to], newest first. */
  of(property: string, { from, to }: { from: number; to: number }): LabResult[] {
    return (this.#loaded.value?.results ?? []).filter(
      (each) => each.property === property && !each.withdrawn && each.time >= from && each.time <= to,
    );
  }
}
