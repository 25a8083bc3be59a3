import type { ReactiveController, ReactiveControllerHost } from "lit";
import type { Judged, PlantStream } from "../../core/messages/index.ts";
import { api } from "./api.ts";
import type { Feed } from "./feed.ts";
import { appendInPlace, type HeldTrend, held, trimInPlace } from "./trend-columns.ts";

export interface TrendWish {
  from: number;
  to: number;
  /** intervals that the width of the chart can show */
  points: number;
}

/** The wish is widened by this share of its span on either side, so that a small pan shows data at once. */
const margin = 0.3;
const settleMs = 120;
const retryMs = 2000;

/**
 * Holds the trend of one stream for the window that is on the screen: asks the server when the window leaves what is held or needs another
 * fineness, and appends live readings. Holds one trend at a time.
 */
export class TrendLoader implements ReactiveController {
  trend: HeldTrend | undefined;
  error: Error | undefined;
  loading = false;
  /** goes up with every change of `trend`: charts compare it */
  version = 0;
  readonly #host: ReactiveControllerHost;
  readonly #feed: () => Feed;
  readonly #stream: () => Pick<PlantStream, "id" | "gapMs">;
  #wish: TrendWish | undefined;
  /** how fine the held trend is, ms a point */
  #fineness = 0;
  #heldFrom = 0;
  #heldTo = 0;
  #held: string | undefined;
  #timer: ReturnType<typeof setTimeout> | undefined;
  #abort: AbortController | undefined;
  #waiting: Judged[] = [];
  #close: (() => void) | undefined;

  constructor(host: ReactiveControllerHost, feed: () => Feed, stream: () => Pick<PlantStream, "id" | "gapMs">) {
    this.#host = host;
    this.#feed = feed;
    this.#stream = stream;
    host.addController(this);
  }

  hostConnected(): void {
    this.#listen();
  }

  hostDisconnected(): void {
    this.#close?.();
    this.#close = undefined;
    this.#abort?.abort();
    clearTimeout(this.#timer);
  }

  /** Says what the screen shows now. Cheap: it may be called on every drawing. */
  want(wish: TrendWish): void {
    this.#wish = wish;
    if (this.#held !== this.#stream().id) {
      this.trend = undefined;
      this.#listen();
      this.#schedule(0);
    } else if (this.#isOutgrown(wish)) this.#schedule(this.trend ? settleMs : 0);
  }

  #listen(): void {
    this.#close?.();
    this.#close = this.#feed().watchReadings(this.#stream().id, (readings, missed) => {
      if (missed) this.#schedule(settleMs, true);
      if (this.loading) this.#waiting.push(...readings);
      if (this.trend) this.#append(readings);
    });
  }

  #append(readings: readonly Judged[]): void {
    const { trend } = this;
    if (!trend) return;
    let changed = false;
    for (const judged of readings) changed = appendInPlace(trend, judged, this.#stream().gapMs) || changed;
    if (!changed) return;
    // A live window moves on: let go of what has left it, a little at a time.
    const wish = this.#wish;
    if (wish && trend.time[0] < wish.from - (wish.to - wish.from) * margin * 2) {
      const keep = wish.from - (wish.to - wish.from) * margin;
      trimInPlace(trend, keep);
      this.#heldFrom = Math.max(this.#heldFrom, keep);
    }
    this.#heldTo = Math.max(this.#heldTo, trend.to);
    this.version += 1;
    this.#host.requestUpdate();
  }

  #isOutgrown({ from, to, points }: TrendWish): boolean {
    if (!this.trend && !this.error) return true;
    if (this.error) return false; // its own retry is under way
    const now = this.#feed().now();
    const fineness = (to - from) / points;
    if (from < this.#heldFrom - 1) return true;
    if (Math.min(to, now) > this.#heldTo + Math.max(60_000, (to - from) * 0.02) && to < now - 60_000) return true;
    if (this.trend?.whole) return fineness > this.#fineness * 4;
    return fineness < this.#fineness * 0.7 || fineness > this.#fineness * 2;
  }

  #schedule(afterMs: number, evenIfLoading = false): void {
    if (this.#timer !== undefined || (this.loading && !evenIfLoading && this.#held === this.#stream().id)) {
      if (afterMs > 0) return;
    }
    clearTimeout(this.#timer);
    this.#held = this.#stream().id;
    this.#timer = setTimeout(() => {
      this.#timer = undefined;
      void this.#load();
    }, afterMs);
  }

  async #load(): Promise<void> {
    const wish = this.#wish;
    if (!wish) return;
    this.#abort?.abort();
    const abort = new AbortController();
    this.#abort = abort;
    const { id } = this.#stream();
    const spanMs = wish.to - wish.from;
    const from = wish.from - spanMs * margin;
    const to = Math.min(wish.to + spanMs * margin, this.#feed().now());
    const points = Math.min(2000, Math.ceil((wish.points * (to - from)) / spanMs));
    this.loading = true;
    this.#waiting = [];
    try {
      const trend = await api.trend(id, from, to, points, abort.signal);
      this.trend = held(trend);
      this.error = undefined;
      this.#fineness = (to - from) / points;
      this.#heldFrom = from;
      this.#heldTo = to;
      this.version += 1;
      this.#append(this.#waiting);
    } catch (error) {
      if (abort.signal.aborted) return;
      this.error = error as Error;
      this.#timer = setTimeout(() => {
        this.#timer = undefined;
        void this.#load();
      }, retryMs);
    }
    this.loading = false;
    this.#waiting = [];
    this.#host.requestUpdate();
    if (this.#wish && this.#isOutgrown(this.#wish)) this.#schedule(settleMs);
  }
}
