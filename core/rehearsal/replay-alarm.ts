import {
  type AlarmEvent,
  type AlarmRecord,
  type AlarmState,
  advance,
  afterGap,
  type DetectorState,
  detectInPlace,
  isSetAside,
  restingDetector,
} from "../alarms/index.ts";
import { lifecycleRules, suppressionEvent } from "../judging/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import { conditionOver } from "./condition-over.ts";
import { cutOut, noGap, type RecordedStretch } from "./stretch.ts";
import type { Trust } from "./trust.ts";

/** Expected time between two readings, live and of loaded history, ms. */
export interface Periods {
  live: number;
  history: number;
}

/** Once an alarm's condition held, after its delays. Process time, epoch ms. */
export interface Activation {
  key: string;
  /** the condition began to hold */
  since: number;
  raisedAt: number;
  /** absent: it held until the stretch ended */
  clearedAt?: number;
  /** when somebody was called for it: once, unless it was suppressed by design; never, if it was until it cleared */
  annunciatedAt?: number;
}

/**
 * One alarm over a stretch of the record, by the very detectors and lifecycle that judge live readings: the same raises and clears at the
 * same times. People are not replayed: nobody shelves, and whoever is called acknowledges as soon as the condition has gone, so that
 * nothing stays latched.
 *
 * "silent" is raised when the next reading comes later than it may; live, a clock tick raises it up to half a second later or, within that
 * half second, not at all.
 */
export function replayAlarm(stretch: RecordedStretch, rule: AlarmRule, trust: Trust, periods: Periods): Activation[] {
  return new Replay(stretch, rule, periods).run(trust);
}

class Replay {
  readonly #stretch: RecordedStretch;
  readonly #rule: AlarmRule;
  readonly #periods: Periods;
  readonly #activations: Activation[] = [];
  #detector: DetectorState = fresh();
  #alarm: AlarmState | undefined;
  #nextState = 0;

  constructor(stretch: RecordedStretch, rule: AlarmRule, periods: Periods) {
    this.#stretch = stretch;
    this.#rule = rule;
    this.#periods = periods;
  }

  run(trust: Trust): Activation[] {
    const { time, gap, history, processStates } = this.#stretch;
    const rule = this.#rule;
    const over = conditionOver(rule, this.#stretch, trust);
    const silentPeriods = rule.watches.kind === "silent" ? rule.watches.periods : undefined;
    // Loads come before the live record: there is one border at most.
    const border = history.lastIndexOf(1) + 1;
    const hasStates = processStates.length > 0;
    const { length } = time;
    for (let i = 0; i < length; i++) {
      const at = time[i];
      const begins = i === border && i > 0;
      if (begins) this.#endOfHistory(time[i - 1]);
      if (hasStates) this.#processUntil(at);
      if (silentPeriods !== undefined && i > 0 && !begins) this.#silence(i, silentPeriods);
      if (gap[i] !== noGap || begins) {
        this.#detector = afterGap(this.#detector);
        over.reset();
      }
      const signal = detectInPlace(this.#detector, over.at(i), at, rule);
      if (signal === "none") continue;
      if (signal === "raise") this.#raise(this.#detector.beyondSince ?? at, at);
      else this.#event({ kind: "clear", at });
    }
    return this.#activations;
  }

  /** What the plant said of the line up to then, and what comes of the time that has passed since. */
  #processUntil(at: number): void {
    const { processStates } = this.#stretch;
    while (this.#nextState < processStates.length && processStates[this.#nextState].since <= at) {
      this.#event(suppressionEvent(this.#rule, processStates[this.#nextState++]));
    }
    if (this.#alarm?.suppressed?.until !== undefined) this.#event({ kind: "process time", at });
  }

  /** What the history left open ends with it; the live record began with a state of its own. */
  #endOfHistory(at: number): void {
    const last = this.#activations.at(-1);
    if (this.#alarm?.active && last) last.clearedAt ??= at;
    this.#detector = fresh();
    this.#alarm = undefined;
    this.#nextState = 0;
  }

  #silence(i: number, silentPeriods: number): void {
    const { received, gap, history } = this.#stretch;
    if (gap[i] === cutOut || this.#detector.active) return;
    const period = history[i] === 1 ? this.#periods.history : this.#periods.live;
    const lastHeard = received[i - 1];
    const dueAt = lastHeard + silentPeriods * period;
    if (received[i] < dueAt) return;
    this.#detector = { ...fresh(), active: true };
    this.#raise(lastHeard, dueAt);
  }

  #raise(since: number, at: number): void {
    this.#activations.push({ key: this.#rule.key, since, raisedAt: at });
    // Words and version belong to the record, not to what a rehearsal counts.
    this.#event({ kind: "raise", at, since, says: "", limitSet: 0 });
  }

  #event(event: AlarmEvent): void {
    const [after, records] = advance(this.#alarm, event, lifecycleRules(this.#rule));
    for (const record of records) this.#note(record);
    // Nobody is asked for anything once the condition has gone.
    this.#alarm = after && !after.active && !isSetAside(after) ? undefined : after;
  }

  #note({ kind, at }: AlarmRecord): void {
    const last = this.#activations.at(-1);
    if (!last) return;
    if (kind === "raised" || kind === "raised again" || kind === "annunciated anew") last.annunciatedAt ??= at;
    else if (kind === "cleared" || kind === "cleared unannounced") last.clearedAt = at;
  }
}

function fresh(): DetectorState {
  return { ...restingDetector, recent: [] };
}
