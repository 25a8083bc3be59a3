import type { EngineHealth } from "../../core/messages/index.ts";
import { duration, period } from "../words/duration.ts";

/** What is known about how current a stream's newest reading is. */
export interface FreshnessFacts {
  /** the server's clock as well as we know it, epoch ms */
  now: number;
  linkUp: boolean;
  /** when the link was last heard, on the same clock; null before the first time */
  heardAt: number | null;
  engine: EngineHealth | undefined;
  /** the stream's newest reading: its own time, and when the engine received it; null when there is none yet */
  readingAt: number | null;
  receivedAt: number | null;
  periodMs: number;
}

export type OldBecause = "link lost" | "engine stopped" | "source lost" | "engine behind" | "silent" | "late clock";
export type Freshness =
  | { kind: "none" }
  | { kind: "fresh" }
  | { kind: "old"; because: OldBecause; says: string; asOf: number; ageMs: number };

/** An engine that is further behind than this shows yesterday's truth. */
export const behindAfterMs = 5000;
/** An analyzer whose own time is so far behind the clock at which its reading came. */
const lateClockAfterMs = 60_000;

/** A stream is silent when its next reading is overdue by a quarter of its period, but by 2.5 s at the least: 4.5 s after the last for a period of 2 s. */
export function silentAfterMs(periodMs: number): number {
  return periodMs + Math.max(2500, periodMs / 4);
}

/** May the newest reading be taken for the present? If not: why, and how old it is. The causes are told nearest to the screen first. */
export function freshness(facts: FreshnessFacts): Freshness {
  const { now, engine, readingAt, receivedAt, periodMs } = facts;
  if (readingAt === null || receivedAt === null) return { kind: "none" };
  const ageMs = Math.max(0, now - Math.min(readingAt, receivedAt));
  const old = (because: OldBecause, says: string): Freshness => ({
    kind: "old",
    because,
    says,
    asOf: readingAt,
    ageMs,
  });
  if (!facts.linkUp) return old("link lost", "link to the server lost");
  if (engine && !engine.running) return old("engine stopped", "the engine does not run");
  if (engine && !engine.source) return old("source lost", "the broker is not reached");
  if (engine && engine.behindMs > behindAfterMs) {
    return old("engine behind", `the engine is ${duration(engine.behindMs)} behind`);
  }
  const quietMs = now - receivedAt;
  if (quietMs > silentAfterMs(periodMs)) {
    return old("silent", `silent for ${duration(quietMs)} (a reading is due every ${period(periodMs)})`);
  }
  if (receivedAt - readingAt > lateClockAfterMs) {
    return old("late clock", `readings arrive ${duration(receivedAt - readingAt)} late`);
  }
  return { kind: "fresh" };
}
