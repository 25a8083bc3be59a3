import type { AlarmRule, LimitSet } from "../limit-set/index.ts";
import { type Coverage, coverage } from "./coverage.ts";
import { type AlarmOutcome, alarmOutcome } from "./outcome.ts";
import { type Activation, type Periods, replayAlarm } from "./replay-alarm.ts";
import type { RecordedStretch } from "./stretch.ts";
import { type Trust, trustOf } from "./trust.ts";

/** One alarm of a limit set over a stretch. */
export interface RehearsedAlarm {
  rule: AlarmRule;
  /** in the order of time */
  activations: readonly Activation[];
  outcome: AlarmOutcome;
}

/** What a limit set would have done over a stretch. */
export interface Rehearsed {
  alarms: RehearsedAlarm[];
  covered: Coverage;
  /** of each statistic, how many usable readings lay beyond its limit; `inside`: how many passed all tests */
  readings: { usable: number; inside: number; t2: number; q: number; nearest: number };
}

/** Which limits of statistics an alarm's condition rests on. */
function restsOn({ watches, untrusted }: AlarmRule): (keyof LimitSet["statistics"])[] {
  switch (watches.kind) {
    case "property":
      return untrusted === "evaluate" ? [] : ["t2", "q", "nearest"];
    case "extrapolated":
      return ["t2"];
    case "unfamiliar":
    case "drifting":
      return ["q"];
    case "sparse":
      return ["nearest"];
    default:
      return [];
  }
}

/**
 * Runs limit sets over one stretch. What does not change from one to the next is done once: a sweep over two settings mostly replays one or
 * two alarms.
 */
export class Rehearsal {
  readonly stretch: RecordedStretch;
  readonly periods: Periods;
  readonly #covered: Coverage;
  readonly #replayed = new Map<string, RehearsedAlarm>();
  #trust: { key: string; trust: Trust; readings: Rehearsed["readings"] } | undefined;

  constructor(stretch: RecordedStretch, periods: Periods) {
    this.stretch = stretch;
    this.periods = periods;
    this.#covered = coverage(stretch);
  }

  run({ statistics, alarms }: Pick<LimitSet, "statistics" | "alarms">): Rehearsed {
    const { trust, readings } = this.#trustBy(statistics);
    const replayed = alarms.map((rule) => {
      const key = JSON.stringify([rule, restsOn(rule).map((name) => statistics[name].limit)]);
      const known = this.#replayed.get(key);
      if (known) return known;
      const activations = replayAlarm(this.stretch, rule, trust, this.periods);
      const alarm = { rule, activations, outcome: alarmOutcome(this.stretch.stream, rule, activations, this.#covered) };
      this.#replayed.set(key, alarm);
      return alarm;
    });
    return { alarms: replayed, covered: this.#covered, readings };
  }

  #trustBy(statistics: LimitSet["statistics"]) {
    const key = JSON.stringify([statistics.t2.limit, statistics.q.limit, statistics.nearest.limit]);
    if (this.#trust?.key !== key) {
      const trust = trustOf(this.stretch, statistics);
      this.#trust = { key, trust, readings: countBeyond(this.stretch, trust) };
    }
    return this.#trust;
  }
}

function countBeyond({ t2, q, nearest }: RecordedStretch, trust: Trust): Rehearsed["readings"] {
  const count = { usable: 0, inside: 0, t2: 0, q: 0, nearest: 0 };
  for (let i = 0; i < t2.length; i++) {
    if (Number.isNaN(t2[i])) continue;
    count.usable++;
    count.inside += trust.inside[i];
    if (t2[i] > trust.t2) count.t2++;
    if (q[i] > trust.q) count.q++;
    if (nearest[i] > trust.nearest) count.nearest++;
  }
  return count;
}

/** The spacing of the readings that were live, and of those that were loaded, ms: the median of their distances. */
export function periodsOf({ time, history }: RecordedStretch, livePeriodMs: number): Periods {
  const spacing: number[] = [];
  for (let i = 1; i < time.length && spacing.length < 10_000; i++) {
    if (history[i] === 1 && history[i - 1] === 1) spacing.push(time[i] - time[i - 1]);
  }
  spacing.sort((a, b) => a - b);
  return { live: livePeriodMs, history: spacing[spacing.length >> 1] ?? livePeriodMs };
}
