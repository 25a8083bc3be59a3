import { readFileSync } from "node:fs";
import { MillraceError } from "../../core/errors.ts";
import {
  defaultLaboratory,
  freshState,
  type LaboratoryRules,
  Scorer,
  type StreamRules,
  type StreamState,
} from "../../core/judging/index.ts";
import {
  defaultAlarms,
  type LimitSet,
  parseAlarmRules,
  propertyOf,
  type StatisticLimit,
} from "../../core/limit-set/index.ts";
import { defaultStatisticChoice, statisticLimits } from "../../core/limits/index.ts";
import { type Model, ModelFileError, parseModel } from "../../core/model/index.ts";
import { type CompiledModel, compileModel } from "../../core/pls/index.ts";
import { AxisError, axisFromSpec, describeAxis, resampler, sameAxis } from "../../core/spectrum/index.ts";
import type { StreamConfig } from "../config/plant-config.ts";
import type { StoreWriter } from "../store/store.ts";

/** One stream as the engine works on it. */
export interface EngineStream {
  rules: StreamRules;
  state: StreamState;
}

/** A stream that goes silent or gapped is told by its period; these factors are the engine's, not the site's. */
const gapPeriods = 5;
const leastGapMs = 5_000;
const lateGracePeriods = 3;
const futureToleranceMs = 5_000;
const frozenAfter = 3;

export function gapMsOf(periodMs: number): number {
  return Math.max(gapPeriods * periodMs, leastGapMs);
}

/**
 * Makes a stream ready: loads its model, takes the newest limit set on record or makes the first one, and takes up its state where the
 * record ends. A model file that cannot be used stops nobody else: the model that was in charge goes on, or, where there is none, the
 * stream's readings are kept as unusable with that reason.
 */
export function readyStream(
  config: StreamConfig,
  store: StoreWriter,
  now: number,
  read: ReadModel = readModel,
): EngineStream {
  let scorer: Scorer | undefined;
  let modelTrouble: string | undefined;
  try {
    const { model, text, compiled } = read(config.model);
    checkJudges(compiled, config.model);
    statisticLimits(model, defaultStatisticChoice()); // throws here, where it is told as the model's trouble, if it lacks the residuals
    checkAxis(compiled, config);
    scorer = new Scorer(compiled);
    const properties = model.properties.map(({ name }) => name);
    store.addModel({ id: scorer.compiled.id, name: model.name, properties, text });
  } catch (error) {
    if (!(error instanceof MillraceError)) throw error;
    scorer = modelInCharge(config.id, store);
    modelTrouble = scorer ? `${error.message} Until then the model that was in charge goes on.` : error.message;
  }
  const limitSet = limitSetFor(config, scorer?.compiled, store, now);
  return {
    rules: rulesOf(config, limitSet, scorer, modelTrouble),
    // A state that an earlier version wrote may lack what has come since.
    state: { ...freshState, ...store.state(config.id) },
  };
}

/** The model that judged the stream until now, from the record. */
function modelInCharge(stream: string, store: StoreWriter): Scorer | undefined {
  const id = store.limitSet(stream)?.model;
  const text = id === undefined ? undefined : store.modelText(id);
  return text === undefined ? undefined : new Scorer(compileModel(parseModel(text, `model ${id} of the record`)));
}

/** Every stream of a plant, by its id. Streams that share a model file share what is made of it. */
export function readyStreams(
  configs: readonly StreamConfig[],
  store: StoreWriter,
  now: number,
): Map<string, EngineStream> {
  const known = new Map<string, ModelRead>();
  const read = (file: string): ModelRead => {
    const found = known.get(file) ?? readModel(file);
    known.set(file, found);
    return found;
  };
  return new Map(configs.map((config) => [config.id, readyStream(config, store, now, read)]));
}

interface ModelRead {
  model: Model;
  text: string;
  compiled: CompiledModel;
}
type ReadModel = (file: string) => ModelRead;

function readModel(file: string): ModelRead {
  let text: string;
  try {
    text = readFileSync(file, "utf8");
  } catch (cause) {
    throw new ModelNotThere(file, cause as NodeJS.ErrnoException);
  }
  const model = parseModel(text, file);
  return { model, text, compiled: compileModel(model) };
}

/** A number whose trust cannot be judged is not shown: such a model may score tables, but is not put in charge of a stream. */
function checkJudges({ judges }: CompiledModel, file: string): void {
  const missing = [...(judges.t2 ? [] : ["scores"]), ...(judges.q ? [] : ["loadings"])];
  if (missing.length > 0) throw new ModelCannotJudge(file, missing);
}

/** @throws ModelFileError when the stream's analyzer does not cover the axis that the model was made on. */
function checkAxis({ axis }: CompiledModel, config: StreamConfig): void {
  if (!config.axis) return;
  try {
    const own = axisFromSpec(config.axis);
    if (!sameAxis(own, axis)) resampler(own, axis);
  } catch (cause) {
    if (!(cause instanceof AxisError)) throw cause;
    throw new ModelFileError(config.model, "axis", {
      got: describeAxis(axis),
      expected: `one that the analyzer of ${config.id} covers (${describeAxis(axisFromSpec(config.axis))})`,
      todo: "Put the stream's own model in its place, or correct the stream's axis in the configuration.",
      cause,
    });
  }
}

class ModelCannotJudge extends MillraceError {
  readonly code = "model-cannot-judge";
  constructor(file: string, missing: readonly string[]) {
    super(
      `${file}: ${missing.join(" and ")} missing, expected a model that can judge its readings by T² and Q. Import it again with them.`,
    );
  }
}

class ModelNotThere extends MillraceError {
  readonly code = "model-not-there";
  constructor(file: string, cause: NodeJS.ErrnoException) {
    super(`${file} is not readable (${cause.code}), expected a model file. Make one with 'millrace calibrate'.`, {
      cause,
    });
  }
}

/** The same stream, judged with a state of its own: a load of recorded history, whose readings have their own spacing. */
export function rulesForHistory(rules: StreamRules, periodMs: number): StreamRules {
  const own = rules.scorer && new Scorer(rules.scorer.compiled);
  return { ...rules, periodMs, gapMs: gapMsOf(periodMs), lateGraceMs: lateGracePeriods * periodMs, scorer: own };
}

function rulesOf(
  config: StreamConfig,
  limitSet: LimitSet,
  scorer: Scorer | undefined,
  modelTrouble?: string,
): StreamRules {
  return {
    stream: config.id,
    periodMs: config.periodMs,
    gapMs: gapMsOf(config.periodMs),
    lateGraceMs: lateGracePeriods * config.periodMs,
    futureToleranceMs,
    validity: { frozenAfter, ...(config.ceiling === undefined ? {} : { ceiling: config.ceiling }) },
    limitSet,
    laboratory: laboratoryOf(config),
    scorer,
    ...(modelTrouble === undefined ? {} : { modelTrouble }),
  };
}

/** How a stream's laboratory results are matched, in ms. */
export function laboratoryOf({ lab }: StreamConfig): LaboratoryRules {
  const { lagMs, windowMs, plausible } = defaultLaboratory;
  return {
    lagMs: lab?.lagSeconds === undefined ? lagMs : lab.lagSeconds * 1000,
    windowMs: lab?.windowSeconds === undefined ? windowMs : lab.windowSeconds * 1000,
    plausible: lab?.plausible ?? plausible,
  };
}

/** The newest limit set; the first one, or one for another model, is made here and goes on record with its reason. */
function limitSetFor(
  config: StreamConfig,
  compiled: CompiledModel | undefined,
  store: StoreWriter,
  now: number,
): LimitSet {
  const newest = store.limitSet(config.id);
  if (newest && (!compiled || newest.model === compiled.id)) return newest;
  const made = newest ? forAnotherModel(newest, compiled!, now) : firstLimitSet(config, compiled, now);
  // Without a model there are no statistics to put on record yet.
  if (compiled) store.addLimitSet(made);
  return made;
}

function firstLimitSet(config: StreamConfig, compiled: CompiledModel | undefined, now: number): LimitSet {
  const properties = compiled?.properties.map(({ name }) => name) ?? [];
  const own =
    config.alarms && compiled
      ? parseAlarmRules(readFileSync(config.alarms, "utf8"), config.alarms, properties)
      : undefined;
  return {
    format: "millrace-limit-set",
    formatVersion: 1,
    stream: config.id,
    version: 1,
    model: compiled?.id ?? "",
    statistics: statisticsFor(compiled?.model),
    alarms: own?.alarms ?? defaultAlarms(),
    author: own?.author ?? "Millrace",
    reason: own?.reason ?? "First start of this stream: default limits of its model, and alarms on trust only.",
    time: now,
  };
}

function forAnotherModel(newest: LimitSet, compiled: CompiledModel, now: number): LimitSet {
  const known = new Set(compiled.properties.map(({ name }) => name));
  const alarms = newest.alarms.filter(({ watches }) => {
    const property = propertyOf(watches);
    return property === undefined || known.has(property);
  });
  return {
    ...newest,
    version: newest.version + 1,
    model: compiled.id,
    statistics: statisticsFor(compiled.model),
    alarms,
    author: "Millrace",
    reason: `Another model is in charge (${compiled.model.name}): limits of its statistics made anew; alarms kept from version ${newest.version}.`,
    time: now,
  };
}

function statisticsFor(model: Model | undefined): LimitSet["statistics"] {
  const choice = defaultStatisticChoice();
  // Without a model nothing is scored, so nothing is compared with these.
  const limits = model ? statisticLimits(model, choice) : { t2: 1, q: 1, nearest: 1 };
  const described = (name: "t2" | "q" | "nearest"): StatisticLimit => {
    return { ...choice[name], limit: limits[name] };
  };
  return { t2: described("t2"), q: described("q"), nearest: described("nearest") };
}
