import type { EngineHealth } from "../../core/messages/index.ts";
import { behindAfterMs } from "../data/freshness.ts";
import { duration } from "../words/duration.ts";
import { counted, percent } from "../words/quantity.ts";

export interface ServiceFacts {
  now: number;
  linkUp: boolean;
  everUp: boolean;
  heardAt: number | null;
  clockOffsetMs: number;
  engine: EngineHealth | undefined;
  refused: string | undefined;
}

export interface Notice {
  /** the same for as long as the same thing is wrong, while the words count on */
  key: string;
  /** "trouble" stands above everything; "news" is quiet */
  weight: "trouble" | "news";
  says: string;
}

/** A clock that is off by more than this makes ages on the screens wrong. */
export const clockOffAfterMs = 5000;

/** What every screen must say of the service itself, most grave first. Empty when all is well. */
export function notices(facts: ServiceFacts): Notice[] {
  const { engine, now } = facts;
  const said: Notice[] = [];
  const trouble = (key: string, says: string) => said.push({ key, weight: "trouble", says });
  if (facts.refused) trouble("refused", `The server refuses the live link: ${facts.refused}`);
  if (!facts.linkUp) {
    trouble(
      facts.everUp ? "link lost" : "connecting",
      facts.everUp && facts.heardAt !== null
        ? `Link to the server lost ${duration(now - facts.heardAt)} ago. Everything shown is old. It is tried again by itself; if it stays lost, use the local panel and call plant IT.`
        : "Connecting to the server …",
    );
  } else if (engine) {
    if (engine.trouble) trouble("engine", engine.trouble);
    if (!engine.running) {
      trouble(
        "engine stopped",
        "The engine does not run: no reading is judged and no alarm can come. Call plant IT; watch the process by other means.",
      );
    } else if (!engine.source) {
      trouble(
        "source lost",
        "The broker is not reached: no readings can arrive. Call plant IT; watch the process by other means.",
      );
    } else if (engine.behindMs > behindAfterMs) {
      trouble(
        "engine behind",
        `The engine is ${duration(engine.behindMs)} behind: ${counted(engine.waiting, "reading")} wait to be judged. Numbers and alarms are late by as much.`,
      );
    }
  }
  if (facts.linkUp && Math.abs(facts.clockOffsetMs) > clockOffAfterMs) {
    const way = facts.clockOffsetMs > 0 ? "behind" : "ahead of";
    trouble(
      "clock off",
      `This computer's clock is ${duration(Math.abs(facts.clockOffsetMs))} ${way} the server's. Times and ages here follow the server's clock.`,
    );
  }
  if (facts.linkUp && engine?.loading) {
    const { stream, share, done } = engine.loading;
    said.push({
      key: "loading",
      weight: "news",
      says: `Recorded history of ${stream} is being judged: ${percent(share)}, ${counted(done, "reading")} so far. Older stretches of the trends fill up.`,
    });
  }
  return said;
}
