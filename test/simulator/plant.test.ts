import { describe, expect, test } from "vitest";
import {
  absorbanceInto,
  bandSpectrum,
  type Conditions,
  channelCount,
  conditionsAt,
  type Ingredient,
  ingredientNames,
  makePlant,
  spectrumAt,
  streamIds,
  streamPlans,
  undisturbed,
  unforeseenBand,
  wavelengths,
} from "../../simulator/plant/index.ts";

const plant = makePlant(1);
const noon = Date.UTC(2026, 10, 20, 12);
const minute = 60_000;
const day = 86_400_000;

/** A line in plain light, of one composition. */
function plainly(composition: Partial<Record<Ingredient, number>>, more: Partial<Conditions> = {}): Conditions {
  return {
    composition: {
      ...(Object.fromEntries(ingredientNames.map((name) => [name, 0])) as Conditions["composition"]),
      ...composition,
    },
    temperatureC: streamPlans["bq-201"].temperature.middleC,
    optics: { gain: 1, offset: 0, tilt: 0, bow: 0 },
    film: 0,
    lamp: 0,
    bubble: 0,
    ...more,
  };
}

function absorbance(conditions: Conditions): Float64Array {
  const out = new Float64Array(channelCount);
  absorbanceInto(out, streamPlans["bq-201"], conditions);
  return out;
}

const peakNm = (values: Float64Array) => wavelengths[values.indexOf(Math.max(...values))];
const largestDifference = (a: ArrayLike<number>, b: ArrayLike<number>) =>
  Math.max(...Array.from(a, (value, j) => Math.abs(value - b[j]!)));

describe("the plant is a function of seed, stream and time", () => {
  test.each(streamIds)(
    "%s: two plants of one seed give the same spectrum to the last bit, in any order of asking",
    (stream) => {
      const times = [noon, noon + 7 * day + 1234, noon - 3 * day, noon + 1];
      const forward = times.map((time) => spectrumAt(makePlant(5), stream, time));
      const other = makePlant(5);
      const backward = [...times].reverse().map((time) => spectrumAt(other, stream, time));
      expect(backward.reverse()).toEqual(forward);
    },
  );

  test("another seed, stream or moment gives another spectrum", () => {
    const one = spectrumAt(plant, "bq-201", noon);
    expect(spectrumAt(makePlant(2), "bq-201", noon)).not.toEqual(one);
    expect(spectrumAt(plant, "bq-305", noon)).not.toEqual(one);
    expect(spectrumAt(plant, "bq-201", noon + 1)).not.toEqual(one);
  });

  test.each(streamIds)("%s: nothing jumps from one reading to the next in a whole day", (stream) => {
    const { free, temperature } = streamPlans[stream];
    let before = conditionsAt(plant, stream, noon);
    let steepest = 0;
    let warmest = 0;
    for (let time = noon + 2000; time < noon + day; time += 2000) {
      const now = conditionsAt(plant, stream, time);
      for (const { ingredient, swing } of free) {
        steepest = Math.max(steepest, Math.abs(now.composition[ingredient] - before.composition[ingredient]) / swing);
      }
      warmest = Math.max(warmest, Math.abs(now.temperatureC - before.temperatureC) / temperature.swingK);
      before = now;
    }
    // A set-point step is at most twice its share (0.44) of the swing, over a lag of 14 minutes; the drift beside it is slower.
    expect(steepest).toBeLessThan(2 * ((2 * 0.44) / (14 * 60)) + 0.002);
    expect(steepest).toBeGreaterThan(0);
    expect(warmest).toBeLessThan(0.004);
  });

  test.each(streamIds)("%s: in a fortnight the line moves, and never leaves what the calibration spans", (stream) => {
    const { free, temperature } = streamPlans[stream];
    const seen = Array.from({ length: 14 * 96 }, (_, i) => conditionsAt(plant, stream, noon + i * 15 * minute));
    for (const { ingredient, calibrated } of free) {
      const amounts = seen.map(({ composition }) => composition[ingredient]);
      const [low, high] = [Math.min(...amounts), Math.max(...amounts)];
      expect(low).toBeGreaterThan(calibrated[0]);
      expect(high).toBeLessThan(calibrated[1]);
      expect(high - low).toBeGreaterThan(0.3 * (calibrated[1] - calibrated[0]));
    }
    for (const { temperatureC, composition } of seen) {
      expect(Math.abs(temperatureC - temperature.middleC)).toBeLessThan(temperature.calibratedK);
      expect(ingredientNames.reduce((sum, name) => sum + composition[name], 0)).toBeCloseTo(1, 12);
    }
  });
});

describe("spectra follow Beer and Lambert", () => {
  test("the spectrum of a mixture is the sum of its parts, each in proportion", () => {
    const ethanol = absorbance(plainly({ ethanol: 1 }));
    const water = absorbance(plainly({ water: 1 }));
    const mixed = absorbance(plainly({ ethanol: 0.9, water: 0.1 }));
    const summed = ethanol.map((value, j) => 0.9 * value + 0.1 * water[j]!);
    expect(largestDifference(mixed, summed)).toBeLessThan(1e-12);
    expect(largestDifference(mixed, ethanol)).toBeGreaterThan(0.05);
  });

  test("twice the path gives twice the absorbance, and a baseline adds to it", () => {
    const once = absorbance(plainly({ water: 0.1, ethanol: 0.9 }));
    const optics = { gain: 2, offset: 0.1, tilt: 0.03, bow: 0 };
    const twice = absorbance(plainly({ water: 0.1, ethanol: 0.9 }, { optics }));
    expect(twice[0]! - 2 * once[0]!).toBeCloseTo(0.1 - 0.03, 12);
    expect(twice[300]! - 2 * once[300]!).toBeCloseTo(0.1 + 0.03, 12);
  });

  test("water absorbs most near 1 936 nm, and warm water at shorter wavelengths", () => {
    const { middleC } = streamPlans["bq-201"].temperature;
    expect(peakNm(absorbance(plainly({ water: 1 })))).toBe(1936);
    expect(peakNm(absorbance(plainly({ water: 1 }, { temperatureC: middleC + 60 })))).toBeLessThan(1936);
  });

  test.each(streamIds)("%s: absorbances lie where a detector can read them, and are float32 values", (stream) => {
    for (let i = 0; i < 50; i++) {
      const values = spectrumAt(plant, stream, noon + i * 7 * 3_600_000);
      expect(values).toHaveLength(301);
      expect(Math.min(...values)).toBeGreaterThan(0.01);
      expect(Math.max(...values)).toBeLessThan(2);
      expect(Float32Array.from(Array.from(values))).toEqual(values);
    }
  });

  test("the noise of a channel has the deviation that the plan says, and no correlation with its neighbour", () => {
    const plan = streamPlans["bq-201"];
    const clean = new Float64Array(channelCount);
    const errors = Array.from({ length: 60 }, (_, i) => {
      absorbanceInto(clean, plan, conditionsAt(plant, "bq-201", noon + i * 2000));
      return Array.from(spectrumAt(plant, "bq-201", noon + i * 2000), (value, j) => value - clean[j]!);
    });
    const all = errors.flat();
    const variance = all.reduce((sum, e) => sum + e * e, 0) / all.length;
    const lagged = all.slice(1).reduce((sum, e, k) => sum + e * all[k]!, 0) / all.length;
    // 18 060 values: the deviation is known to 0.5 %, the correlation to 0.75 %; four times that is allowed.
    expect(Math.sqrt(variance) / plan.noise).toBeGreaterThan(0.98);
    expect(Math.sqrt(variance) / plan.noise).toBeLessThan(1.02);
    expect(Math.abs(lagged / variance)).toBeLessThan(0.03);
  });

  test("an unforeseen band has the height and place that were asked for", () => {
    const band = unforeseenBand({ centreNm: 1880, widthNm: 20, height: 0.05 });
    expect(peakNm(band)).toBe(1880);
    expect(Math.max(...band)).toBeCloseTo(0.05, 12);
    expect(band).toEqual(bandSpectrum([{ centreNm: 1880, widthNm: 20, height: 0.05 }]));
  });
});

describe("a disturbance changes what it says and nothing else", () => {
  const disturbedBy = (part: Partial<typeof undisturbed>, stream: (typeof streamIds)[number] = "bq-305") =>
    conditionsAt(plant, stream, noon, { ...undisturbed, ...part });
  const calm = conditionsAt(plant, "bq-305", noon);

  test("none at all leaves the conditions as they are", () => {
    const same = disturbedBy({});
    for (const name of ingredientNames) expect(same.composition[name]).toBeCloseTo(calm.composition[name], 14);
    expect({ ...same, composition: 0 }).toEqual({ ...calm, composition: 0 });
  });

  test("a co-solvent dilutes the rest in proportion", () => {
    const { composition } = disturbedBy({ coSolvent: 2 });
    const fraction = 2 * streamPlans["bq-305"].sizes.coSolvent;
    expect(composition.acetone).toBeCloseTo(fraction, 12);
    expect(composition.ethanol / composition.water).toBeCloseTo(calm.composition.ethanol / calm.composition.water, 9);
    expect(composition.ethanol).toBeCloseTo(calm.composition.ethanol * (1 - fraction), 12);
  });

  test.each(streamIds)(
    "%s: a feed beyond the range leaves what the calibration spans, without a new ingredient",
    (stream) => {
      const { composition } = disturbedBy({ feed: 1 }, stream);
      const plan = streamPlans[stream];
      const outside = plan.free.filter(
        ({ ingredient, calibrated: [low, high] }) => composition[ingredient] < low || composition[ingredient] > high,
      );
      expect(outside.length).toBeGreaterThan(0);
      expect(composition.acetone).toBe(0);
      expect(ingredientNames.reduce((sum, name) => sum + composition[name], 0)).toBeCloseTo(1, 12);
    },
  );

  test.each(streamIds)("%s: the other grade stays inside what the calibration spans, for a fortnight", (stream) => {
    for (let i = 0; i < 14 * 24; i++) {
      const { composition } = conditionsAt(plant, stream, noon + i * 60 * minute, { ...undisturbed, grade: 1 });
      for (const { ingredient, calibrated } of streamPlans[stream].free) {
        expect(composition[ingredient]).toBeGreaterThan(calibrated[0]);
        expect(composition[ingredient]).toBeLessThan(calibrated[1]);
      }
    }
  });

  test("heat, film and lamp add up in their own fields", () => {
    const { sizes } = streamPlans["bq-305"];
    const all = disturbedBy({ heat: 1, film: 0.5, lamp: 2 });
    expect(all.temperatureC).toBeCloseTo(calm.temperatureC + sizes.heatK, 12);
    expect(all.film).toBeCloseTo(0.5 * sizes.film, 12);
    expect(all.lamp).toBeCloseTo(2 * sizes.lamp, 12);
  });

  test("light that goes by a bubble makes strong bands weaker than they are", () => {
    const whole = absorbance(plainly({ water: 1 }));
    const spoilt = absorbance(plainly({ water: 1 }, { bubble: 0.2 }));
    const strongest = whole.indexOf(Math.max(...whole));
    expect(spoilt[strongest]).toBeLessThan(0.5 * whole[strongest]!);
    expect(spoilt[strongest]).toBeCloseTo(-Math.log10(0.8 * 10 ** -whole[strongest]! + 0.2 * 10 ** -0.05), 12);
  });
});
