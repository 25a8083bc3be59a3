import type Database from "better-sqlite3";
import { AccountBuilder, isOneSided, type Run, type WantedProperty } from "../../../core/handover/index.ts";
import { onlyInside, type StreamAccount, verdictsOfMask, worstOfMask } from "../../../core/messages/index.ts";
import { rollupLevels } from "./rollup.ts";
import { Summary } from "./summary.ts";

type ReadingRow = [time: number, verdict: number, numbers: Buffer, model: number | null, gapFrom: number | null];
type RollupRow = [
  start: number,
  first: number,
  last: number,
  count: number,
  verdict: number,
  numbers: Buffer,
  model: number,
];
type ModelOf = (k: number | null) => { properties: string[] } | undefined;

/** From the coarsest stretches down; readings are walked only where the finest of them is of two kinds. */
const levels = [...rollupLevels].sort((a, b) => b - a);

/**
 * A stream's time between two moments, reading by reading in what it says, but from the roll-ups wherever one of them is of one kind
 * throughout: one verdict, no gap, and its values on one side of the target's edges.
 */
export function accountQuery(db: Database.Database, modelOf: ModelOf) {
  const readings = db
    .prepare<[number, number, number], ReadingRow>(
      "SELECT time, verdict, properties, model, gap_from FROM reading WHERE stream = ? AND time >= ? AND time < ? ORDER BY time, sequence",
    )
    .raw();
  const rollups = db
    .prepare<[number, number, number, number], RollupRow>(
      "SELECT start, first, last, count, verdict, numbers, model FROM rollup WHERE stream = ? AND level = ? AND start >= ? AND start < ? ORDER BY start, first",
    )
    .raw();
  const gapEnds = db
    .prepare<[number, number, number], number>(
      "SELECT time FROM reading WHERE stream = ? AND time >= ? AND time < ? AND gap_from IS NOT NULL ORDER BY time",
    )
    .pluck();
  const before = db
    .prepare<[number, number], ReadingRow>(
      "SELECT time, verdict, properties, model, gap_from FROM reading WHERE stream = ? AND time < ? ORDER BY time DESC, sequence DESC LIMIT 1",
    )
    .raw();
  const after = db
    .prepare<[number, number], [time: number, gapFrom: number | null]>(
      "SELECT time, gap_from FROM reading WHERE stream = ? AND time >= ? ORDER BY time, sequence LIMIT 1",
    )
    .raw();

  function account(
    stream: number,
    wanted: readonly WantedProperty[],
    from: number,
    to: number,
    gapMs: number,
  ): StreamAccount {
    const builder = new AccountBuilder(wanted, from);
    const ends = gapEnds.all(stream, from, to);
    const endsIn = (since: number, until: number) => ends.some((time) => since < time && time <= until);
    const atEnd = new Set(ends);
    const runOf = runMaker(wanted, modelOf);
    let last: number | undefined;

    const previous = before.get(stream, from);
    const next = after.get(stream, from);
    if (previous && next && next[1] === null) {
      const { verdict, values } = runOf.reading(previous);
      builder.hold(verdict, values);
    }
    walk(from, to, 0);
    return builder.finish(to, heldUntil());

    /** Goes through `since`–`until` by stretches of a level, what they do not cover whole by those of the next, and by readings last. */
    function walk(since: number, until: number, depth: number): void {
      if (since >= until) return;
      if (depth === levels.length) {
        for (const row of readings.all(stream, since, until)) take(runOf.reading(row));
        return;
      }
      const width = levels[depth];
      const head = Math.ceil(since / width) * width;
      const tail = Math.floor(until / width) * width;
      if (head >= tail) {
        walk(since, until, depth + 1);
        return;
      }
      walk(since, head, depth + 1);
      // Neighbours that are of two kinds go down together: a stream that hovers about a limit is then read in one go.
      let mixed: [since: number, until: number] | undefined;
      const goDown = () => {
        if (mixed) walk(...mixed, depth + 1);
        mixed = undefined;
      };
      for (const stretch of byStart(rollups.all(stream, width, head, tail))) {
        const [start] = stretch[0];
        const run = stretch.length === 1 ? runOf.stretch(stretch[0]) : undefined;
        if (run && !endsIn(run.first, run.last)) {
          goDown();
          take(run);
        } else mixed = [mixed?.[0] ?? start, start + width];
      }
      goDown();
      walk(tail, until, depth + 1);
    }
    function take(run: Run): void {
      builder.add(run, atEnd.has(run.first));
      last = run.last;
    }
    /** The last reading stands until the next one, unless a gap is on record between them; where there is none yet, until one would be a gap. */
    function heldUntil(): number {
      const following = after.get(stream, to);
      if (following) return following[1] === null ? to : from;
      const newest = last ?? previous?.[0];
      return newest === undefined ? from : newest + gapMs;
    }
  }
  // One transaction: a commit between the statements would be counted in one and missed in another.
  return db.transaction(account);
}

/** Makes runs of rows, as far as they are of one kind. */
function runMaker(wanted: readonly WantedProperty[], modelOf: ModelOf) {
  const places = new Map<number | null, readonly number[]>();
  const placesOf = (model: number | null): readonly number[] => {
    const known = places.get(model);
    if (known) return known;
    const names = modelOf(model)?.properties ?? [];
    const found = wanted.map(({ name }) => names.indexOf(name));
    places.set(model, found);
    return found;
  };
  return {
    reading([time, mask, numbers, model]: ReadingRow): Run {
      const verdict = worstOfMask(mask) ?? "unusable";
      const values = placesOf(model).map((place) => {
        const value = place < 0 || verdict !== "inside" ? Number.NaN : numbers.readDoubleLE(16 * place);
        return Number.isNaN(value) ? undefined : { n: 1, sum: value, min: value, max: value };
      });
      return { first: time, last: time, readings: 1, verdict, values };
    },
    /** undefined: it is of two kinds */
    stretch([, first, last, count, mask, numbers, model]: RollupRow): Run | undefined {
      const held = verdictsOfMask(mask);
      if (held.length !== 1) return undefined;
      if (!onlyInside(mask))
        return { first, last, readings: count, verdict: held[0], values: wanted.map(() => undefined) };
      const summary = new Summary(wanted.length);
      summary.addStretch({ count, verdict: mask, first, last, numbers }, placesOf(model));
      const values = summary.values.map(({ n, sum, min, max }) => (n > 0 ? { n, sum, min, max } : undefined));
      const whole = values.every((each, i) => !each || (each.n === count && isOneSided(each, wanted[i].target)));
      return whole ? { first, last, readings: count, verdict: "inside", values } : undefined;
    },
  };
}

/** Rows of one start together: where a model was changed within the stretch there are several. */
function byStart(rows: readonly RollupRow[]): RollupRow[][] {
  const groups: RollupRow[][] = [];
  for (const row of rows) {
    const last = groups.at(-1);
    if (last?.[0][0] === row[0]) last.push(row);
    else groups.push([row]);
  }
  return groups;
}
