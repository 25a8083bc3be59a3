import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { LimitSet } from "../../core/limit-set/index.ts";
import { type Role, roles } from "../../server/people/person.ts";
import { type Chain, startChain } from "../chain.ts";
import { user } from "../people.ts";

/**
 * Who may do what, written by hand from what each command does: the least role, and a body that is well formed, so that nothing but the role
 * can be why it is refused. `anybody`: whoever is signed in; `door`: nobody needs to be.
 *
 * The routes come from the service's own description of itself: one that is not in this table fails the test.
 */
interface Row {
  least: Role | "anybody" | "door";
  body?: unknown;
  type?: string;
}
let limitSet: LimitSet;
const reason = "a trial";
const labIdentity = { property: "water", time: 1, method: "", sample: "" };
const table = (): Record<string, Row> => ({
  "POST /sign-in": { least: "door", body: { name: "N. Obody", password: "not the password" } },
  "POST /sign-out": { least: "door" },
  "PUT /me/settings": { least: "anybody", body: { theme: "dark", lanes: [], properties: {} } },
  "POST /streams/{id}/alarms/{key}/acknowledge": { least: "operator", body: {} },
  "POST /streams/{id}/alarms/{key}/reset": { least: "operator", body: {} },
  "POST /streams/{id}/alarms/{key}/unshelve": { least: "operator", body: {} },
  "POST /streams/{id}/alarms/{key}/shelve": { least: "operator", body: { reason } },
  "POST /streams/{id}/alarms/{key}/out-of-service": { least: "engineer", body: { reason } },
  "POST /streams/{id}/alarms/{key}/return-to-service": { least: "engineer", body: {} },
  "POST /streams/{id}/excursions/{kind}/{start}/label": { least: "operator", body: { label: "process change" } },
  "POST /streams/{id}/excursions/{kind}/{start}/notes": { least: "operator", body: { note: "seen" } },
  "POST /handover/entries": {
    least: "operator",
    body: { shift: Date.now(), write: { kind: "note", about: { kind: "shift" }, says: "seen" } },
  },
  "POST /handover/signatures": {
    least: "operator",
    body: { shift: Date.now(), side: "outgoing", seen: null, name: "N. Obody", password: "not the password" },
  },
  "POST /streams/{id}/load": { least: "operator", body: "\n", type: "application/x-ndjson" },
  "POST /streams/{id}/lab": { least: "operator", body: { time: 1, property: "water", value: 1, unit: "wt%" } },
  "POST /streams/{id}/lab/table": { least: "engineer", body: "time,property\n", type: "text/csv" },
  "POST /streams/{id}/lab/correct": { least: "engineer", body: { result: labIdentity, value: 1, reason } },
  "POST /streams/{id}/lab/withdraw": { least: "engineer", body: { result: labIdentity, reason } },
  "POST /streams/{id}/rehearsals": { least: "operator", body: { from: 1, to: 2 } },
  "DELETE /rehearsals/{rehearsal}": { least: "operator" },
  "PUT /streams/{id}/kept-limits/{name}": {
    least: "engineer",
    body: { limitSet, stretch: { from: 1, to: 2, cuts: [], cutStates: [] } },
  },
  "DELETE /streams/{id}/kept-limits/{name}": { least: "engineer" },
  "POST /streams/{id}/limit-sets/differences": { least: "anybody", body: { limitSet } },
  "POST /streams/{id}/limit-sets": { least: "engineer", body: { limitSet, reason } },
  "POST /streams/{id}/limit-sets/{version}/roll-back": { least: "engineer", body: { reason } },
  "POST /streams/{id}/limit-proposals/{proposal}/approve": { least: "engineer" },
  "POST /streams/{id}/limit-proposals/{proposal}/withdraw": { least: "engineer", body: { reason } },
});
/** what stands for a path's parameters */
const parameters: Record<string, string> = {
  ...{ id: "bq-305", key: "unfamiliar", kind: "unfamiliar" },
  rehearsal: "00000000-0000-4000-8000-000000000000",
};

let chain: Chain;
/** a token of each role */
const tokens = new Map<Role, string>();
/** "METHOD /path" of every route, as GET /api/v1/openapi.json tells them */
let routes: string[];

beforeAll(async () => {
  chain = await startChain();
  // Beside the tokens one person: from the first on, whoever shows nothing is nobody.
  await user(chain, ["add", "A. Rook", "--role", "administrator"]);
  for (const role of roles)
    tokens.set(role, (await user(chain, ["token", role, "--role", role, "--days", "1"])).out.trim());
  const described = (await (await send("GET /openapi.json", "administrator")).json()) as {
    paths: Record<string, object>;
  };
  routes = Object.entries(described.paths).flatMap(([path, methods]) =>
    Object.keys(methods).map((method) => `${method.toUpperCase()} ${path.replace("/api/v1", "")}`),
  );
  ({ inForce: limitSet } = (await (await send("GET /streams/{id}/limit-sets", "viewer")).json()) as {
    inForce: LimitSet;
  });
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

function send(route: string, as: Role | "nobody", { body, type = "application/json" }: Partial<Row> = {}) {
  const [method, path] = route.split(" ");
  const filled = path.replace(/\{(\w+)\}/g, (_, name) => parameters[name] ?? "1");
  const headers: Record<string, string> = as === "nobody" ? {} : { authorization: `Bearer ${tokens.get(as)}` };
  if (body !== undefined) headers["content-type"] = type;
  return fetch(`${chain.url}/api/v1${filled}`, {
    method,
    headers,
    body: body === undefined ? undefined : typeof body === "string" ? body : JSON.stringify(body),
  });
}

const changes = () => routes.filter((route) => !route.startsWith("GET "));

test("every route that changes something has a row, and every row a route", () => {
  expect(changes().sort()).toEqual(Object.keys(table()).sort());
});

describe("what changes something is refused below its least role", () => {
  /** "allowed": the door was passed, whatever became of the command then. */
  const outcomes = async (who: Role | "nobody") => {
    const seen: Record<string, string> = {};
    for (const [route, row] of Object.entries(table())) {
      const answer = await send(route, who, row);
      const { code } = answer.status === 204 ? { code: "" } : ((await answer.json()) as { code: string });
      expect([route, answer.status, code]).not.toEqual([route, 400, "bad-request"]); // then the body here is wrong
      seen[route] =
        code === "sign-in-needed" ? "sign in first" : answer.status === 403 ? `forbidden: ${code}` : "allowed";
    }
    return seen;
  };
  const expected = (allowed: (least: Row["least"]) => boolean, otherwise: string) =>
    Object.fromEntries(
      Object.entries(table()).map(([route, { least }]) => [route, allowed(least) ? "allowed" : otherwise]),
    );

  test("by nobody", async () => {
    expect(await outcomes("nobody")).toEqual(expected((least) => least === "door", "sign in first"));
  });

  test.each(roles)("by role: %s", async (role) => {
    const rank = (least: Row["least"]) => roles.indexOf(least as Role); // −1 for anybody and the door
    expect(await outcomes(role)).toEqual(
      expected((least) => rank(least) <= roles.indexOf(role), "forbidden: not-allowed"),
    );
  });
});

test("what is only read is for whoever is signed in, and for nobody else", async () => {
  const reads = routes.filter((route) => route.startsWith("GET "));
  expect(reads.length).toBeGreaterThan(8);
  for (const route of reads) {
    expect([route, (await send(route, "nobody")).status]).toEqual([route, 401]);
    const { status } = await send(route, "viewer");
    expect([route, [401, 403].includes(status)]).toEqual([route, false]);
  }
});

test("a refusal says who is what, and what it takes", async () => {
  const answer = await send("POST /streams/{id}/alarms/{key}/out-of-service", "operator", { body: { reason } });
  expect([answer.status, await answer.json()]).toEqual([
    403,
    { code: "not-allowed", says: "token operator is operator; this needs engineer." },
  ]);
});
