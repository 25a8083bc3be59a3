import { describe, expect, test } from "vitest";
import { hearProcessState, openAlarms, setAsideAlarms, tick } from "../../../core/judging/index.ts";
import { SmallStream, smallRules, unfamiliarAlarm } from "./small-stream.ts";

const minute = 60_000;
const suppressed = { suppressedIn: ["cleaning", "stopped"], suppressedForMinutesAfter: 5 };
const alarms = [
  unfamiliarAlarm(suppressed),
  unfamiliarAlarm({
    ...{ key: "silent", title: "Silent", watches: { kind: "silent", periods: 6 }, ...suppressed },
    ...{ onDelay: { readings: 1 }, offDelay: { readings: 1 } },
  }),
];

class Line extends SmallStream {
  constructor() {
    super(smallRules(alarms));
  }
  says(
    state: string,
    { grade, since = this.time, receivedAt = this.time }: { grade?: string; since?: number; receivedAt?: number } = {},
  ) {
    const [next, heard] = hearProcessState(
      this.state,
      { state, since, ...(grade === undefined ? {} : { grade }) },
      receivedAt,
      this.rules,
    );
    this.state = next;
    if (heard.kind === "heard") this.notes.push(...heard.notes);
    return heard;
  }
  tick(now: number) {
    const [next, notes] = tick(this.state, now, this.time, this.rules);
    this.state = next;
    this.notes.push(...notes);
  }
  open = () => openAlarms(this.state, this.rules).map(({ key }) => key);
  aside = () => setAsideAlarms(this.state, this.rules).map(({ key }) => key);
}
const strange = { foreign: 0.3 };

describe("what the plant says of the process", () => {
  test("is on record when it changes, with what it was before, and not when it is said again", () => {
    const line = new Line();
    line.says("running", { grade: "fine" });
    expect(line.says("running", { grade: "fine" }).kind).toBe("repeat");
    line.says("running", { grade: "coarse", since: line.time + 1000 });
    line.says("stopped", { since: line.time + 2000 });
    expect(line.notes.filter(({ kind }) => kind === "process state").map(({ says }) => says)).toEqual([
      "The process is running, grade fine.",
      "The process is running, grade coarse.",
      "The process is stopped, before: running.",
    ]);
    expect(line.state.process).toEqual({ state: "stopped", since: line.time + 2000 });
  });

  test("is refused with its reason when it is older than what is known, or from the future", () => {
    const line = new Line();
    line.says("running");
    const late = line.says("cleaning", { since: line.time - 1000 });
    expect(late).toMatchObject({ kind: "refused", reason: "late" });
    const early = line.says("cleaning", { since: line.time + minute });
    expect(early).toMatchObject({ kind: "refused", reason: "future", says: expect.stringContaining("60 s ahead") });
    expect(line.state.process?.state).toBe("running");
  });
});

describe("suppression by design", () => {
  test("lasts until the line has been swept out, by the readings' own time", () => {
    const line = new Line();
    line.feed();
    line.says("cleaning");
    for (let i = 0; i < 4; i++) line.feed(strange);
    expect([line.open(), line.aside()]).toEqual([[], ["unfamiliar", "silent"]]);
    line.says("running");
    for (let i = 0; i < 29; i++) line.feed(strange); // 4 min 50 s
    expect(line.open()).toEqual([]);
    line.feed(strange);
    expect(line.open()).toEqual(["unfamiliar"]);
    expect(line.kinds().slice(-3)).toEqual([
      "alarm suppression ended",
      "alarm annunciated anew",
      "alarm suppression ended",
    ]);
  });

  test("begins anew when the line goes back into such a state before it was over", () => {
    const line = new Line();
    line.says("cleaning");
    line.feed();
    line.says("running");
    for (let i = 0; i < 20; i++) line.feed();
    line.says("stopped");
    for (let i = 0; i < 20; i++) line.feed();
    expect(line.aside()).toEqual(["unfamiliar", "silent"]);
    expect(line.kinds()).not.toContain("alarm suppression ended");
  });

  test("ends by the clock where no reading comes: an analyzer that stays silent after the cleaning is called for", () => {
    const line = new Line();
    line.feed();
    line.says("cleaning");
    const { time } = line;
    line.tick(time + 2 * minute);
    expect(line.kinds()).toContain("alarm raised unannounced");
    line.says("running", { since: time + 10 * minute, receivedAt: time + 10 * minute });
    line.tick(time + 15 * minute - 1);
    expect(line.open()).toEqual([]);
    line.tick(time + 15 * minute);
    expect(line.open()).toEqual(["silent"]);
  });

  test("an analyzer's clock that is off by an hour does not end it an hour early", () => {
    const line = new Line();
    line.feed(); // received when its own clock says so …
    line.state = { ...line.state, receivedAt: line.time + 60 * minute }; // … but ours is an hour ahead
    line.says("cleaning", { receivedAt: line.time + 60 * minute });
    line.says("running", { since: line.time + 1000, receivedAt: line.time + 60 * minute });
    line.tick(line.time + 61 * minute);
    expect(line.aside()).toEqual(["unfamiliar", "silent"]);
    line.tick(line.time + 65 * minute + 1000);
    expect(line.aside()).toEqual([]);
  });
});
