import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Shifts } from "../../core/messages/index.ts";
import { parsePlantConfig } from "../../server/config/plant-config.ts";
import { type Chain, startChain } from "../chain.ts";

const template = fileURLToPath(new URL("../../simulator/brindle-quay/plant.json", import.meta.url));
const settings = JSON.parse(readFileSync(template, "utf8"));

describe("GET /shifts", () => {
  let chain: Chain;
  beforeAll(async () => {
    chain = await startChain();
  });
  afterAll(async () => {
    await chain.stop();
    chain.remove();
  });

  test("gives the shift about a moment with its neighbours, in the plant's zone", async () => {
    const around = Date.parse("2026-07-01T10:00:00Z");
    const { before, current, after } = await chain.get<Shifts>(`/shifts?around=${around}&before=2`);
    // London is an hour ahead of UTC in July: 06:00 there is 05:00 UTC. 1 July is the 177th day after 5 January: the second of eight.
    expect(current).toEqual({
      from: Date.parse("2026-07-01T05:00:00Z"),
      to: Date.parse("2026-07-01T17:00:00Z"),
      name: "Day",
      team: "Amber",
      staffed: true,
    });
    expect(before.map(({ name, team, to }) => [name, team, to])).toEqual([
      ["Day", "Amber", before[1].from],
      ["Night", "Dune", current.from],
    ]);
    expect(after).toMatchObject([{ name: "Night", from: current.to }]);
  });

  test("without a moment it is about now", async () => {
    const { current } = await chain.get<Shifts>("/shifts");
    expect(current.from).toBeLessThanOrEqual(Date.now());
    expect(current.to).toBeGreaterThan(Date.now());
  });

  test("a time beyond all calendars is refused in words", async () => {
    await expect(chain.get("/shifts?around=99999999999999")).rejects.toThrow(/400 .*around/);
  });
});

describe("a plant's shifts in its configuration", () => {
  const read = (change: object) => () => parsePlantConfig(JSON.stringify({ ...settings, ...change }), "plant.json");
  test("a time zone that does not exist stops the start, naming the field", () => {
    expect(read({ timeZone: "Europe/Atlantis" })).toThrow(/plant\.json: timeZone is "Europe\/Atlantis"/);
  });
  test("shifts that overlap stop the start, naming them", () => {
    const shifts = [
      { name: "Day", from: "06:00", to: "19:00" },
      { name: "Night", from: "18:00", to: "06:00" },
    ];
    expect(read({ shifts: { shifts } })).toThrow(/plant\.json: shifts: the shifts Day \(to 19:00\) and Night/);
  });
  test("a check of a shift that there is not, and a key that stands twice, are named", () => {
    const check = { key: "gates", says: "Gates closed" };
    expect(read({ checks: [{ ...check, shifts: ["Dusk"] }] })).toThrow(
      /checks\[0\]\.shifts is "Dusk", expected a shift of the plan \(Day, Night\)/,
    );
    expect(read({ checks: [check, check] })).toThrow(/checks\[1\]\.key is "gates" again/);
  });
  test("a time that is none is named by its field", () => {
    expect(read({ shifts: { shifts: [{ name: "Day", from: "6:00", to: "18:00" }] } })).toThrow(
      /shifts\.shifts\[0\]\.from is "6:00"/,
    );
  });
});
