import { type Conditions, composed, opticsMiddle, opticsSpread } from "./conditions.ts";
import type { Composition } from "./ingredients.ts";
import { steppedSetPoint } from "./set-point.ts";
import type { StreamPlan } from "./streams.ts";
import { type Wander, wanders } from "./wander.ts";

const minute = 60_000;
const hour = 60 * minute;
const day = 24 * hour;

/** The undisturbed line as a function of absolute time (epoch ms): set-points that people move, with lags, and drift of several lengths. */
export function processOf(seed: number, plan: StreamPlan): (time: number) => Conditions {
  const course = (name: string): Wander => {
    const setPoint = steppedSetPoint(seed, `${plan.id}/${name}/set-point`, 9 * hour, 14 * minute);
    const drift = wanders(seed, `${plan.id}/${name}`, [
      { spacingMs: 4 * minute, share: 0.06 },
      { spacingMs: 35 * minute, share: 0.16 },
      { spacingMs: 5 * hour, share: 0.22 },
      { spacingMs: 2.3 * day, share: 0.12 },
    ]);
    return (time) => 0.44 * setPoint(time) + drift(time);
  };
  const free = plan.free.map((part) => ({ ...part, course: course(part.ingredient) }));
  const warmth = wanders(seed, `${plan.id}/temperature`, [
    { spacingMs: 6 * minute, share: 0.12 },
    { spacingMs: 50 * minute, share: 0.28 },
    // Half a day: cooling water is warmer by day than by night.
    { spacingMs: 12 * hour, share: 0.6 },
  ]);
  const optical = (name: string) =>
    wanders(seed, `${plan.id}/optics/${name}`, [
      { spacingMs: 20_000, share: 0.15 },
      { spacingMs: 25 * minute, share: 0.3 },
      { spacingMs: 1.4 * day, share: 0.55 },
    ]);
  const gain = optical("gain");
  const offset = optical("offset");
  const tilt = optical("tilt");
  const bow = optical("bow");
  const share = 0.75;

  return (time) => {
    const fractions: Partial<Composition> = {};
    for (const part of free) fractions[part.ingredient] = part.middle + part.swing * part.course(time);
    return {
      composition: composed(plan, fractions),
      temperatureC: plan.temperature.middleC + plan.temperature.swingK * warmth(time),
      optics: {
        gain: opticsMiddle.gain + share * opticsSpread.gain * gain(time),
        offset: opticsMiddle.offset + share * opticsSpread.offset * offset(time),
        tilt: opticsMiddle.tilt + share * opticsSpread.tilt * tilt(time),
        bow: opticsMiddle.bow + share * opticsSpread.bow * bow(time),
      },
      film: 0,
      lamp: 0,
      bubble: 0,
    };
  };
}
