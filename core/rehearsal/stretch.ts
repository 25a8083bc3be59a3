import type { ProcessState } from "../messages/index.ts";

/**
 * A stretch of a stream's record as columns: n readings in the order of their times, which is the order in which alarms saw them. Statistics
 * rather than ratios, so that other limits can be laid to them.
 */
export interface RecordedStretch {
  stream: string;
  /** process time and time of receipt, epoch ms */
  time: Float64Array;
  received: Float64Array;
  /** T² and nearest: no unit; Q: unit of the stepped spectrum, squared. NaN: the reading was unusable */
  t2: Float64Array;
  q: Float64Array;
  nearest: Float64Array;
  /** {@link usable}, {@link unusable} or {@link frozen} */
  usability: Uint8Array;
  /** what lies before this reading: {@link noGap}, {@link dataGap} or {@link cutOut} */
  gap: Uint8Array;
  /** 1: brought in by a load, with the spacing of the history and a state of judging of its own */
  history: Uint8Array;
  /** predicted values, unit of the property; NaN where there is none */
  properties: Map<string, Float64Array>;
  /** identities of the models that scored these readings, in the order of their first */
  models: string[];
  /** what the plant said of the line, in the order of time */
  processStates: ProcessState[];
}

export const noGap = 0;
/** nobody knows what happened in it, and the stream was silent */
export const dataGap = 1;
/** a person left out what was there */
export const cutOut = 2;

export const usable = 0;
export const unusable = 1;
export const frozen = 2;

/** From `from` up to, but without, `to`, epoch ms. */
export interface Span {
  from: number;
  to: number;
}

/**
 * The stretch without what a person cut out: start-up, cleaning. Where a cut was, the data have a gap, as alarms see it.
 *
 * @param cuts may overlap, in any order
 */
export function withoutCuts(stretch: RecordedStretch, cuts: readonly Span[]): RecordedStretch {
  if (cuts.length === 0) return stretch;
  const isCut = (time: number) => cuts.some(({ from, to }) => from <= time && time < to);
  const kept: number[] = [];
  const gaps: number[] = [];
  let before = noGap;
  stretch.time.forEach((time, i) => {
    before = Math.max(before, stretch.gap[i]);
    if (isCut(time)) {
      before = cutOut;
      return;
    }
    kept.push(i);
    gaps.push(before);
    before = noGap;
  });
  const pick = (column: Float64Array) => Float64Array.from(kept, (i) => column[i]);
  const pickFlags = (column: Uint8Array) => Uint8Array.from(kept, (i) => column[i]);
  const { stream, models, processStates } = stretch;
  return {
    ...{ stream, models, processStates },
    time: pick(stretch.time),
    received: pick(stretch.received),
    t2: pick(stretch.t2),
    q: pick(stretch.q),
    nearest: pick(stretch.nearest),
    usability: pickFlags(stretch.usability),
    gap: Uint8Array.from(gaps),
    history: pickFlags(stretch.history),
    properties: new Map([...stretch.properties].map(([name, values]) => [name, pick(values)])),
  };
}

/** When the process was in one of these states, between `from` and `to`. */
export function spansOfStates(
  { processStates }: Pick<RecordedStretch, "processStates">,
  states: readonly string[],
  { from, to }: Span,
): Span[] {
  return processStates.flatMap(({ state, since }, i): Span[] => {
    const until = processStates[i + 1]?.since ?? to;
    const span = { from: Math.max(since, from), to: Math.min(until, to) };
    return states.includes(state) && span.from < span.to ? [span] : [];
  });
}
