import type { EngineHealth } from "../../core/messages/index.ts";
import type { PlantConfig } from "../config/plant-config.ts";
import type { LogLevel } from "../log.ts";
import type { LoadOutcome, Portion, Told } from "./engine.ts";
import type { Account } from "./meter.ts";
import type { Command, CommandOutcome } from "./turn.ts";

/** What crosses between the engine's thread and the rest. Plain data only, so that the engine can stand in a process of its own one day. */
export type ToEngine =
  | { kind: "inbox" }
  | { kind: "command"; id: number; command: Command }
  | { kind: "open load"; id: number; stream: string; periodMs: number }
  | { kind: "load"; id: number; stream: string; portion: Portion; share: number }
  | { kind: "close load"; id: number; stream: string }
  | { kind: "stop" };

export type FromEngine =
  | { kind: "ready"; told: Told }
  | { kind: "told"; told: Told }
  | { kind: "health"; health: EngineHealth }
  | { kind: "drained"; n: number }
  | { kind: "reply"; id: number; outcome: CommandOutcome | LoadOutcome | { failed: string } }
  | { kind: "account"; account: Account }
  | { kind: "log"; says: string; level?: LogLevel }
  | { kind: "failed"; says: string }
  | { kind: "stopped" };

export interface EngineSettings {
  config: PlantConfig;
  recordFile: string;
  /** with the embedded broker: its inbox; readings come from there */
  inboxFile?: string;
  /** where results are published, and readings come from when there is no inbox */
  brokerUrl: string;
  /** how the engine signs in at the service's own broker */
  brokerSecret?: { username: string; password: string };
}
