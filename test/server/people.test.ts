import { spawn } from "node:child_process";
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { WebSocket } from "ws";
import { afterFailure, type Failures, waitLeft } from "../../server/people/throttle.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { password, user as userOf } from "../people.ts";
import { program } from "../program.ts";

const people = [
  ["V. Marsh", "viewer"],
  ["O. Quill", "operator"],
  ["E. Thorne", "engineer"],
  ["A. Rook", "administrator"],
] as const;

let chain: Chain;
const config = () => join(chain.folder, "plant.json");

const user = (args: string[], input?: string) => userOf(chain, args, input);

const ask = (path: string, headers: Record<string, string> = {}, init: RequestInit = {}) =>
  fetch(`${chain.url}/api/v1${path}`, { ...init, headers });

async function signIn(name: string, secret = password): Promise<Response> {
  return ask(
    "/sign-in",
    { "content-type": "application/json" },
    { method: "POST", body: JSON.stringify({ name, password: secret }) },
  );
}
async function cookieOf(name: string): Promise<string> {
  const answer = await signIn(name);
  expect(answer.status).toBe(200);
  return answer.headers.get("set-cookie")!.split(";")[0];
}

beforeAll(async () => {
  chain = await startChain();
  for (const [name, role] of people)
    expect(await user(["add", name, "--role", role], `${password}\n`)).toMatchObject({ code: 0 });
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

describe("signing in", () => {
  test("with people on the list, nothing but the door answers to somebody unknown", async () => {
    for (const path of ["/plant", "/events", "/refusals", "/streams/bq-305/trend?from=1&to=2", "/openapi.json"]) {
      const answer = await ask(path);
      expect([path, answer.status]).toEqual([path, 401]);
      expect(await answer.json()).toEqual({ code: "sign-in-needed", says: "Sign in first." });
    }
  });

  test("the cookie is kept from scripts and from other sites, and the plant says who is there", async () => {
    const answer = await signIn("O. Quill");
    expect(answer.headers.get("set-cookie")).toMatch(/^millrace=[\w-]{43}; .*HttpOnly; SameSite=Strict$/);
    const cookie = answer.headers.get("set-cookie")!.split(";")[0];
    const plant = (await (await ask("/plant", { cookie })).json()) as { person: unknown };
    expect(plant.person).toEqual({ name: "O. Quill", role: "operator", signedIn: true });
  });

  test("signing out ends the session and its live link", async () => {
    const cookie = await cookieOf("V. Marsh");
    const socket = new WebSocket(`${chain.url.replace("http", "ws")}/live`, { headers: { cookie } });
    const closed = new Promise<number>((resolve) => socket.once("close", (code) => resolve(code)));
    await new Promise<void>((resolve) => socket.once("open", resolve));
    expect((await ask("/sign-out", { cookie }, { method: "POST" })).status).toBe(204);
    expect(await closed).toBe(4401);
    expect((await ask("/plant", { cookie })).status).toBe(401);
  });

  test("without a session there is no live link", async () => {
    const socket = new WebSocket(`${chain.url.replace("http", "ws")}/live`);
    const error = await new Promise<Error>((resolve) => socket.once("error", resolve));
    expect(error.message).toContain("403");
  });

  test("a wrong password and an unknown name get the same answer; after some failures the next try waits", async () => {
    const wrong = await signIn("O. Quill", "not the password");
    const unknown = await signIn("N. Obody", "not the password");
    expect([wrong.status, await wrong.text()]).toEqual([unknown.status, await unknown.text()]);
    let status = 0;
    for (let i = 0; i < 8 && status !== 429; i++) status = (await signIn("N. Obody", "not the password")).status;
    expect(status).toBe(429);
    expect((await signIn("O. Quill")).status).toBe(200); // others are not kept out
    const cookie = await cookieOf("A. Rook");
    const { events } = (await (await ask("/events?limit=50", { cookie })).json()) as {
      events: { kind: string; says: string }[];
    };
    expect(events.some(({ kind, says }) => kind === "sign-in refused" && says.includes("N. Obody"))).toBe(true);
    expect(events.every(({ says }) => !says.includes("not the password"))).toBe(true);
  });

  test("a person who leaves is signed out at once, and their name stays", async () => {
    await user(["add", "T. Emp", "--role", "operator"], `${password}\n`);
    const cookie = await cookieOf("T. Emp");
    expect((await user(["leave", "T. Emp"])).code).toBe(0);
    expect((await ask("/plant", { cookie })).status).toBe(401);
    expect((await signIn("T. Emp")).status).toBe(401);
    expect((await user(["list"])).out).toContain("T. Emp: operator, has left");
  });

  test("a token lets a program in until its end, by its role", async () => {
    const { out } = await user(["token", "report export", "--role", "viewer", "--days", "1"]);
    const authorization = `Bearer ${out.trim()}`;
    expect(await (await ask("/me", { authorization })).json()).toEqual({
      name: "token report export",
      role: "viewer",
    });
    await user(["remove-token", "report export"]);
    expect((await ask("/me", { authorization })).status).toBe(401);
  });
});

describe("what the command refuses, it says", () => {
  test.each<[string, string[], string, number, RegExp]>([
    [
      "a short password",
      ["add", "S. Hort", "--role", "viewer"],
      "short\n",
      1,
      /the password has 5 characters, expected at least 10/,
    ],
    ["a name twice", ["add", "O. Quill", "--role", "viewer"], `${password}\n`, 1, /O\. Quill is known already/],
    ["no password", ["add", "N. One", "--role", "viewer"], "", 1, /no password came on standard input/],
    [
      "a role that is none",
      ["add", "N. One", "--role", "boss"],
      `${password}\n`,
      2,
      /viewer, operator, engineer, administrator/,
    ],
    ["somebody unknown", ["leave", "W. Ho"], "", 1, /W\. Ho is nobody here; there are A\. Rook, E\. Thorne/],
  ])("%s", async (_, args, input, code, expected) => {
    const outcome = await user(args, input);
    expect(outcome.code).toBe(code);
    expect(outcome.err).toMatch(expected);
  });
});

test("each failed sign-in doubles the wait, up to a quarter of an hour", () => {
  let failures: Failures | undefined;
  const waits = Array.from({ length: 16 }, () => {
    failures = afterFailure(failures, 0);
    return waitLeft(failures, 0) / 1000;
  });
  expect(waits.slice(0, 8)).toEqual([0, 0, 0, 0, 2, 4, 8, 16]);
  expect(waits.at(-1)).toBe(900);
  expect(waitLeft(failures, 900_000)).toBe(0);
});

describe("reached from other machines", () => {
  const startWith = async (http: object): Promise<string> => {
    const settings = JSON.parse(readFileSync(config(), "utf8"));
    const file = join(chain.folder, "open.json");
    writeFileSync(file, JSON.stringify({ ...settings, demo: false, data: "elsewhere", http }));
    const child = spawn(process.execPath, [program, "serve", "--config", file]);
    let said = "";
    for (const stream of [child.stdout, child.stderr]) stream.on("data", (chunk) => (said += String(chunk)));
    const ended = new Promise((resolve) => child.once("exit", resolve));
    await Promise.race([ended, eventually("a start", () => said.includes("http"), 8000).catch(() => {})]);
    child.kill("SIGKILL");
    await ended;
    return said;
  };

  test.each<[string, object, RegExp]>([
    [
      "without TLS",
      { host: "0.0.0.0", port: 0 },
      /http\.host is "0\.0\.0\.0", which other machines reach, without TLS/,
    ],
    ["without names", { host: "0.0.0.0", port: 0, tlsByProxy: true }, /http\.names is missing/],
    [
      "without people",
      { host: "0.0.0.0", port: 0, tlsByProxy: true, names: ["mill.example"] },
      /nobody who could sign in.*user add NAME/s,
    ],
  ])("%s it does not start", async (_, http, expected) => {
    expect(await startWith(http)).toMatch(expected);
  });
});
