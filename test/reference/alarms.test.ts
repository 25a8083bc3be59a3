import { describe, expect, test } from "vitest";
import {
  type AlarmEvent,
  type AlarmState,
  advance,
  detect,
  floodsIn,
  isSetAside,
  type LifecycleRules,
  recommendations,
  recommendedShares,
  restingDetector,
  stateWord,
  waits,
} from "../../core/alarms/index.ts";
import { normalQuantile } from "../../core/limits/index.ts";
import { seededRandom } from "../../core/pls/index.ts";

const minute = 60_000;

/*
 * Source: the states and transitions of ANSI/ISA-18.2-2016 and IEC 62682:2022 (letters and names from memory; the diagram is normative in
 * the standards). Here as the standards tell them, state by state and arrow by arrow; every pair of state and event, the illegal ones too,
 * is walked in test/core/alarms/lifecycle.test.ts.
 */
describe("the states of ISA-18.2 / IEC 62682", () => {
  const rules: LifecycleRules = {
    annunciates: true,
    latching: false,
    mostShelvedMs: 480 * minute,
    remindAfterMs: 60 * minute,
  };
  const latching = { ...rules, latching: true };
  const by = "a person";
  const events = {
    raise: { kind: "raise", at: 1, since: 0, says: "", limitSet: 1 },
    clear: { kind: "clear", at: 2 },
    acknowledge: { kind: "acknowledge", at: 3, by },
    reset: { kind: "reset", at: 4, by },
    remind: { kind: "wall clock", at: 3 + 60 * minute },
    shelve: { kind: "shelve", at: 5, by, reason: "known", forMs: 10 * minute },
    unshelve: { kind: "unshelve", at: 6, by },
    "shelf runs out": { kind: "wall clock", at: 5 + 10 * minute },
    suppress: { kind: "suppress", at: 7, state: "stopped" },
    "leave state": { kind: "leave suppressing state", at: 8, until: 8 },
    "process goes on": { kind: "process time", at: 8 },
    "out of service": { kind: "take out of service", at: 9, by, reason: "known" },
    "return to service": { kind: "return to service", at: 10, by },
  } satisfies Record<string, AlarmEvent>;
  type Name = keyof typeof events;
  const reach = (names: Name[], which: LifecycleRules) =>
    names.reduce<AlarmState | undefined>((state, name) => advance(state, events[name], which)[0], undefined);

  const states: [letter: string, way: Name[], which: LifecycleRules, active: boolean | "either", asks: boolean][] = [
    ["A normal", [], rules, false, false],
    ["B unacknowledged", ["raise"], rules, true, true],
    ["C acknowledged", ["raise", "acknowledge"], rules, true, false],
    ["D returned unacknowledged", ["raise", "clear"], rules, false, true],
    ["E latched unacknowledged", ["raise", "clear"], latching, false, true],
    ["F latched acknowledged", ["raise", "acknowledge", "clear"], latching, false, false],
    ["G shelved", ["shelve"], rules, "either", false],
    ["H suppressed", ["suppress"], rules, "either", false],
    ["I out of service", ["out of service"], rules, "either", false],
  ];

  test.each(states)("%s: process condition, annunciation and acknowledgement", (letter, way, which, active, asks) => {
    const state = reach(way, which);
    expect(stateWord(state)).toBe(letter.slice(2));
    expect(waits(state)).toBe(asks);
    if (active === "either") {
      // It goes on being evaluated: the condition comes and goes beneath.
      const held = reach([...way, "raise"], which);
      expect([isSetAside(held), held?.active, waits(held), stateWord(held)]).toEqual([
        true,
        true,
        false,
        letter.slice(2),
      ]);
    } else {
      expect(state?.active ?? false).toBe(active);
    }
  });

  const arrows: [arrow: string, from: Name[], by: Name[], to: string, which: LifecycleRules][] = [
    ["A → B condition true", [], ["raise"], "unacknowledged", rules],
    ["B → C acknowledge", ["raise"], ["acknowledge"], "acknowledged", rules],
    ["C → A clear", ["raise", "acknowledge"], ["clear"], "normal", rules],
    ["B → D clear before it is acknowledged", ["raise"], ["clear"], "returned unacknowledged", rules],
    ["D → A acknowledge", ["raise", "clear"], ["acknowledge"], "normal", rules],
    ["D → B comes again", ["raise", "clear"], ["raise"], "unacknowledged", rules],
    ["B → E latching, clear", ["raise"], ["clear"], "latched unacknowledged", latching],
    ["C → F latching, clear", ["raise", "acknowledge"], ["clear"], "latched acknowledged", latching],
    ["E → F acknowledge", ["raise", "clear"], ["acknowledge"], "latched acknowledged", latching],
    ["F → A reset", ["raise", "acknowledge", "clear"], ["reset"], "normal", latching],
    ["E → B comes again", ["raise", "clear"], ["raise"], "unacknowledged", latching],
    ["F → B comes again", ["raise", "acknowledge", "clear"], ["raise"], "unacknowledged", latching],
    ["C → B re-annunciation by timer", ["raise", "acknowledge"], ["remind"], "unacknowledged", rules],
    ["G → A, clear", ["shelve"], ["unshelve"], "normal", rules],
    ["G → B, the condition holds", ["raise", "acknowledge", "shelve"], ["unshelve"], "unacknowledged", rules],
    ["G → B by itself", ["raise", "acknowledge", "shelve"], ["shelf runs out"], "unacknowledged", rules],
    ["H → A, clear", ["suppress"], ["leave state", "process goes on"], "normal", rules],
    [
      "H → B, the condition holds",
      ["raise", "acknowledge", "suppress"],
      ["leave state", "process goes on"],
      "unacknowledged",
      rules,
    ],
    ["I → A, clear", ["out of service"], ["return to service"], "normal", rules],
    [
      "I → B, the condition holds",
      ["raise", "acknowledge", "out of service"],
      ["return to service"],
      "unacknowledged",
      rules,
    ],
  ];
  test.each(arrows)("%s", (_, from, by, to, which) => {
    expect(stateWord(reach([...from, ...by], which))).toBe(to);
  });

  test.each(states.slice(0, 6))("%s → G, H or I", (_, way, which) => {
    expect(stateWord(reach([...way, "shelve"], which))).toBe("shelved");
    expect(stateWord(reach([...way, "suppress"], which))).toBe("suppressed");
    expect(stateWord(reach([...way, "out of service"], which))).toBe("out of service");
  });

  test("reset never works while the condition is true", () => {
    for (const way of [["raise"], ["raise", "acknowledge"]] satisfies Name[][]) {
      const state = reach(way, latching);
      expect(advance(state, events.reset, latching)).toEqual([state, [expect.objectContaining({ kind: "rejected" })]]);
    }
  });
});

/*
 * Source: Adnan, Izadi & Chen, J. Process Control 21 (2011) 1318–1331, delay timers by Markov chains: independent samples, p the chance of
 * a sample beyond the limit, raised after n in a row, cleared after m in a row. The formulas and the tables are written out in the
 * project's field notes, section 1.5, where they were recomputed; here the detector itself is run on random samples.
 */
describe("delay timers", () => {
  /** Runs the detector over `count` samples; the share of them in alarm, and how often it was raised. */
  function run(beyond: () => boolean, n: number, m: number, count: number) {
    let state = restingDetector;
    let inAlarm = 0;
    let raised = 0;
    const delays = { onDelay: { readings: n }, offDelay: { readings: m } };
    for (let i = 0; i < count; i++) {
      const [next, signal] = detect(state, beyond() ? "beyond" : "clear", i, delays);
      state = next;
      if (state.active) inAlarm++;
      if (signal.kind === "raise") raised++;
    }
    return { share: inAlarm / count, perDay: (raised / count) * 1440 };
  }
  const independent = (p: number, seed: number) => {
    const random = seededRandom(seed);
    return () => random() < p;
  };

  test.each([
    [0.3, 1, 1],
    [0.3, 2, 2],
    [0.3, 3, 2],
    [0.5, 2, 4],
    [0.6, 3, 3],
  ])("share of time in alarm with p = %f, n = %i, m = %i", (p, n, m) => {
    const q = 1 - p;
    const sum = (base: number, terms: number) =>
      Array.from({ length: terms }, (_, i) => base ** i).reduce((a, b) => a + b);
    const expected = (p ** n * sum(q, m)) / (p ** n * sum(q, m) + q ** m * sum(p, n));
    // 200 000 samples: the standard deviation of the share is below 0.004 for the longest of these runs.
    expect(Math.abs(run(independent(p, 17), n, m, 200_000).share - expected)).toBeLessThan(0.012);
  });

  // Mean delay in readings when a fault shows in 50, 80, 95 % of readings: (1 − pⁿ)/((1 − p) pⁿ), as printed in the field notes.
  test.each([
    [0.5, 1, 2],
    [0.5, 2, 6],
    [0.5, 3, 14],
    [0.5, 5, 62],
    [0.8, 2, 2.8],
    [0.8, 3, 4.8],
    [0.8, 5, 10],
    [0.95, 2, 2.2],
    [0.95, 3, 3.3],
    [0.95, 5, 5.8],
  ])("mean delay with p = %f, n = %i: %f readings", (p, n, printed) => {
    const beyond = independent(p, 23);
    const delays = { onDelay: { readings: n }, offDelay: { readings: 1 } };
    const runs = 4000;
    let readings = 0;
    for (let i = 0; i < runs; i++) {
      for (let state = restingDetector; !state.active; readings++) {
        [state] = detect(state, beyond() ? "beyond" : "clear", 0, delays);
      }
    }
    const expected = (1 - p ** n) / ((1 - p) * p ** n);
    expect(Number(expected.toPrecision(2))).toBe(printed);
    expect(Math.abs(readings / runs / expected - 1)).toBeLessThan(0.06);
  });

  // False annunciations per 1440 readings of a healthy process, n in a row to raise and to clear (the table's two digits).
  test.each([
    ["independent", 0, 0.05, 1, 69],
    ["independent", 0, 0.05, 2, 3.4],
    ["independent", 0, 0.01, 1, 14],
    ["AR(1) 0.8", 0.8, 0.01, 1, 9],
    ["AR(1) 0.8", 0.8, 0.01, 2, 3],
    ["AR(1) 0.8", 0.8, 0.01, 3, 1.3],
    ["AR(1) 0.9", 0.9, 0.01, 3, 1.6],
  ])("false annunciations a day: %s %f, p = %f, n = %i: %f", (_, phi, p, n, printed) => {
    const random = seededRandom(29);
    const limit = normalQuantile(1 - p);
    let x = 0;
    const noise = Math.sqrt(1 - phi * phi);
    const beyond = () => {
      x = phi * x + noise * Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
      return x > limit;
    };
    const { perDay } = run(beyond, n, n, 1_000_000);
    expect(Math.abs(perDay / printed - 1), `${perDay} a day, printed ${printed}`).toBeLessThan(0.1);
  });
});

// Source: ISA-18.2-2009 (also IEC 62682:2014), definition of a flood: begins above 10 new alarms in 10 min, ends below 5 in 10 min.
describe("alarm flood", () => {
  const times = (n: number, everyMs: number) => Array.from({ length: n }, (_, i) => i * everyMs);
  test("ten new alarms in ten minutes are none, eleven are one", () => {
    expect(floodsIn(times(10, minute), 10 * 24 * 60 * minute)).toHaveLength(0);
    expect(floodsIn(times(11, 0.9 * minute), 10 * 24 * 60 * minute)).toHaveLength(1);
  });
  test("one every two minutes keeps it going, one every three lets it end", () => {
    const rush = times(11, 1000);
    const then = (gap: number) => [...rush, ...times(10, gap).map((at) => 10_000 + gap + at)];
    expect(floodsIn(then(2 * minute), 24 * 60 * minute)[0].end).toBeGreaterThan(20 * minute);
    expect(floodsIn(then(3 * minute), 24 * 60 * minute)[0].end).toBeLessThan(16 * minute);
  });
});

// Source: ISA-18.2-2009 and IEC 62682:2014, recommended figures per operator (as cited in the project's field notes, section 1.6).
test("the recommended figures are the published ones", () => {
  const { perDay, perHour, perTenMinutes, badTenMinutes, badHours, mostInTenMinutes, inFlood, topTen, stale } =
    recommendations;
  expect([perDay, perHour, perTenMinutes].map(({ acceptable, manageable }) => [acceptable, manageable])).toEqual([
    [150, 300],
    [6, 12],
    [1, 2],
  ]);
  expect([badTenMinutes, badHours, inFlood].map(({ acceptable, unit }) => `${acceptable} ${unit}`)).toEqual([
    "1 %",
    "1 %",
    "1 %",
  ]);
  expect([mostInTenMinutes, topTen, stale].map(({ acceptable }) => acceptable)).toEqual([10, 5, 5]);
  expect(recommendedShares).toEqual({ high: 5, medium: 15, low: 80 });
});
