import { connectAsync } from "mqtt";
import { expect, test } from "vitest";
import { eventually, prefix, startChain } from "../chain.ts";

test("an alarm that is shelved, and one that comes back from the shelf, is published as it is put on record", async () => {
  const chain = await startChain();
  const client = await connectAsync(chain.brokerUrl);
  const heard: { kind: string; by?: string; setAside?: { key: string } }[] = [];
  client.on("message", (_topic, payload) => heard.push(JSON.parse(String(payload))));
  await client.subscribeAsync(`${prefix}/bq-305/alarm`, { qos: 1 });
  const ask = async (what: string, body: object) => {
    const answer = await fetch(`${chain.url}/api/v1/streams/bq-305/alarms/unfamiliar/${what}`, {
      method: "POST",
      headers: { "content-type": "application/json" },
      body: JSON.stringify(body),
    });
    expect(answer.status).toBe(200);
  };
  await ask("shelve", { reason: "sample taken", minutes: 5 });
  await ask("unshelve", {});
  await eventually("both heard", () => heard.length >= 2);
  expect(heard).toEqual([
    expect.objectContaining({
      kind: "alarm shelved",
      by: expect.any(String),
      setAside: expect.objectContaining({ key: "unfamiliar" }),
    }),
    expect.objectContaining({ kind: "alarm unshelved", setAside: expect.objectContaining({ key: "unfamiliar" }) }),
  ]);
  await client.endAsync();
  await chain.stop();
  chain.remove();
});
