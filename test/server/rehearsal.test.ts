import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { KeptLimits, LimitSet } from "../../core/limit-set/index.ts";
import type { LimitSets, RecordedEvent } from "../../core/messages/index.ts";
import type { RehearsalRequest, RehearsalResult, RehearsalStanding } from "../../core/rehearsal/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { user } from "../people.ts";

const day = 86_400_000;
const stream = "bq-410";
let chain: Chain;
let token: string;
let stretch: { from: number; to: number };
let inForce: LimitSet;

async function ask<T>(path: string, body?: unknown, method = body === undefined ? "GET" : "POST") {
  const headers = { authorization: `Bearer ${token}`, "content-type": "application/json" };
  const sent = body === undefined ? {} : { body: JSON.stringify(body) };
  const type = body === undefined ? { authorization: headers.authorization } : headers;
  const answer = await fetch(`${chain.url}/api/v1${path}`, { method, headers: type, ...sent });
  const text = await answer.text();
  return { status: answer.status, body: (text === "" ? undefined : JSON.parse(text)) as T };
}

const start = async (request: RehearsalRequest) =>
  (await ask<{ rehearsal: string }>(`/streams/${stream}/rehearsals`, request)).body.rehearsal;
const ended = (rehearsal: string) =>
  eventually("the rehearsal", async () => {
    const { body } = await ask<RehearsalStanding>(`/rehearsals/${rehearsal}`);
    return body.state === "running" ? undefined : body;
  });

async function rehearse(request: RehearsalRequest): Promise<{ id: string; result: RehearsalResult }> {
  const id = await start(request);
  const standing = await ended(id);
  if (standing.state !== "done") throw new Error(JSON.stringify(standing));
  return { id, result: standing.result };
}

beforeAll(async () => {
  chain = await startChain({ historyDays: 14 });
  token = (await user(chain, ["token", "E. Penn", "--role", "engineer", "--days", "1"])).out.trim();
  await user(chain, ["add", "A. Rook", "--role", "administrator"]);
  await eventually(
    "the history",
    async () => {
      const { body } = await ask<{ events: RecordedEvent[] }>("/events?about=history&limit=20");
      return body.events.filter(({ kind }) => kind === "history loaded").length >= 3;
    },
    180_000,
  );
  const now = Date.now();
  stretch = { from: now - 15 * day, to: now + day };
  inForce = (await ask<LimitSets>(`/streams/${stream}/limit-sets`)).body.inForce as LimitSet;
}, 240_000);
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

describe("a rehearsal of two weeks of history", () => {
  test("with the limits that were in force calls people exactly when the record says they were called", async () => {
    const { result } = await rehearse(stretch);
    const { body } = await ask<{ events: RecordedEvent[] }>(`/events?stream=${stream}&about=alarm&limit=1000`);
    const onRecord = body.events
      // The laboratory is heard besides the readings: its alarm is none of a rehearsal's.
      .filter(
        ({ kind, alarm, history }) => history && kind.startsWith("alarm raised") && alarm && alarm.key !== "lab-bias",
      )
      .filter(({ alarm }) => !/laboratory/i.test(alarm!.title) && alarm!.priority !== "record only")
      .map(({ at, alarm }) => `${at} ${alarm!.key}`);
    expect(onRecord.length).toBeGreaterThan(5);
    expect(result.inForce.calls.map(({ annunciatedAt, key }) => `${annunciatedAt} ${key}`).sort()).toEqual(
      onRecord.sort(),
    );
  });

  test("with a wider limit of Q calls less often, and a recorded version is not touched", async () => {
    const limit = 1e6 * inForce.statistics.q.limit;
    const { result } = await rehearse({ ...stretch, settings: [{ setting: { statistic: "q" }, value: limit }] });
    expect(result.proposed!.perDay).toBeLessThan(result.inForce.perDay);
    expect(result.proposed!.alarms.find(({ key }) => key === "unfamiliar")?.annunciations).toBe(0);
    expect(result.limitSet?.statistics.q.limit).toBe(limit);
    expect((await ask<LimitSets>(`/streams/${stream}/limit-sets`)).body.versions).toHaveLength(1);
  });

  test("knows a trouble once somebody has labelled it, and says what found it and how late", async () => {
    const { body } = await ask<{ excursions: { kind: string; start: number; end: number; readings: number }[] }>(
      `/excursions?stream=${stream}&limit=100`,
    );
    const longest = body.excursions.toSorted((a, b) => b.readings - a.readings)[0];
    await ask(`/streams/${stream}/excursions/${longest.kind}/${longest.start}/label`, { label: "analyzer fault" });
    const { result } = await rehearse(stretch);
    expect(result.truth).toMatchObject([{ kind: longest.kind, label: "analyzer fault", from: longest.start }]);
    expect(result.inForce).toMatchObject({ found: 1, missed: 0 });
    expect(result.inForce.events[0].foundBy).toBeDefined();
    expect(result.inForce.causeless.length).toBeLessThan(result.inForce.calls.length);
    const cut = await rehearse({ ...stretch, cuts: [{ from: longest.start - 600_000, to: longest.end + 600_000 }] });
    expect(cut.result.stretch.readings).toBeLessThan(result.stretch.readings);
    expect(cut.result.inForce.calls.length).toBeLessThan(result.inForce.calls.length);
  });

  test("shows how the statistics went beside the theory", async () => {
    const { pictures } = (await rehearse({ ...stretch, pictures: true })).result;
    const { q } = pictures!;
    expect(q.counts.reduce((sum, count) => sum + count, 0)).toBe(q.readings);
    expect(q.nominal).toBeCloseTo(0.01, 12);
    expect(q.autocorrelation[0]).toBeCloseTo(1, 12);
    expect(q.worth).toBeLessThan(q.readings);
    // All that the theory expects lies somewhere on the scale.
    expect(q.expected!.reduce((sum, count) => sum + count, 0) / q.readings).toBeCloseTo(1, 2);
  });

  test("sweeps two settings against each other: a cell for every choice, the best among them", async () => {
    const values = [1, 2, 3];
    const limits = [0.5, 1, 5, 20].map((factor) => factor * inForce.statistics.q.limit);
    const { result } = await rehearse({
      ...stretch,
      sweep: [
        { setting: { statistic: "q" }, values: limits },
        { setting: { alarm: "unfamiliar", number: "onDelay.readings" }, values },
      ],
    });
    const { cells, best } = result.sweep!;
    expect(cells.map(({ x, y }) => `${x} ${y}`)).toEqual(limits.flatMap((_, x) => values.map((_, y) => `${x} ${y}`)));
    expect(best.length).toBeGreaterThan(0);
    for (const cell of cells) {
      const beats = best.some((one) => one.missed <= cell.missed && one.perDay <= cell.perDay);
      expect(beats, JSON.stringify(cell)).toBe(true);
    }
  });

  test("can be cancelled", async () => {
    const many = Array.from({ length: 40 }, (_, i) => (0.5 + i) * inForce.statistics.q.limit);
    const id = await start({
      ...stretch,
      sweep: [
        { setting: { statistic: "q" }, values: many },
        { setting: { statistic: "t2" }, values: many },
      ],
    });
    expect((await ask(`/rehearsals/${id}`, undefined, "DELETE")).status).toBe(204);
    expect((await ask<RehearsalStanding>(`/rehearsals/${id}`)).body.state).toBe("cancelled");
    expect((await rehearse(stretch)).result.stretch.readings).toBeGreaterThan(1000); // the threads are of use again
  });
});

describe("says what is wrong", () => {
  test("with a stretch without data", async () => {
    expect(await ended(await start({ from: 1000, to: 2000 }))).toMatchObject({
      state: "failed",
      says: "The stretch 1970-01-01T00:00:01.000Z to 1970-01-01T00:00:02.000Z has no readings. Choose another.",
    });
  });

  test("with a model that is not on record", async () => {
    const limitSet = { ...inForce, model: "f".repeat(64) };
    expect(await ended(await start({ ...stretch, limitSet }))).toMatchObject({
      state: "failed",
      says: expect.stringMatching(/^The model f{12}… is not on record/),
    });
  });

  test("with a rehearsal that is long ago", async () => {
    expect((await ask("/rehearsals/00000000-0000-4000-8000-000000000000")).status).toBe(404);
  });
});

test("limits are kept under a name, and dropped", async () => {
  const path = `/streams/${stream}/kept-limits`;
  const about = { from: stretch.from, to: stretch.to, cuts: [], cutStates: ["cleaning"] };
  expect((await ask(`${path}/quieter%20nights`, { limitSet: inForce, stretch: about }, "PUT")).status).toBe(200);
  const { body } = await ask<{ kept: KeptLimits[] }>(path);
  expect(body.kept).toMatchObject([{ name: "quieter nights", author: "token E. Penn", base: 1, stretch: about }]);
  expect((await ask(`${path}/quieter%20nights`, undefined, "DELETE")).status).toBe(200);
  expect((await ask<{ kept: KeptLimits[] }>(path)).body.kept).toEqual([]);
  expect((await ask(`${path}/quieter%20nights`, undefined, "DELETE")).status).toBe(404);
});

test("a rehearsal of just these limits goes with them as evidence; one of others does not", async () => {
  const settings = [{ setting: { alarm: "unfamiliar", number: "onDelay.readings" as const }, value: 5 }];
  const { id, result } = await rehearse({ ...stretch, settings });
  const path = `/streams/${stream}/limit-sets`;
  const other = { limitSet: inForce, reason: "as it was", rehearsal: id };
  expect(await ask(path, other)).toMatchObject({ status: 409, body: { code: "no-evidence" } });
  expect(await ask(path, { limitSet: result.limitSet, reason: "bubbles", rehearsal: id })).toMatchObject({
    status: 200,
  });
  const [version] = (await ask<LimitSets>(path)).body.versions;
  expect(version).toMatchObject({
    version: 2,
    author: "token E. Penn",
    evidence: { version: 1, inForce: { perDay: result.inForce.perDay }, proposed: { perDay: result.proposed!.perDay } },
  });
});

test("a stop waits for no rehearsal, nor for those that wait for a thread", async () => {
  for (let i = 0; i < 6; i++) await start({ ...stretch, pictures: true });
  expect(await chain.stop()).toBe(0);
});
