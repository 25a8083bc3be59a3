import { describe, expect, test } from "vitest";
import {
  decideLimits,
  defaultAlarms,
  differences,
  type LimitAnswer,
  type LimitAsk,
  type LimitSet,
  type LimitSituation,
} from "../../../core/limit-set/index.ts";

const inForce: LimitSet = {
  format: "millrace-limit-set",
  formatVersion: 1,
  stream: "bq-201",
  version: 3,
  model: "m1",
  statistics: {
    t2: { method: "f", confidence: 0.99, limit: 12 },
    q: { method: "box-moments", confidence: 0.99, limit: 2e-6 },
    nearest: { method: "largest", limit: 0.9 },
  },
  alarms: defaultAlarms(),
  author: "A. Thorne",
  reason: "first",
  time: 100,
};
const wider: LimitSet = { ...inForce, statistics: { ...inForce.statistics, q: { method: "fixed", limit: 3e-6 } } };
const situation: LimitSituation = {
  inForce,
  proposals: { waiting: [], last: 0 },
  properties: ["water"],
  approval: false,
};
const change: LimitAsk = {
  kind: "change limits",
  by: "E. Penn",
  at: 500,
  reason: "too many flags at night",
  wanted: wider,
};

function decide<Kind extends LimitAnswer["kind"]>(ask: LimitAsk, at: LimitSituation, kind: Kind) {
  const frozen = structuredClone(at);
  const answer = decideLimits(ask, at);
  expect(at).toEqual(frozen);
  expect(answer.kind).toBe(kind);
  return answer as Extract<LimitAnswer, { kind: Kind }>;
}

describe("a change of limits", () => {
  test("is a new version, with its author, reason and time, and says what is different", () => {
    const { set, says } = decide(change, situation, "in force");
    expect(set).toEqual({ ...wider, version: 4, author: "E. Penn", reason: "too many flags at night", time: 500 });
    expect(says).toBe(
      "Limit set 4 instead of 3, by E. Penn: too many flags at night. q › method: box-moments → fixed; q › confidence: gone, was 0.99; q › limit: 0.000002 → 0.000003",
    );
  });

  test.each<[string, Partial<Extract<LimitAsk, { kind: "change limits" }>>, RegExp]>([
    ["without a reason", { reason: "  " }, /needs its reason/],
    ["for another stream", { wanted: { ...wider, stream: "bq-305" } }, /for bq-305, expected bq-201/],
    [
      "from a version that is in force no more",
      { wanted: { ...wider, version: 2 } },
      /from version 2, but version 3 is in force/,
    ],
    ["for another model", { wanted: { ...wider, model: "m2" } }, /another model/],
    ["that changes nothing", { wanted: inForce }, /changes nothing/],
    [
      "with a limit of zero",
      { wanted: { ...wider, statistics: { ...wider.statistics, q: { method: "fixed", limit: 0 } } } },
      /statistics\.q\.limit is 0/,
    ],
    [
      "with two alarms of one key",
      { wanted: { ...wider, alarms: [wider.alarms[0], wider.alarms[0]] } },
      /alarms\[1\]\.key is "unfamiliar" again/,
    ],
  ])("%s is rejected with the reason", (_, part, why) => {
    expect(decide({ ...change, ...part }, situation, "rejected").why).toMatch(why);
  });
});

describe("where the plant asks for another person", () => {
  const strict = { ...situation, approval: true };
  const waiting = () => {
    const { proposals, proposal } = decide(change, strict, "waits");
    return { at: { ...strict, proposals }, id: proposal.id };
  };

  test("a change waits, and another person puts it in force", () => {
    const { at, id } = waiting();
    const { set, proposals } = decide({ kind: "approve limits", by: "O. Rook", at: 900, proposal: id }, at, "in force");
    expect(set).toMatchObject({ version: 4, author: "E. Penn", approver: "O. Rook", time: 900 });
    expect(proposals).toEqual({ waiting: [], last: 1 });
  });

  test("its author cannot approve it", () => {
    const { at, id } = waiting();
    expect(decide({ kind: "approve limits", by: "E. Penn", at: 900, proposal: id }, at, "rejected").why).toMatch(
      /another person must approve/,
    );
  });

  test("it is void once other limits are in force", () => {
    const { at, id } = waiting();
    const moved = { ...at, inForce: { ...inForce, version: 4 } };
    expect(decide({ kind: "approve limits", by: "O. Rook", at: 900, proposal: id }, moved, "rejected").why).toMatch(
      /made from version 3, but version 4 is in force/,
    );
  });

  test("withdrawn it is gone, and its number is not used again", () => {
    const { at, id } = waiting();
    const { proposals } = decide(
      { kind: "withdraw limits", by: "E. Penn", at: 900, proposal: id, reason: "a slip" },
      at,
      "withdrawn",
    );
    expect(proposals).toEqual({ waiting: [], last: 1 });
    const next = decide(change, { ...strict, proposals }, "waits");
    expect(next.proposal.id).toBe(2);
    expect(
      decide({ kind: "approve limits", by: "O. Rook", at: 1, proposal: 1 }, { ...strict, proposals }, "rejected").why,
    ).toMatch(/no proposal 1 waits; none does/);
  });

  test("the approver of the version before is not carried over to a change that needs none", () => {
    const approved = { ...situation, inForce: { ...inForce, approver: "O. Rook" } };
    expect(decide(change, approved, "in force").set).not.toHaveProperty("approver");
  });
});

test("differences name a changed delay, a new and a removed alarm, and nothing else", () => {
  const [first, second, ...others] = inForce.alarms;
  const after = {
    ...inForce,
    alarms: [{ ...first, onDelay: { readings: 5 } }, ...others, { ...second, key: "other", title: "Other" }],
  };
  expect(differences(inForce, after)).toEqual([
    { what: "unfamiliar › onDelay › readings", before: "3", after: "5" },
    { what: "extrapolated", before: `alarm "${second.title}"` },
    { what: "other", after: 'alarm "Other"' },
  ]);
  const another: LimitSet = { ...inForce, author: "x", reason: "y", time: 9, version: 7 };
  expect(differences(inForce, another)).toEqual([]);
});
