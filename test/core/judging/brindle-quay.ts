import { readFileSync } from "node:fs";
import { Scorer, type StreamRules } from "../../../core/judging/index.ts";
import { parseAlarmRules } from "../../../core/limit-set/index.ts";
import { defaultStatisticChoice, statisticLimits } from "../../../core/limits/index.ts";
import { byGroup, calibrate, compileModel } from "../../../core/pls/index.ts";
import { axisFromSpec, parseSteps } from "../../../core/spectrum/index.ts";
import {
  analyzerAxis,
  calibrationSet,
  type Plant,
  type PlantStreamId,
  streamPlans,
} from "../../../simulator/plant/index.ts";

/** A stream of the invented plant as the demo judges it: its model fitted a campaign left out at a time, and the demo's own alarms. */
export function demoRules(plant: Plant, stream: PlantStreamId, periodMs: number): StreamRules {
  const compiled = compileModel(demoModel(plant, stream));
  const file = new URL(`../../../simulator/brindle-quay/${stream}.alarms.json`, import.meta.url);
  const properties = compiled.properties.map(({ name }) => name);
  const { alarms, author, reason } = parseAlarmRules(readFileSync(file, "utf8"), file.pathname, properties);
  const choice = defaultStatisticChoice();
  const { t2, q, nearest } = statisticLimits(compiled.model, choice);
  return {
    stream,
    periodMs,
    gapMs: Math.max(5 * periodMs, 5000),
    lateGraceMs: 3 * periodMs,
    futureToleranceMs: 5000,
    validity: { frozenAfter: 3 },
    limitSet: {
      format: "millrace-limit-set",
      formatVersion: 1,
      stream,
      version: 1,
      model: compiled.id,
      statistics: {
        t2: { ...choice.t2, limit: t2 },
        q: { ...choice.q, limit: q },
        nearest: { ...choice.nearest, limit: nearest },
      },
      alarms,
      author,
      reason,
      time: 0,
    },
    scorer: new Scorer(compiled),
  };
}

function demoModel(plant: Plant, stream: PlantStreamId) {
  const plan = streamPlans[stream];
  const samples = calibrationSet(plant, stream, "calibration");
  const spectra = {
    axis: axisFromSpec(analyzerAxis),
    rows: samples.map(({ values }) => Float64Array.from(values)),
    names: samples.map(({ sample }) => sample),
  };
  const y = samples.map(({ results }) => Float64Array.from(results));
  const propertyNames = plan.properties.map(({ name }) => name);
  return calibrate(
    { spectra, y, propertyNames },
    {
      name: stream,
      created: "2026-05-01T00:00:00Z",
      steps: parseSteps(plan.steps),
      components: "auto",
      mostComponents: 10,
      segments: byGroup(samples.map(({ group }) => group)),
      validation: "group",
    },
  ).model;
}
