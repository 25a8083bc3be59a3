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

/** A stretch that was asked for. `to` is ∞ where it reached the present: from then on the live link keeps it complete. */
interface Stretch {
  stream: string;
  from: number;
  to: number;
  /** ms a point */
  fineness: number;
  whole: boolean;
}

/** The wish is widened by this share of its span on either side, so that a small pan shows data at once. */
const margin = 0.3;
const settleMs = 120;
const retryMs = 2000;
/** While recorded history is being brought in, what was read before lacks it: it is read again so often. */
const historyEveryMs = 3000;

/**
 * Holds the trend of one stream for the window that is on the screen: asks the server when the window leaves what is held or needs another
 * fineness, and appends live readings. Holds one trend at a time.
 */
export class TrendLoader implements ReactiveController {
  trend: HeldTrend | undefined;
  error: Error | undefined;
  /** goes up with every change of `trend`: charts compare it */
  version = 0;
  readonly #host: ReactiveControllerHost;
  readonly #feed: () => Feed;
  readonly #stream: () => Pick<PlantStream, "id" | "gapMs">;
  #wish: TrendWish | undefined;
  #held: Stretch | undefined;
  #asked: Stretch | undefined;
  #abort: AbortController | undefined;
  #timer: ReturnType<typeof setTimeout> | undefined;
  /** readings that came while a request was under way: the answer may not have them yet */
  #waiting: Judged[] = [];
  #listensTo: string | undefined;
  #askedAt = 0;
  #historyGrows = false;
  #close: (() => void) | undefined;

  constructor(host: ReactiveControllerHost, feed: () => Feed, stream: () => Pick<PlantStream, "id" | "gapMs">) {
    this.#host = host;
    this.#feed = feed;
    this.#stream = stream;
    host.addController(this);
  }

  get loading(): boolean {
    return this.#asked !== undefined;
  }

  hostConnected(): void {
    this.#listen();
  }

  hostDisconnected(): void {
    this.#close?.();
    this.#listensTo = undefined;
    this.#forget();
  }

  /** Says what the screen shows now. Cheap: it may be called on every drawing. */
  want(wish: TrendWish): void {
    this.#wish = wish;
    if (this.#listensTo !== this.#stream().id) {
      this.#forget();
      this.#listen();
    }
    if (!this.#serves(this.#asked ?? this.#held, wish)) this.#schedule(this.trend ? settleMs : 0);
    this.#followHistory();
  }

  /** History does not come over the live link: it is read every few seconds while it grows, and once more when it is whole. */
  #followHistory(): void {
    const grows = this.#feed().engine?.loading !== undefined;
    this.#historyGrows ||= grows;
    if (!this.#historyGrows || this.#asked || performance.now() - this.#askedAt < historyEveryMs) return;
    this.#historyGrows = grows;
    this.#schedule(0);
  }

  /** Lets go of everything that belongs to another stream, or to a time when nobody listened. */
  #forget(): void {
    this.#abort?.abort();
    clearTimeout(this.#timer);
    this.#timer = undefined;
    this.#asked = undefined;
    this.#held = undefined;
    this.trend = undefined;
    this.error = undefined;
  }

  #listen(): void {
    this.#close?.();
    const { id } = this.#stream();
    this.#listensTo = id;
    this.#close = this.#feed().watchReadings(id, (readings, missed) => {
      if (missed) this.#schedule(settleMs);
      if (this.#asked) this.#waiting.push(...readings);
      this.#append(readings);
    });
  }

  #append(readings: readonly Judged[]): void {
    const { trend } = this;
    if (!trend || this.#held?.to !== Number.POSITIVE_INFINITY) return;
    let changed = false;
    for (const judged of readings) changed = appendInPlace(trend, judged, this.#stream().gapMs) || changed;
    if (!changed) return;
    this.#trim(trend, this.#held);
    this.version += 1;
    this.#host.requestUpdate();
  }

  /** A live window moves on: let go of what has left it. */
  #trim(trend: HeldTrend, held: Stretch): void {
    if (!this.#wish) return;
    const spanMs = this.#wish.to - this.#wish.from;
    if (trend.time[0] >= this.#wish.from - spanMs * margin * 2) return;
    held.from = Math.max(held.from, this.#wish.from - spanMs * margin);
    trimInPlace(trend, held.from);
  }

  #serves(stretch: Stretch | undefined, { from, to, points }: TrendWish): boolean {
    if (!stretch || stretch.stream !== this.#stream().id) return false;
    const slack = (to - from) / points;
    if (from < stretch.from - slack || Math.min(to, this.#feed().now()) > stretch.to + slack) return false;
    const fineness = (to - from) / points;
    // Every reading is held: whoever looks closer needs nothing more.
    const tooCoarse = !stretch.whole && stretch.fineness > fineness * 1.5;
    return !tooCoarse && stretch.fineness > fineness / 4;
  }

  /** Asks soon. What is scheduled already stays: a window that is dragged on and on must not put the asking off for ever. */
  #schedule(afterMs: number): void {
    this.#timer ??= setTimeout(() => {
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
    const spanMs = wish.to - wish.from;
    const now = this.#feed().now();
    const from = wish.from - spanMs * margin;
    const to = Math.min(wish.to + spanMs * margin, now);
    const points = Math.min(2000, Math.ceil((wish.points * (to - from)) / spanMs));
    const asked: Stretch = {
      stream: this.#stream().id,
      from,
      to: to >= now ? Number.POSITIVE_INFINITY : to,
      fineness: (to - from) / points,
      whole: false,
    };
    this.#asked = asked;
    this.#askedAt = performance.now();
    this.#waiting = [];
    try {
      const trend = await api.trend(asked.stream, from, to, points, abort.signal);
      this.#asked = undefined;
      this.#held = { ...asked, whole: trend.whole };
      this.trend = held(trend);
      this.error = undefined;
      this.version += 1;
      this.#append(this.#waiting);
    } catch (error) {
      if (abort.signal.aborted) return;
      this.#asked = undefined;
      this.error = error as Error;
      this.#schedule(retryMs);
    }
    this.#waiting = [];
    this.#host.requestUpdate();
  }
}
