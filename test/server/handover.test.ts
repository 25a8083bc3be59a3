import { createHash } from "node:crypto";
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import Database from "better-sqlite3";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { BoundRecord, HandoverShifts, Said, Shifts } from "../../core/messages/index.ts";
import { canonicalJson } from "../../core/model/index.ts";
import { handoverCommand } from "../../server/commands/handover.ts";
import { verifyRecordCommand } from "../../server/commands/verify-record.ts";
import { type Chain, startChain } from "../chain.ts";
import { password, user } from "../people.ts";
import { isUsageError, runCommand } from "./run-command.ts";

const [outgoingSide, incomingSide] = [
  { name: "R. Quill", password: "quill-hands-over" },
  { name: "T. Marsh", password: "marsh-takes-over" },
];

interface Answer {
  status: number;
  body: { says?: string; code?: string; entry?: number };
}
async function post(chain: Chain, path: string, body: unknown, token?: string): Promise<Answer> {
  const headers = { "content-type": "application/json", ...(token ? { authorization: `Bearer ${token}` } : {}) };
  const answer = await fetch(`${chain.url}/api/v1${path}`, { method: "POST", headers, body: JSON.stringify(body) });
  return { status: answer.status, body: (await answer.json()) as Answer["body"] };
}
const recordAt = (chain: Chain, at: number) => chain.get<BoundRecord>(`/handover/record?at=${at}`);
const note = (says: string) => ({ kind: "note", about: { kind: "shift" }, says });

describe("a shift is handed over", () => {
  let chain: Chain;
  let shift: number;
  beforeAll(async () => {
    chain = await startChain();
    const { before } = await chain.get<Shifts>("/shifts?before=1");
    shift = before[0].from;
  });
  afterAll(async () => {
    await chain.stop();
    chain.remove();
  });
  const write = (entry: object) => post(chain, "/handover/entries", { shift, write: entry });
  const sign = (side: string, who: object, seen: string | null) =>
    post(chain, "/handover/signatures", { shift, side, seen, ...who });

  test("a shift without any data is told as such, and unsigned is seen as unsigned", async () => {
    const { record, hash } = await recordAt(chain, shift);
    expect(hash).toBeNull();
    expect(record.streams.map(({ says }) => says)).toEqual(Array(3).fill("No readings in this shift."));
    const { shifts } = await chain.get<HandoverShifts>("/handover/shifts?count=3");
    expect(shifts.map(({ is }) => is)).toEqual(["open", "open", "open"]);
  });

  test("the path: notes, an action, a check, both signatures, frozen, an amendment", async () => {
    expect(await write(note("Drum 4 leaks a little."))).toMatchObject({ status: 200 });
    const { body: action } = await write({ kind: "action", says: "Empty drum 4", owner: "the next shift" });
    await write({ kind: "check", check: "probe-windows", outcome: "done" });
    // Two outgoing people press the button at the same moment: one signature, one is told.
    const both = await Promise.all([sign("outgoing", outgoingSide, null), sign("outgoing", incomingSide, null)]);
    expect(both.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect(both.find(({ status }) => status === 409)?.body.says).toMatch(/has signed another version of this record/);
    const offered = await recordAt(chain, shift);
    const signer = offered.entries.at(-1)!.by;
    const other = [outgoingSide, incomingSide].find(({ name }) => name !== signer)!;
    const self = [outgoingSide, incomingSide].find(({ name }) => name === signer)!;
    expect(createHash("sha256").update(canonicalJson(offered.record)).digest("hex")).toBe(offered.hash);
    expect((await sign("incoming", self, offered.hash)).body.says).toMatch(/another person/);
    expect((await sign("incoming", other, null)).body.says).toMatch(/another version/);

    const { body: question } = await write({ kind: "question", says: "Which pump?" });
    await write({ kind: "answer", refers: question.entry, says: "The small one." });
    expect(await sign("incoming", other, offered.hash)).toMatchObject({ status: 200 });
    await write(note("The leak was the lid."));
    const taken = await recordAt(chain, shift);
    expect([taken.record, taken.hash, taken.altered]).toEqual([offered.record, offered.hash, undefined]);
    expect(taken.entries.at(-1)).toMatchObject({ amends: true, says: "The leak was the lid.", by: "R. Quill" });
    expect((await sign("outgoing", self, taken.hash)).body.says).toMatch(/frozen/);

    // The next shift finds the action, until it closes it.
    const next = await chain.get<Shifts>("/shifts");
    const carried = async () => (await recordAt(chain, next.current.from)).record.actions;
    expect(await carried()).toMatchObject([{ number: action.entry, owner: "the next shift", closed: null }]);
    const closing = { kind: "action closed", refers: action.entry };
    await post(chain, "/handover/entries", { shift: next.current.from, write: closing });
    expect(await carried()).toMatchObject([{ closed: { by: "R. Quill" } }]);
  });

  test("what was said is found by its words, and stands in the chain of events", async () => {
    const { events, count } = await chain.get<Said>("/handover/search?words=drum%20leak");
    expect([count, events[0].handover]).toMatchObject([1, { kind: "note", shift }]);
    expect(await runCommand(verifyRecordCommand(), ["--config", join(chain.folder, "plant.json")])).toMatchObject({
      error: undefined,
    });
  });

  test("a password that is wrong signs nothing, is put on record, and slows the next tries", async () => {
    const wrong = { name: "T. Marsh", password: "guess" };
    const tries: number[] = [];
    for (let i = 0; i < 6; i++) tries.push((await sign("outgoing", wrong, null)).status);
    expect(tries).toEqual([401, 401, 401, 401, 401, 429]);
    const { events } = await chain.get<Said>("/events?about=signature");
    expect(events[0].says).toMatch(/A signature as "T\. Marsh" from .* failed/);
  });

  test("the same record as HTML, CSV and JSON, by HTTP and from the command line beside the running service", async () => {
    const config = join(chain.folder, "plant.json");
    const command = (format: string) =>
      runCommand(handoverCommand(), ["--config", config, "--shift", "last", "--format", format]);
    const { out: json } = await command("json");
    expect(JSON.parse(json)).toEqual(await recordAt(chain, shift));
    const { out: csv } = await command("csv");
    expect(csv).toContain("action,,");
    const { out: page } = await command("html");
    expect(page).toContain("Drum 4 leaks a little.");
    for (const [format, text] of Object.entries({ json, csv, html: page })) {
      const answer = await fetch(`${chain.url}/api/v1/handover/record/${format}?at=${shift}`);
      expect(answer.headers.get("content-disposition")).toMatch(
        new RegExp(`^attachment; filename="brindle-quay-.*\\.${format}"$`),
      );
      expect(await answer.text()).toBe(text);
    }
    const wrong = await runCommand(handoverCommand(), ["--config", config, "--shift", "yesterday"]);
    expect(isUsageError(wrong.error)).toBe(true);
    const ahead = await runCommand(handoverCommand(), ["--config", config, "--shift", "2099-01-01T00:00:00Z"]);
    expect(String(ahead.error)).toMatch(/expected one that has begun/);
  });

  test("a signed record that was changed past all doors says so", async () => {
    const db = new Database(join(chain.folder, "record.db"));
    db.exec("DROP TRIGGER shift_record_stays; UPDATE shift_record SET json = replace(json, 'Drum 4', 'Drum 5')");
    db.close();
    const bound = await recordAt(chain, shift);
    expect(bound.altered).toBe(true);
    const verified = await runCommand(verifyRecordCommand(), ["--config", join(chain.folder, "plant.json")]);
    expect(String(verified.error)).toMatch(/signature \d+: the record no longer fits the hash that was signed/);
    const page = await fetch(`${chain.url}/api/v1/handover/record/html?at=${shift}`);
    expect(await page.text()).toContain("no longer fits the hash that was signed");
  });
});

describe("who may sign, where people are known", () => {
  let chain: Chain;
  let token: string;
  let shift: number;
  beforeAll(async () => {
    chain = await startChain();
    shift = (await chain.get<Shifts>("/shifts")).before[0].from;
    await user(chain, ["add", "A. Moss", "--role", "operator"]);
    await user(chain, ["add", "V. Lark", "--role", "viewer"]);
    token = (await user(chain, ["token", "panel", "--role", "operator", "--days", "1"])).out.trim();
  });
  afterAll(async () => {
    await chain.stop();
    chain.remove();
  });
  const sign = (name: string, secret = password) =>
    post(chain, "/handover/signatures", { shift, side: "outgoing", seen: null, name, password: secret }, token);

  test("a viewer's signature is refused, an operator's taken, and the invented people are nobody here", async () => {
    expect(await sign("V. Lark")).toMatchObject({
      status: 403,
      body: { says: "V. Lark is viewer; signing a shift needs operator." },
    });
    expect(await sign("R. Quill", "quill-hands-over")).toMatchObject({ status: 401 });
    expect(await sign("A. Moss")).toMatchObject({ status: 200 });
  });
});

test("a plant time zone that does not exist stops the command with what to mend", async () => {
  const chain = await startChain();
  await chain.stop();
  const file = join(chain.folder, "plant.json");
  writeFileSync(
    file,
    JSON.stringify({
      ...JSON.parse(readFileSync(file, "utf8")),
      timeZone: "Europe/Atlantis",
    }),
  );
  const { error } = await runCommand(handoverCommand(), ["--config", file]);
  expect(String(error)).toMatch(/timeZone is "Europe\/Atlantis"/);
  chain.remove();
});
