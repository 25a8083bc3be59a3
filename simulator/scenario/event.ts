import type { Verdict } from "../../core/messages/index.ts";
import type { PlantStreamId } from "../plant/index.ts";

export const eventKinds = [
  "co-solvent",
  "beyond-range",
  "fouling",
  "lamp-ageing",
  "temperature-swing",
  "bubble",
  "silent",
  "frozen",
  "grade-change",
  "cleaning",
  "lab-bias",
] as const;
export type EventKind = (typeof eventKinds)[number];

/** Something that happens to one line of the plant, or to its analyzer, at a known time. */
export interface PlantEvent {
  kind: EventKind;
  stream: PlantStreamId;
  /** epoch ms; a bubble spoils the first reading at or after its start */
  start: number;
  /** epoch ms: when the cause goes. What it did dies away within `settleMs` after. */
  end: number;
  /** 1: the stream's own usual size of such an event */
  size: number;
}

/** The words an excursion can be labelled with; a fault of the laboratory makes none. */
export type TruthLabel = "process change" | "analyzer fault" | "cleaning" | "false" | "laboratory fault";

interface KindOfEvent {
  label: TruthLabel;
  /** what the event is, to complete "bq-305: …" */
  says: string;
  /** what the readings should be judged at its height; empty where there are none */
  verdicts: readonly Verdict[];
  /** should a person be called? */
  annunciates: boolean;
  /** how the cause reaches the readings */
  course: "lagged" | "growing" | "single" | "readings" | "laboratory";
}

export const kindOf: Record<EventKind, KindOfEvent> = {
  "co-solvent": {
    label: "process change",
    says: "a co-solvent that no calibration sample held (acetone) comes with the feed",
    verdicts: ["unfamiliar"],
    annunciates: true,
    course: "lagged",
  },
  "beyond-range": {
    label: "process change",
    says: "the feed carries more of a known ingredient than any calibration sample",
    verdicts: ["extrapolated", "sparse"],
    annunciates: true,
    course: "lagged",
  },
  fouling: {
    label: "analyzer fault",
    says: "resin grows on the probe's window",
    verdicts: ["unfamiliar"],
    annunciates: true,
    course: "growing",
  },
  "lamp-ageing": {
    label: "analyzer fault",
    says: "the lamp of the analyzer wears out",
    verdicts: ["unfamiliar"],
    annunciates: true,
    course: "growing",
  },
  "temperature-swing": {
    label: "process change",
    says: "the line runs hotter than any calibration sample",
    verdicts: ["unfamiliar", "extrapolated"],
    annunciates: true,
    course: "lagged",
  },
  bubble: {
    label: "false",
    says: "a bubble before the probe spoils one spectrum",
    verdicts: ["unfamiliar"],
    annunciates: false,
    course: "single",
  },
  silent: {
    label: "analyzer fault",
    says: "the analyzer sends nothing",
    verdicts: [],
    annunciates: true,
    course: "readings",
  },
  frozen: {
    label: "analyzer fault",
    says: "the analyzer sends the same spectrum again and again",
    verdicts: ["unusable"],
    annunciates: true,
    course: "readings",
  },
  "grade-change": {
    label: "process change",
    says: "another grade is made, inside the calibration",
    verdicts: ["inside"],
    annunciates: false,
    course: "lagged",
  },
  cleaning: {
    label: "cleaning",
    says: "the line is washed",
    verdicts: ["unfamiliar", "extrapolated"],
    annunciates: false,
    course: "lagged",
  },
  "lab-bias": {
    label: "laboratory fault",
    says: "a reagent of the laboratory has aged: its water results come out low",
    verdicts: ["inside"],
    annunciates: true,
    course: "laboratory",
  },
};

/** Does it happen to the line or to its analyzer? The laboratory is a place of its own. */
export function isOfTheLine({ kind }: PlantEvent): boolean {
  return kindOf[kind].course !== "laboratory";
}

const mostLagMs = 6 * 60_000;

/** Time constant with which an event reaches the probe and leaves it again: a line has a volume. Short events have short lags, or nobody would see them. */
export function lagMs({ start, end }: PlantEvent): number {
  return Math.min(mostLagMs, (end - start) / 12);
}

/** After this long past its end nothing of the event is left that an analyzer could see (e⁻⁸ of it). */
export function settleMs(event: PlantEvent): number {
  return kindOf[event.kind].course === "lagged" ? 8 * lagMs(event) : 0;
}
