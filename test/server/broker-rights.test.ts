import { expect, test } from "vitest";
import { type Peer, whyNotPublish } from "../../server/broker/rights.ts";

const root = "millrace/works/";
const service: Peer = { kind: "service" };
const anyone: Peer = { kind: "anyone" };
const one: Peer = { kind: "publisher", name: "analyzer-1", streams: ["s-1"] };
const all: Peer = { kind: "publisher", name: "gateway", streams: ["*"] };
const listener: Peer = { kind: "publisher", name: "listener", streams: [] };

test.each<[string, string, Peer[], Peer[]]>([
  ["a reading", "millrace/works/s-1/reading", [service, anyone, one, all], [listener]],
  ["a process state", "millrace/works/s-1/state", [service, anyone, one, all], [listener]],
  ["a reading of another stream", "millrace/works/s-2/reading", [service, anyone, all], [one, listener]],
  ["what the engine says of an alarm", "millrace/works/s-1/alarm", [service], [anyone, one, all, listener]],
  ["what the engine says of itself", "millrace/works/status", [service], [anyone, one, all, listener]],
  ["a reading of another site", "millrace/elsewhere/s-1/reading", [service, anyone], [one, all, listener]],
  ["a stream's name with a level more", "millrace/works/x/s-1/reading", [service, anyone], [one, listener]],
  ["a topic of somebody else", "weather/today", [service, anyone], [one, all, listener]],
  ["the broker's own topics", "$SYS/x", [], [service, anyone, one, all, listener]],
])("%s (%s) may be published by some and by no others", (_what, topic, may, mayNot) => {
  for (const peer of may) expect([peer, whyNotPublish(peer, topic, root)]).toEqual([peer, undefined]);
  for (const peer of mayNot) expect([peer, whyNotPublish(peer, topic, root)]).toEqual([peer, expect.any(String)]);
  expect(whyNotPublish(undefined, topic, root)).toBe("has not signed in");
});
