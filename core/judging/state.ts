import type { RememberedPair } from "../agreement/index.ts";
import type { AlarmState, DetectorState, Drift, OpenExcursion } from "../alarms/index.ts";
import type { Proposals } from "../limit-set/index.ts";
import type { Judged, ProcessState, Verdict } from "../messages/index.ts";
import type { Numbering } from "./sequence-gap.ts";

/**
 * All that judging remembers of one stream: plain data, kept in the store with every commit, so that a restart goes on where the record
 * ends. Live readings and every load of history have one each.
 */
export interface StreamState {
  /** identity of the newest judged reading, and when it was received (wall clock, epoch ms) */
  latest: Judged | null;
  receivedAt: number | null;
  lastInside: Judged | null;
  /** since when the worst verdict has been what it is, process time */
  verdict: Verdict | null;
  verdictSince: number | null;
  /** the newest spectrum's fingerprint and how often in a row it came */
  fingerprint: string;
  same: number;
  /** how its readings are numbered; absent in what was remembered before this was followed */
  numbering?: Numbering;
  /** of the last readings, which were unusable (1 or 0), oldest first */
  unusable: number[];
  /** what the plant said last of the line; null while it has said nothing */
  process: ProcessState | null;
  /** of the alarms on drift */
  drifts: Record<string, Drift>;
  detectors: Record<string, DetectorState>;
  alarms: Record<string, AlarmState>;
  excursions: Record<string, OpenExcursion>;
  /** by property: the newest pairs with the laboratory that count, in order of sample time */
  laboratory: Record<string, RememberedPair[]>;
  /** limit sets that wait for another person's approval */
  proposals: Proposals;
}

export const freshState: StreamState = {
  latest: null,
  receivedAt: null,
  lastInside: null,
  verdict: null,
  verdictSince: null,
  fingerprint: "",
  same: 0,
  unusable: [],
  process: null,
  drifts: {},
  detectors: {},
  alarms: {},
  excursions: {},
  laboratory: {},
  proposals: { waiting: [], last: 0 },
};
