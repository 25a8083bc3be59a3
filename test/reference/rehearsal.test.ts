import { describe, expect, test } from "vitest";
import { seededRandom } from "../../core/pls/index.ts";
import { type RecordedStretch, Rehearsal } from "../../core/rehearsal/index.ts";
import { unfamiliarAlarm } from "../core/judging/small-stream.ts";

/**
 * False alarms of in-control, independent readings against the expected number of samples until n in a row lie beyond the limit,
 * (1 − pⁿ)/((1 − p)pⁿ): Adnan, Izadi & Chen, On expected detection delays for alarm systems with deadbands and delay-timers, J. Process
 * Control 21 (2011) 1318. From the raise on, the alarm lasts until the first clear reading, in the mean 1/(1 − p) readings; then the count
 * begins anew. A cycle is the sum of both.
 */
const readings = 1_000_000;
const second = 1000;

function inControl(p: number, seed: number): RecordedStretch {
  const random = seededRandom(seed);
  const time = Float64Array.from({ length: readings }, (_, i) => i * second);
  const small = new Float64Array(readings).fill(0.5);
  return {
    stream: "reference",
    time,
    received: time,
    t2: small,
    q: Float64Array.from({ length: readings }, () => (random() < p ? 2 : 0.5)),
    nearest: small,
    usability: new Uint8Array(readings),
    gap: new Uint8Array(readings),
    history: new Uint8Array(readings),
    properties: new Map(),
    models: [],
    processStates: [],
  };
}

function annunciations(stretch: RecordedStretch, n: number): number {
  const rule = unfamiliarAlarm({
    watches: { kind: "unfamiliar", deadband: 0 },
    onDelay: { readings: n },
    offDelay: { readings: 1 },
  });
  const limit = { method: "fixed", limit: 1 };
  const rehearsal = new Rehearsal(stretch, { live: second, history: second });
  const { alarms } = rehearsal.run({ statistics: { t2: limit, q: limit, nearest: limit }, alarms: [rule] });
  return alarms[0].outcome.annunciations;
}

describe.each([0.01, 0.05])("false annunciations per 1440 readings, p = %f", (p) => {
  const stretch = inControl(p, 11);

  test.each([1, 2, 3])("%i in a row", (n) => {
    const untilRaised = (1 - p ** n) / ((1 - p) * p ** n);
    const cycle = untilRaised + 1 / (1 - p);
    const expected = readings / cycle;
    // Rare, nearly independent events: their count spreads by its root; four of those are passed by once in 16 000.
    const sampling = 4 * Math.sqrt(expected);
    const per1440 = 1440 / readings;
    expect(Math.abs(annunciations(stretch, n) - expected) * per1440).toBeLessThan(sampling * per1440);
  });
});
