import { writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type {
  Agreement,
  LabImport,
  LabResult,
  LabResults,
  RecordedEvent,
  Refusals,
} from "../../core/messages/index.ts";
import { labCommand } from "../../server/commands/lab.ts";
import { conditionsAt, makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";
import { user } from "../people.ts";
import { runCommand } from "./run-command.ts";

const plant = makePlant(1);
const stream = "bq-305";
const period = 5000;
const readings = 240;
/** here the plant moves little within a minute */
const start = Date.UTC(2026, 4, 14, 8);
const at = (minutes: number) => start + minutes * 60_000;
const truth = (time: number, property: "water" | "ethanol") =>
  100 * conditionsAt(plant, stream, time).composition[property];

let chain: Chain;
const tokens: Record<string, string> = {};

/** Twenty minutes of readings, five seconds apart; a stranger in the spectrum from the fifteenth minute on. */
beforeAll(async () => {
  chain = await startChain();
  const lines = Array.from({ length: readings }, (_, i) => {
    const time = start + i * period;
    const values = Array.from(
      spectrumAt(plant, stream, time),
      (value, j) => value + (time >= at(15) && j > 200 && j < 230 ? 0.1 : 0),
    );
    return { time, sequence: i, values };
  });
  for (const reading of lines) await chain.publish(stream, reading);
  await user(chain, ["add", "A. Rook", "--role", "administrator"]);
  for (const role of ["operator", "engineer"])
    tokens[role] = (await user(chain, ["token", role, "--role", role, "--days", "1"])).out.trim();
  await eventually("all readings on record", async () => {
    const { events } = await get<{ events: RecordedEvent[] }>("/events?limit=1");
    const now = await fetch(`${chain.url}/api/v1/streams/${stream}/reading`, { headers: as("operator") });
    return (
      events && now.ok && ((await now.json()) as { judged: { sequence: number } }).judged.sequence === readings - 1
    );
  });
}, 60_000);
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

const as = (role: string) => ({ authorization: `Bearer ${tokens[role]}` });
async function get<T>(path: string): Promise<T> {
  const answer = await fetch(`${chain.url}/api/v1${path}`, { headers: as("operator") });
  expect([path, answer.status]).toEqual([path, 200]);
  return (await answer.json()) as T;
}
async function post<T>(path: string, body: unknown, role = "engineer", type = "application/json") {
  const answer = await fetch(`${chain.url}/api/v1/streams/${stream}${path}`, {
    method: "POST",
    headers: { ...as(role), "content-type": type },
    body: typeof body === "string" ? body : JSON.stringify(body),
  });
  return { status: answer.status, body: (await answer.json()) as T };
}
const results = async () => (await get<LabResults>(`/streams/${stream}/lab?from=${start}&to=${Date.now()}`)).results;
const find = async (sample: string) => (await results()).find((result) => result.sample === sample);
const identity = ({ property, time, method, sample }: LabResult) => ({ property, time, method, sample });
const result = (minutes: number, sample: string, more: object = {}) => ({
  time: new Date(at(minutes)).toISOString(),
  property: "water",
  value: Number(truth(at(minutes), "water").toFixed(3)),
  unit: "wt%",
  method: "titration",
  sample,
  ...more,
});

describe("a result comes in", () => {
  test("by form, is matched to the readings about its sample's time, and says what was predicted", async () => {
    const { status, body } = await post<LabImport>("/lab", result(5, "form-1", { time: at(5) }), "operator");
    expect([status, body.accepted, body.rows[0].says]).toEqual([200, 1, expect.stringMatching(/^Predicted: \d/)]);
    const stored = (await find("form-1"))!;
    expect(stored).toMatchObject({ origin: "form", version: 1, by: "token operator", withdrawn: false });
    const { pair } = stored;
    expect(pair).toMatchObject({ readings: 13, from: at(4.5), to: at(5.5), apart: null, verdict: "inside" }); // ± 30 s of 5 s, ends included
    expect(pair.predicted).toBeCloseTo(truth(at(5), "water"), 0);
    // The prediction is the sum over the components of its scores, so they are those of the same readings.
    expect(pair.scores!.length).toBeGreaterThan(1);
  });

  test("by message, and a repeat changes nothing", async () => {
    const message = result(6, "message-1");
    for (let i = 0; i < 2; i++) await chain.publishRaw(`${prefix}/${stream}/lab`, JSON.stringify(message));
    const stored = await eventually("the result", () => find("message-1"));
    expect(stored).toMatchObject({ origin: "message", by: "the laboratory" });
    await chain.publishRaw(`${prefix}/${stream}/lab`, JSON.stringify({ ...message, sample: "message-2" }));
    await eventually("the next", () => find("message-2"));
    expect((await results()).filter(({ sample }) => sample === "message-1")).toHaveLength(1);
    const { events } = await get<{ events: RecordedEvent[] }>(`/events?about=lab&limit=100`);
    expect(events.filter(({ says }) => says.includes("message-1"))).toHaveLength(1);
  });

  test("by message, and what cannot be used is kept as a refusal with its reason", async () => {
    await chain.publishRaw(`${prefix}/${stream}/lab`, JSON.stringify(result(7, "odd", { unit: "ppm" })));
    await chain.publishRaw(`${prefix}/${stream}/lab`, '{"property":"water"}');
    const says = await eventually("both refusals", async () => {
      const { latest } = await get<Refusals>(`/refusals?stream=${stream}&limit=10`);
      return latest.length >= 2 ? latest.map((refusal) => `${refusal.reason}: ${refusal.says}`) : undefined;
    });
    expect(says.join("\n")).toContain('lab result: unit of water is "ppm", expected "wt%"');
    expect(says.join("\n")).toContain("lab result: time is missing");
  });

  test("beside readings that were not inside it is kept apart from the statistics, and says so", async () => {
    await post("/lab", result(17, "apart-1"));
    const { pair } = (await find("apart-1"))!;
    expect(pair).toMatchObject({ apart: "not inside", verdict: "unfamiliar" });
    const agreement = await get<Agreement>(`/streams/${stream}/agreement?property=water&from=${start}&to=${at(20)}`);
    expect(agreement.apart).toContainEqual({ why: "not inside", count: 1 });
    expect(agreement.pairs.time).not.toContain(at(17));
  });
});

describe("a table", () => {
  const header = "time,property,value,unit,method,sample";
  const row = (minutes: number, sample: string, more: Partial<Record<"value" | "unit" | "time", string>> = {}) => {
    const { time, value, unit } = { ...result(minutes, sample), ...more };
    return `${time},water,${value},${unit},titration,${sample}`;
  };
  const table = (...rows: string[]) =>
    post<LabImport>("/lab/table", [header, ...rows, ""].join("\n"), "engineer", "text/csv");

  test("comes in whole, row by row", async () => {
    const { status, body } = await table(row(2, "t-1"), row(3, "t-2"), row(4, "t-3"));
    expect(status).toBe(200);
    expect(body).toMatchObject({ done: true, accepted: 3, repeated: 0, refused: 0 });
    expect(body.rows.map((each) => each.row)).toEqual([2, 3, 4]);
    const again = await table(row(2, "t-1"), row(3, "t-2"), row(4, "t-3"));
    expect(again.body).toMatchObject({ done: true, accepted: 0, repeated: 3 });
  });

  test("with one wrong row is refused as a whole: a clear answer to each row, nothing half imported", async () => {
    const before = (await results()).length;
    const { status, body } = await table(
      row(8, "g-1"),
      row(8, "g-2", { unit: "" }),
      row(8, "g-3", { unit: "ppm" }),
      row(8, "g-4", { value: "362" }),
      row(8, "g-5", { value: "3,6" }),
      row(8, "g-6", { time: "yesterday" }),
      row(-60, "g-7"),
      row(2, "t-1", { value: "3.0" }),
      row(8, "g-1", { value: "3.0" }),
      `${new Date(at(8)).toISOString()},colour,1,wt%,,g-9`,
      row(8, "g-10"),
    );
    expect([status, body.done, body.accepted, body.refused]).toEqual([422, false, 0, 9]);
    const said = Object.fromEntries(body.rows.map((each) => [each.row, `${each.outcome}: ${each.says}`]));
    expect(said).toEqual({
      2: expect.stringMatching(/^accepted: /),
      3: "refused: unit is missing.",
      4: expect.stringMatching(/^refused: unit of water is "ppm", expected "wt%"/),
      5: expect.stringMatching(/^refused: water is 362 wt%, expected .* Check the decimal point/),
      6: expect.stringMatching(/^refused: \d fields, expected 6/),
      7: expect.stringMatching(/^refused: time is "yesterday", expected RFC 3339/),
      8: expect.stringMatching(/^refused: no reading at 20.*Z \(.*\)\. Check the time at which the sample was drawn/),
      9: expect.stringMatching(/^refused: the same sample has .* wt% on record, got 3 wt%\. Correct that one/),
      10: expect.stringMatching(/^refused: the same sample has .* wt% on record, got 3 wt%/),
      11: expect.stringMatching(/^refused: property is "colour", expected one of "ethyl acetate", "ethanol", "water"/),
      12: expect.stringMatching(/^accepted: /),
    });
    expect(await results()).toHaveLength(before);
  });

  test.each([
    [
      "time,property,value",
      "line 1: unit missing (it has time, property, value), expected time, property, value, unit",
    ],
    ["time;property;value;unit", "it is separated by semicolons"],
    ["time,property,value,unit,colour", 'column "colour" is unknown'],
    ["time,property,value,unit,unit", 'column "unit" stands there twice'],
    [header, "the table has a header and no rows"],
  ])("with the header %s is refused: %s", async (text, says) => {
    const { status, body } = await post<{ code: string; says: string }>("/lab/table", text, "engineer", "text/csv");
    expect([status, body.code]).toEqual([400, "wrong-table"]);
    expect(body.says).toContain(says);
  });
});

describe("a result on record", () => {
  test("is corrected with a reason: each version stays, with who, when and why", async () => {
    const before = (await find("form-1"))!;
    const asked = { result: identity(before), value: before.value + 0.01, reason: "Read off wrong." };
    expect((await post("/lab/correct", { ...asked, reason: " " })).body).toMatchObject({
      says: "a reason is missing.",
    });
    expect((await post("/lab/correct", asked)).status).toBe(200);
    const after = (await find("form-1"))!;
    expect(after).toMatchObject({ version: 2, value: asked.value, pair: before.pair, withdrawn: false });
    expect(after.changes).toEqual([
      { kind: "corrected", was: before.value, by: "token engineer", at: expect.any(Number), reason: "Read off wrong." },
    ]);
    // A late repeat of what was said first changes nothing, either.
    const { body } = await post<LabImport>("/lab", result(5, "form-1"), "operator");
    expect(body).toMatchObject({ repeated: 1, accepted: 0 });
    const { events } = await get<{ events: RecordedEvent[] }>("/events?about=lab&limit=100");
    const corrected = events.find(({ kind }) => kind === "lab result corrected")!;
    expect(corrected).toMatchObject({ by: "token engineer", says: expect.stringContaining("Read off wrong.") });
  });

  test("is withdrawn, and shown as withdrawn: it counts no more and comes back by no repeat", async () => {
    const before = (await find("t-3"))!;
    expect((await post("/lab/withdraw", { result: identity(before), reason: "Bottle mixed up." })).status).toBe(200);
    expect(await find("t-3")).toMatchObject({ withdrawn: true, version: 2 });
    const again = await post("/lab/withdraw", { result: identity(before), reason: "Twice." });
    expect([again.status, again.body]).toEqual([409, { code: "not-changed", says: "it was withdrawn before." }]);
    const { body } = await post<LabImport>("/lab", result(4, "t-3"), "operator");
    expect(body.rows[0].says).toMatch(/^this result was withdrawn by token engineer: Bottle mixed up\./);
    const { apart } = await get<Agreement>(`/streams/${stream}/agreement?property=water`);
    expect(apart).toContainEqual({ why: "withdrawn", count: 1 });
  });

  test("outlives a restart with its versions, and the chain of events holds", async () => {
    const before = await results();
    await chain.stop();
    chain = await chain.again();
    expect(await results()).toEqual(before);
  });
});

test("agreement: statistics over the pairs that count, each placed in the relation of the calibration", async () => {
  for (let i = 0; i < 12; i++) await post("/lab", result(2 + i, `many-${i}`, { method: "second" }));
  const found = await get<Agreement>(`/streams/${stream}/agreement?property=water&from=${start}&to=${at(20)}`);
  const counting = (await results()).filter(({ pair, withdrawn }) => pair.apart === null && !withdrawn);
  expect(found.pairs.laboratory).toHaveLength(counting.length);
  expect(found.statistics!.n).toBe(counting.length);
  expect(found.finding.stage).toMatchObject({ n: counting.length });
  expect(found.inner.length).toBeGreaterThan(1);
  for (const { pairs } of found.inner) expect(pairs.t).toHaveLength(counting.length);
  const answer = await fetch(`${chain.url}/api/v1/streams/${stream}/agreement?property=colour`, {
    headers: as("operator"),
  });
  expect([answer.status, await answer.json()]).toEqual([
    404,
    { code: "unknown-property", says: `${stream} predicts no colour; it predicts ethyl acetate, ethanol, water.` },
  ]);
});

describe("millrace lab", () => {
  const header = "time,property,value,unit,method,sample";
  async function lab(rows: string[], ...more: string[]) {
    const file = join(chain.folder, "lab.csv");
    writeFileSync(file, [header, ...rows].join("\n"));
    return runCommand(labCommand(), ["--stream", stream, "--data", file, "--url", chain.url, ...more]);
  }
  const row = (sample: string, unit = "wt%") => {
    const { time, value } = result(6, sample);
    return `${time},water,${value},${unit},,${sample}`;
  };

  test("brings a table in, and says how many there were", async () => {
    const { out, error } = await lab([row("c-1"), row("c-2")], "--token", tokens.engineer);
    expect([error, out]).toEqual([undefined, `${stream}: 2 results recorded, 0 already there.\n`]);
  });

  test("names each wrong row, takes none, and says who may", async () => {
    const wrong = await lab([row("c-3"), row("c-4", "ppm")], "--token", tokens.engineer);
    expect((wrong.error as Error).message).toMatch(
      /lab\.csv: 1 of 2 rows refused, so nothing was taken\. Correct them and send the table again\.\n {2}line 3: unit of water is "ppm", expected "wt%"/,
    );
    expect(await find("c-3")).toBeUndefined();
    const operator = await lab([row("c-3")], "--token", tokens.operator);
    expect((operator.error as Error).message).toMatch(/token operator is operator; this needs engineer/);
  });
});
