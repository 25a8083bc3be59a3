import type { LimitSet } from "../limit-set/index.ts";
import { type LabelledEvent, outcomeOf } from "./outcome.ts";
import type { Rehearsal } from "./rehearse.ts";
import { type LimitOf, type Setting, withSetting } from "./setting.ts";

/** One setting and the values that it is given. */
export interface Sweeping {
  setting: Setting;
  values: number[];
}

/** What one choice of the two settings came to. */
export interface SweepCell {
  /** places in the values of the first and the second setting */
  x: number;
  y: number;
  perDay: number;
  missed: number;
  causeless: number;
  /** mean time to the call for the events that were found, ms; null: none was */
  lateMs: number | null;
}

/** Every choice of two settings (or of one), cell by cell, so that the caller may show progress or stop. */
export function* sweep(
  rehearsal: Rehearsal,
  base: Pick<LimitSet, "statistics" | "alarms">,
  [first, second]: readonly [Sweeping, Sweeping?],
  truth: readonly LabelledEvent[],
  limitOf: LimitOf,
): Generator<SweepCell> {
  for (let x = 0; x < first.values.length; x++) {
    const column = withSetting(base, first.setting, first.values[x], limitOf);
    for (let y = 0; y < (second?.values.length ?? 1); y++) {
      const limits = second ? withSetting(column, second.setting, second.values[y], limitOf) : column;
      const { perDay, missed, causeless, events } = outcomeOf(rehearsal.run(limits), truth);
      yield {
        x,
        y,
        perDay,
        missed,
        causeless: causeless.length,
        lateMs: meanOf(events.flatMap((e) => e.lateMs ?? [])),
      };
    }
  }
}

function meanOf(values: readonly number[]): number | null {
  return values.length === 0 ? null : values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** The cells that no other cell beats: none has both fewer calls a day and fewer missed events. Of equal ones the first. */
export function bestOf(cells: readonly SweepCell[]): SweepCell[] {
  const order = [...cells].sort(
    (a, b) => a.missed - b.missed || a.perDay - b.perDay || (a.lateMs ?? 0) - (b.lateMs ?? 0),
  );
  const best: SweepCell[] = [];
  for (const cell of order) if (best.every(({ perDay }) => cell.perDay < perDay)) best.push(cell);
  return best;
}
