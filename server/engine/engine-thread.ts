import { Worker } from "node:worker_threads";
import { MillraceError } from "../../core/errors.ts";
import type { EngineHealth } from "../../core/messages/index.ts";
import type { Log } from "../log.ts";
import type { LoadOutcome, Portion, Told } from "./engine.ts";
import type { Account } from "./meter.ts";
import type { EngineSettings, FromEngine, ToEngine } from "./protocol.ts";
import type { Command, CommandOutcome } from "./turn.ts";

export class EngineError extends MillraceError {
  readonly code = "engine";
}

type Asked<T> = T extends { id: number } ? Omit<T, "id"> : never;

/** The engine in its worker thread, as the rest of the service sees it. */
export class EngineThread {
  readonly #worker: Worker;
  readonly #waiting = new Map<number, { resolve: (outcome: never) => void; reject: (error: Error) => void }>();
  #nextId = 1;
  #stopping = false;
  readonly #exited: Promise<void>;

  /** `on.died`: the thread ended by itself, which it never should. */
  constructor(
    settings: EngineSettings,
    on: {
      ready: (told: Told) => void;
      told: (told: Told) => void;
      health: (health: EngineHealth) => void;
      drained: (n: number) => void;
      account: (account: Account) => void;
      log: Log;
      died: (error: EngineError) => void;
    },
  ) {
    this.#worker = new Worker(new URL("./worker.js", import.meta.url), { workerData: settings });
    let failed: string | undefined;
    this.#worker.on("message", (message: FromEngine) => {
      switch (message.kind) {
        case "ready":
          return on.ready(message.told);
        case "told":
          return on.told(message.told);
        case "health":
          return on.health(message.health);
        case "drained":
          return on.drained(message.n);
        case "log":
          return on.log(message.says, message.level);
        case "account":
          return on.account(message.account);
        case "reply":
          return this.#settle(message.id, message.outcome);
        case "failed":
          failed = message.says;
          return;
        case "stopped":
          return;
        default:
          return message satisfies never;
      }
    });
    this.#worker.on("error", (error) => {
      failed = error.stack ?? error.message;
    });
    this.#exited = new Promise((resolve) => {
      this.#worker.on("exit", () => {
        const error = new EngineError(failed ?? "the engine's thread ended without a word");
        for (const { reject } of this.#waiting.values()) reject(error);
        this.#waiting.clear();
        if (!this.#stopping) on.died(error);
        resolve();
      });
    });
  }

  /** Messages wait in the inbox. */
  inboxFilled(): void {
    this.#post({ kind: "inbox" });
  }

  command(command: Command): Promise<CommandOutcome> {
    return this.#ask<CommandOutcome>({ kind: "command", command });
  }

  /** Opens a load of recorded history; each portion resolves once it is on record. @throws EngineError when the stream has one open. */
  async openLoad(stream: string, periodMs: number): Promise<void> {
    await this.#ask<LoadOutcome>({ kind: "open load", stream, periodMs });
  }

  load(stream: string, portion: Portion, share: number): Promise<LoadOutcome> {
    return this.#ask<LoadOutcome>({ kind: "load", stream, portion, share });
  }

  closeLoad(stream: string): Promise<LoadOutcome> {
    return this.#ask<LoadOutcome>({ kind: "close load", stream });
  }

  async stop(): Promise<void> {
    this.#stopping = true;
    this.#post({ kind: "stop" });
    await this.#exited;
  }

  #ask<Outcome>(asked: Asked<ToEngine>): Promise<Outcome> {
    const id = this.#nextId++;
    return new Promise<Outcome>((resolve, reject) => {
      this.#waiting.set(id, { resolve: resolve as (outcome: never) => void, reject });
      this.#post({ ...asked, id } as ToEngine);
    });
  }

  #settle(id: number, outcome: object): void {
    const waiting = this.#waiting.get(id);
    this.#waiting.delete(id);
    if ("failed" in outcome) waiting?.reject(new EngineError(String(outcome.failed)));
    else waiting?.resolve(outcome as never);
  }

  #post(message: ToEngine): void {
    this.#worker.postMessage(message);
  }
}
