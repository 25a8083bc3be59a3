import type { Verdict } from "../../core/messages/index.ts";
import type { PlantStreamId } from "../plant/index.ts";
import { type EventKind, kindOf, type PlantEvent, settleMs, type TruthLabel } from "./event.ts";
import { type Grid, sequenceFrom, timeOf } from "./grid.ts";
import { type ProcessState, processStateAt } from "./process-state.ts";

/** What truly happened to a stream, for whoever judges the judging. */
export interface Truth {
  format: "millrace-truth";
  formatVersion: 1;
  seed: number;
  /** epoch ms */
  from: number;
  to: number;
  periodMs: number;
  events: {
    stream: PlantStreamId;
    kind: EventKind;
    /** epoch ms; a bubble's start and end are those of the one reading that it spoils */
    start: number;
    end: number;
    /** when nothing of it is left in the readings */
    settled: number;
    size: number;
    label: TruthLabel;
    verdicts: readonly Verdict[];
    annunciates: boolean;
    says: string;
  }[];
  /** changes of the process state, and the state at the start of the stretch, in order of time */
  states: ({ stream: PlantStreamId; time: number } & ProcessState)[];
}

export function truthOf(
  events: readonly PlantEvent[],
  streams: readonly PlantStreamId[],
  { seed, from, to, periodMs }: { seed: number; from: number; to: number } & Grid,
): Truth {
  const ours = events.filter(({ stream }) => streams.includes(stream));
  return {
    format: "millrace-truth",
    formatVersion: 1,
    seed,
    from,
    to,
    periodMs,
    events: ours.map((event) => {
      const { label, verdicts, annunciates, says } = kindOf[event.kind];
      const spoilt = timeOf({ periodMs }, event.stream, sequenceFrom({ periodMs }, event.stream, event.start));
      const [start, end] = event.kind === "bubble" ? [spoilt, spoilt] : [event.start, event.end];
      const { stream, kind, size } = event;
      return { stream, kind, start, end, settled: end + settleMs(event), size, label, verdicts, annunciates, says };
    }),
    states: streams.flatMap((stream) => statesOf(ours, stream, from, to)).sort((a, b) => a.time - b.time),
  };
}

function statesOf(events: readonly PlantEvent[], stream: PlantStreamId, from: number, to: number): Truth["states"] {
  const moments = events
    .filter((event) => event.stream === stream && (event.kind === "cleaning" || event.kind === "grade-change"))
    .flatMap(({ start, end }) => [start, end])
    .filter((time) => time > from && time < to);
  return [...new Set([from, ...moments])]
    .sort((a, b) => a - b)
    .map((time) => ({ stream, time, ...processStateAt(events, stream, time) }));
}
