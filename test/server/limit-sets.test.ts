import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { LimitSet } from "../../core/limit-set/index.ts";
import type { Judged, LimitSets, ReadingView, RecordedEvent } from "../../core/messages/index.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { user } from "../people.ts";

const plant = makePlant(1);
const names = ["E. Penn", "O. Rook", "Op. Erator"] as const;
const tokens = new Map<string, string>();
let chain: Chain;
let time = Date.now() - 60_000;

async function ask<T>(who: string, path: string, body?: unknown): Promise<{ status: number; body: T }> {
  const headers = { authorization: `Bearer ${tokens.get(who)}`, "content-type": "application/json" };
  const init = body === undefined ? { headers } : { headers, method: "POST", body: JSON.stringify(body) };
  const answer = await fetch(`${chain.url}/api/v1/streams/bq-201${path}`, init);
  return { status: answer.status, body: (await answer.json()) as T };
}
const sets = async () => (await ask<LimitSets>("E. Penn", "/limit-sets")).body;
const version = async (number: number) => (await ask<LimitSet>("E. Penn", `/limit-sets/${number}`)).body;

async function judged(): Promise<Judged> {
  time += 100;
  await chain.publish("bq-201", { time, sequence: time, values: Array.from(spectrumAt(plant, "bq-201", time)) });
  return eventually("the reading", async () => {
    const { body } = await ask<ReadingView>("E. Penn", `/reading?at=${time}`);
    return body.judged?.time === time ? body.judged : undefined;
  });
}

beforeAll(async () => {
  chain = await startChain();
  await chain.stop();
  const config = join(chain.folder, "plant.json");
  writeFileSync(
    config,
    JSON.stringify({ ...JSON.parse(readFileSync(config, "utf8")), limits: { approval: "another person" } }),
  );
  chain = await chain.again();
  // Tokens stand for people here: each carries its own name.
  for (const name of names)
    tokens.set(
      name,
      (
        await user(chain, ["token", name, "--role", name === "Op. Erator" ? "operator" : "engineer", "--days", "1"])
      ).out.trim(),
    );
  await user(chain, ["add", "A. Dmin", "--role", "administrator"]);
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

test("limits are exported, changed, approved by another person, and judge from the next reading on", async () => {
  const first = await version(1);
  const before = await judged();
  expect(before).toMatchObject({ limitSet: 1, verdict: ["inside"] });

  const tight = { ...first, statistics: { ...first.statistics, q: { method: "fixed", limit: before.q! / 4 } } };
  const asked = await ask<{ proposal: number }>("E. Penn", "/limit-sets", { limitSet: tight, reason: "a trial" });
  expect(asked).toEqual({ status: 200, body: { done: true, proposal: 1 } });
  expect((await judged()).limitSet).toBe(1);
  const { proposals, approval } = await sets();
  expect(approval).toBe("another person");
  expect(proposals[0]).toMatchObject({ id: 1, author: "token E. Penn", reason: "a trial" });
  expect(proposals[0].differences.map(({ what }) => what)).toContain("q › limit");

  expect((await ask<{ says: string }>("E. Penn", "/limit-proposals/1/approve", {})).body.says).toMatch(
    /another person must approve/,
  );
  expect((await ask("Op. Erator", "/limit-proposals/1/approve", {})).status).toBe(403);
  expect(await ask("O. Rook", "/limit-proposals/1/approve", {})).toEqual({
    status: 200,
    body: { done: true, version: 2 },
  });
  const after = await judged();
  expect(after.limitSet).toBe(2);
  expect(after.verdict).toContain("unfamiliar");
  expect(after.ratios.q).toBeGreaterThan(1);
});

test("a proposal that waits and a version in force survive a kill", async () => {
  const set = await version(2);
  const looser = { ...set, statistics: { ...set.statistics, t2: { method: "fixed", limit: 99 } } };
  expect((await ask("O. Rook", "/limit-sets", { limitSet: looser, reason: "wider" })).body).toEqual({
    done: true,
    proposal: 2,
  });
  await chain.kill();
  chain = await chain.again();
  const { proposals, inForce } = await sets();
  expect(proposals.map(({ id }) => id)).toEqual([2]);
  expect((inForce as LimitSet).version).toBe(2);
  expect(await ask("O. Rook", "/limit-proposals/2/withdraw", { reason: "not now" })).toEqual({
    status: 200,
    body: { done: true },
  });
});

test("a roll-back is a new version that judges as the old one did, and the record tells the whole story", async () => {
  const asked = await ask<{ proposal: number }>("E. Penn", "/limit-sets/1/roll-back", { reason: "the trial is over" });
  await ask("O. Rook", `/limit-proposals/${asked.body.proposal}/approve`, {});
  const [newest, , oldest] = (await sets()).versions;
  expect(newest).toMatchObject({ version: 3, author: "token E. Penn", approver: "token O. Rook" });
  expect(newest.reason).toBe("Back to version 1. the trial is over");
  expect((await version(3)).statistics).toEqual((await version(oldest.version)).statistics);
  expect(await judged()).toMatchObject({ limitSet: 3, verdict: ["inside"] });
  const { events } = (await (
    await fetch(`${chain.url}/api/v1/events?stream=bq-201&limit=100`, {
      headers: { authorization: `Bearer ${tokens.get("E. Penn")}` },
    })
  ).json()) as { events: RecordedEvent[] };
  const story = events.filter(({ kind }) => kind.startsWith("limits")).map(({ kind }) => kind);
  expect(story.reverse()).toEqual([
    "limits waits",
    "limits in force",
    "limits waits",
    "limits withdrawn",
    "limits waits",
    "limits in force",
  ]);
});

test("what cannot be is refused in words", async () => {
  const set = await version(3);
  const refusal = async (body: unknown) => (await ask<{ says: string }>("E. Penn", "/limit-sets", body)).body.says;
  expect(await refusal({ limitSet: await version(1), reason: "old" })).toMatch(
    /made from version 1, but version 3 is in force/,
  );
  expect(await refusal({ limitSet: { ...set, alarms: "none" }, reason: "x" })).toMatch(/alarms/);
  expect(await refusal({ limitSet: set })).toMatch(/reason/);
  expect((await ask<{ says: string }>("E. Penn", "/limit-sets/9")).body.says).toBe(
    "bq-201 has no limit set 9; its newest is 3.",
  );
});
