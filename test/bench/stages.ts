import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { resultOf } from "../../core/messages/index.ts";
import { openInboxForWriting } from "../../server/broker/inbox-store.ts";
import { decodeReading } from "../../server/engine/decode.ts";
import { readyStream } from "../../server/engine/streams.ts";
import { topicsOf } from "../../server/engine/topics.ts";
import { type Context, type Input, takeTurn } from "../../server/engine/turn.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { BenchResult } from "./bench-result.ts";
import { benchModel } from "./plant.ts";
import { payloads } from "./publisher.ts";

const perTurn = 100;
const turns = 40;

/** Where the time of a reading goes, stage by stage, in this process and without the network: µs a reading, over turns of 100. */
export function timeByStage(): BenchResult[] {
  const folder = mkdtempSync(join(tmpdir(), "millrace-stages-"));
  const model = join(folder, "bench.model.json");
  writeFileSync(model, JSON.stringify(benchModel()));
  const store = sqliteWriter(join(folder, "record.db"));
  const inbox = openInboxForWriting(join(folder, "inbox.db"));
  const insert = inbox.prepare("INSERT INTO message (topic, received, payload) VALUES (?, ?, ?)");
  const remove = inbox.prepare("DELETE FROM message WHERE n <= ?");
  const id = "s-0";
  const topic = `millrace/bench/${id}/reading`;
  let now: Parameters<typeof takeTurn>[1] = {
    streams: new Map([[id, readyStream({ id, name: id, model, periodMs: 86_400_000 }, store, Date.now())]]),
    cursor: 0,
  };
  const unasked = () => {
    throw new Error("a reading that is newer than all others needs nothing of the record");
  };
  const context: Context = {
    topics: topicsOf("millrace", "bench"),
    approval: false,
    isRecorded: unasked,
    excursion: unasked,
    handover: { book: unasked, checks: unasked } as never,
    readingsBetween: unasked,
    labResult: unasked,
  };
  const payload = payloads();
  const spent = { inbox: 0, decode: 0, turn: 0, commit: 0, result: 0 };
  let time = Date.now() - 3_600_000;
  let read = 0;
  for (let t = 0; t < turns; t++) {
    const messages = Array.from({ length: perTurn }, () => ({
      topic,
      payload: payload(time++),
      receivedAt: Date.now(),
    }));
    spent.inbox += timed(() =>
      inbox.transaction(() => {
        for (const message of messages) insert.run(message.topic, message.receivedAt, message.payload);
        remove.run(t * perTurn);
      })(),
    );
    spent.decode += timed(() => {
      for (const message of messages) if (decodeReading(message.payload).kind === "reading") read++;
    });
    const inputs = messages.map((message): Input => ({ kind: "message", message }));
    let turn = takeTurn([], now, context);
    spent.turn += timed(() => {
      turn = takeTurn(inputs, now, context);
    });
    spent.commit += timed(() => store.commit(turn.changes));
    spent.result += timed(() => {
      for (const judged of turn.judged) JSON.stringify(resultOf(judged));
    });
    if (turn.judged.length !== perTurn) throw new Error(`${turn.judged.length} of ${perTurn} readings were judged`);
    now = turn;
  }
  store.close();
  inbox.close();
  rmSync(folder, { recursive: true });
  if (read !== perTurn * turns) throw new Error(`${read} of ${perTurn * turns} payloads were readings`);
  const each = (name: string, ms: number): BenchResult => ({
    name,
    value: (1000 * ms) / (perTurn * turns),
    unit: "µs",
  });
  return [
    each("  of a reading: kept in the inbox", spent.inbox),
    each("  of a reading: decoded", spent.decode),
    each("  of a reading: scored, judged, alarms", spent.turn - spent.decode),
    each("  of a reading: committed to the record", spent.commit),
    each("  of a reading: its result as JSON", spent.result),
  ];
}

function timed(deed: () => void): number {
  const began = performance.now();
  deed();
  return performance.now() - began;
}
