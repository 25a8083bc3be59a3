import type { Static } from "typebox";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import {
  type AlarmsSchema,
  checker,
  type Excursion,
  PerformanceSchema,
  type RecordedEvent,
  type Refusals,
} from "../../core/messages/index.ts";
import { makePlant, spectrumAt, unforeseenBand } from "../../simulator/plant/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";

const plant = makePlant(1);
const band = unforeseenBand();
const minute = 60_000;
const began = Date.now();
let chain: Chain;
/** process time: an hour behind the clock, as from an analyzer whose clock was never set */
let time = began - 60 * minute;

beforeAll(async () => {
  chain = await startChain();
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

async function feed(n: number, { strange = false, everyMs = 100 } = {}): Promise<void> {
  for (let i = 0; i < n; i++) {
    time += everyMs;
    const values = Array.from(spectrumAt(plant, "bq-305", time), (value, j) => value + (strange ? band[j] : 0));
    await chain.publish("bq-305", { time, sequence: time, values });
  }
}
const say = (state: string, more: object = {}) =>
  chain.publishRaw(`${prefix}/bq-305/state`, JSON.stringify({ time: new Date(time).toISOString(), state, ...more }));
const alarms = () => chain.get<Static<typeof AlarmsSchema>>("/alarms");
const open = async (key: string) => (await alarms()).alarms.find((alarm) => alarm.key === key);
const aside = async (key: string) => (await alarms()).setAside.find((alarm) => alarm.key === key);
const recorded = async () =>
  (await chain.get<{ events: RecordedEvent[] }>("/events?stream=bq-305&limit=1000")).events.reverse();
const kinds = async () => (await recorded()).map(({ kind }) => kind);
// By itself: on a slow machine the stream may be called silent between two steps.
const kindsOfUnfamiliar = async () =>
  (await recorded()).filter(({ alarm, setAside }) => (alarm ?? setAside)?.key === "unfamiliar").map(({ kind }) => kind);
async function post(path: string, body: object): Promise<{ status: number; says?: string; code?: string }> {
  const answer = await fetch(`${chain.url}/api/v1/streams/bq-305${path}`, {
    method: "POST",
    headers: { "content-type": "application/json" },
    body: JSON.stringify(body),
  });
  return { status: answer.status, ...((await answer.json()) as object) };
}
const unfamiliar = (command: string, body: object = {}) => post(`/alarms/unfamiliar/${command}`, body);

describe("what a person does to an alarm", () => {
  test("shelving needs a reason and a time within bounds; the alarm leaves the list, with who, why and until when", async () => {
    await feed(1);
    await feed(3, { strange: true });
    await eventually("the alarm", () => open("unfamiliar"));
    expect((await unfamiliar("shelve", { minutes: 5 })).status).toBe(400);
    expect(await unfamiliar("shelve", { reason: "sample taken", minutes: 600 })).toEqual({
      status: 409,
      code: "not-shelved",
      says: "Unfamiliar spectrum: it may be shelved for at most 480 minutes at a time.",
    });
    expect(await unfamiliar("shelve", { reason: "sample taken", minutes: 5 })).toEqual({ status: 200, done: true });
    expect(await open("unfamiliar")).toBeUndefined();
    const shelved = await aside("unfamiliar");
    expect(shelved).toMatchObject({
      state: "shelved",
      active: true,
      priority: "high",
      shelved: { reason: "sample taken" },
    });
    expect(shelved!.shelved!.until - shelved!.shelved!.at).toBe(5 * minute);
    expect(await unfamiliar("acknowledge")).toMatchObject({ status: 409, code: "not-acknowledged" });
    expect((await kinds()).filter((kind) => kind === "command rejected")).toHaveLength(2);
  });

  test("it goes on being recorded, survives a kill, and comes back annunciated anew", async () => {
    await feed(3);
    await feed(3, { strange: true });
    await eventually("the record of what came", async () => (await kinds()).includes("alarm raised unannounced"));
    await chain.kill();
    chain = await chain.again();
    expect(await aside("unfamiliar")).toMatchObject({ state: "shelved", active: true });
    expect((await unfamiliar("unshelve", { note: "done" })).status).toBe(200);
    expect(await open("unfamiliar")).toMatchObject({ state: "unacknowledged" });
    expect((await kindsOfUnfamiliar()).slice(-2)).toEqual(["alarm unshelved", "alarm annunciated anew"]);
  });

  test("a shelf whose time runs out while the service is down ends at the start", async () => {
    expect((await unfamiliar("shelve", { reason: "for a moment", minutes: 0.03 })).status).toBe(200);
    await chain.kill();
    await new Promise((resolve) => setTimeout(resolve, 2000));
    chain = await chain.again();
    expect(await open("unfamiliar")).toMatchObject({ state: "unacknowledged" });
    expect((await kindsOfUnfamiliar()).slice(-2)).toEqual(["alarm unshelved", "alarm annunciated anew"]);
  });

  test("one shelved for the present activation comes back with the next", async () => {
    expect((await unfamiliar("shelve", { reason: "known" })).status).toBe(200);
    await feed(3);
    await eventually("nothing set aside", async () => !(await aside("unfamiliar")));
    await feed(3, { strange: true });
    await eventually("the next one", () => open("unfamiliar"));
  });

  test("what cannot be reset, unshelved or found says so", async () => {
    expect(await unfamiliar("reset")).toMatchObject({
      status: 409,
      says: "Unfamiliar spectrum: its condition still holds.",
    });
    expect(await unfamiliar("unshelve")).toMatchObject({
      status: 409,
      says: "Unfamiliar spectrum: it is not shelved.",
    });
    const nowhere = await post("/alarms/no-such/acknowledge", {});
    expect(nowhere.status).toBe(409);
    expect(nowhere.says).toMatch(/^bq-305 has no alarm "no-such"; it has unfamiliar, drifting, /);
  });

  test("taking an alarm out of service is not for an operator", async () => {
    expect((await unfamiliar("out-of-service", { reason: "probe away" })).status).toBe(403);
    expect((await unfamiliar("return-to-service")).status).toBe(403);
  });
});

describe("what people know of an excursion", () => {
  test("stays with it through the readings that follow, also when it ends", async () => {
    const excursions = async () =>
      (await chain.get<{ excursions: Excursion[] }>("/excursions?stream=bq-305")).excursions.filter(
        ({ kind }) => kind === "unfamiliar",
      );
    const [{ start, end }] = await excursions();
    expect(end).toBeUndefined();
    const path = `/excursions/unfamiliar/${start}`;
    expect((await post(`${path}/label`, { label: "process change", note: "acetone in the feed" })).status).toBe(200);
    await feed(2, { strange: true });
    await feed(4);
    const ended = await eventually("its end", async () => {
      const [excursion] = await excursions();
      return excursion.end === undefined ? undefined : excursion;
    });
    expect(ended).toMatchObject({ start, label: { is: "process change" }, notes: [{ says: "acetone in the feed" }] });
    expect(ended.alarms).toMatchObject([{ key: "unfamiliar" }]);
    expect(ended.regions!.length).toBeGreaterThan(0);
    expect((await post(`${path}/notes`, { note: "tank T-3" })).status).toBe(200);
    expect((await post(`${path}/label`, { label: "cleaning" })).status).toBe(200);
    const [last] = await excursions();
    expect(last).toMatchObject({ ...ended, label: { is: "cleaning" }, notes: [{}, { says: "tank T-3" }] });
    expect((await post(`${path}/label`, { label: "sabotage" })).status).toBe(400);
    expect(await post("/excursions/unfamiliar/12345/label", { label: "false" })).toMatchObject({ status: 409 });
  });
});

describe("what the plant says of the process", () => {
  test("suppresses by design the alarms that mean nothing then, and lets them come back", async () => {
    await unfamiliar("acknowledge");
    await say("running", { grade: "blend 30" });
    await say("cleaning", { grade: "blend 30" });
    await eventually("the suppression", () => aside("unfamiliar"));
    expect(await aside("silent")).toBeUndefined(); // an analyzer that has gone silent matters then, too
    await feed(5, { strange: true });
    await eventually("the condition beneath", async () => (await aside("unfamiliar"))?.active);
    expect(await open("unfamiliar")).toBeUndefined();
    expect(await aside("unfamiliar")).toMatchObject({
      state: "suppressed",
      active: true,
      suppressed: { state: "cleaning" },
    });

    await chain.kill();
    chain = await chain.again();
    expect(await aside("unfamiliar")).toMatchObject({ state: "suppressed", active: true });

    await say("running", { grade: "blend 30" });
    await feed(3, { strange: true, everyMs: minute });
    expect(await open("unfamiliar")).toBeUndefined(); // the line is still being swept out
    await feed(1, { strange: true, everyMs: 8 * minute });
    await eventually("the alarm, annunciated anew", () => open("unfamiliar"));
    expect(await kinds()).toEqual(
      expect.arrayContaining(["process state", "alarm suppressed", "alarm suppression ended"]),
    );
  });

  test("is on record once, however often it is said, and refused by name when it cannot be read", async () => {
    const before = (await kinds()).filter((kind) => kind === "process state").length;
    expect(before).toBe(3); // running, cleaning, running
    for (let i = 0; i < 3; i++) await say("running", { grade: "blend 30" });
    await chain.publishRaw(`${prefix}/bq-305/state`, '{"time": 5, "state": "running"}');
    const refusal = await eventually("the refusal", async () => {
      const [last] = (await chain.get<Refusals>("/refusals?stream=bq-305")).latest;
      return last?.says.startsWith("process state: time is 5") ? last : undefined;
    });
    expect(refusal.reason).toBe("malformed");
    expect((await kinds()).filter((kind) => kind === "process state")).toHaveLength(before);
  });
});

test("the figures of the alarm system come over what was annunciated here, by the published schema", async () => {
  const [from, to] = [began - 2 * 60 * minute, Date.now() + minute];
  const performance = await chain.get<Static<typeof PerformanceSchema>>(`/alarms/performance?from=${from}&to=${to}`);
  expect(checker(PerformanceSchema).mismatch(performance)).toBeUndefined();
  // Of all streams: on a slow machine one of the others may have been called silent meanwhile.
  const { events } = await chain.get<{ events: RecordedEvent[] }>("/events?limit=1000");
  const called = events.filter(({ kind }) => /^alarm (raised( again)?|annunciated anew)$/.test(kind));
  expect(performance.annunciations).toBe(called.length);
  expect(called.filter(({ alarm }) => alarm?.key === "unfamiliar").length).toBeGreaterThan(3);
  expect(performance.withheld).toBe(events.filter(({ kind }) => kind === "alarm raised unannounced").length);
  const backwards = await fetch(`${chain.url}/api/v1/alarms/performance?from=2&to=1`);
  expect(backwards.status).toBe(400);
});
