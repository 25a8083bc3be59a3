import { explainedOf, readingWords } from "../../core/judging/index.ts";
import type { LimitSet } from "../../core/limit-set/index.ts";
import type { ReadingView } from "../../core/messages/index.ts";
import { parseModel } from "../../core/model/index.ts";
import { type CompiledModel, calibrationPlaces, compileModel, explain } from "../../core/pls/index.ts";
import { axisFromSpec, resampler, sameAxis } from "../../core/spectrum/index.ts";
import type { StoredReading, StoreReader } from "../store/store.ts";

/** Compiled models kept at hand: the ones in charge and a few of yesterday's. */
const mostModels = 12;

/** Puts together why a reading was judged so, from the record alone: its spectrum, the model and the limits that judged it. */
export class ReadingExplainer {
  readonly #store: StoreReader;
  readonly #models = new Map<string, CompiledModel>();

  constructor(store: StoreReader) {
    this.#store = store;
  }

  /** The last reading at or before `at`; undefined when there is none. */
  view(stream: string, at: number): ReadingView | undefined {
    const stored = this.#store.readingBefore(stream, at);
    if (!stored) return undefined;
    const { judged } = stored;
    const limitSet = this.#store.limitSet(stream, judged.limitSet);
    const compiled = judged.model === null ? undefined : this.model(judged.model);
    const spectrum = compiled && valuesOnAxis(stored, compiled);
    const explained = spectrum && !judged.verdict.includes("unusable") ? explain(spectrum, compiled) : undefined;
    const reasons = explained && explainedOf(explained, compiled!);
    const limits = limitsOf(limitSet);
    return {
      judged,
      receivedAt: stored.receivedAt,
      previous: this.#store.readingBefore(stream, judged.time, "strictly")?.judged.time ?? null,
      next: this.#store.timeAfter(stream, judged.time) ?? null,
      excursions: this.#store.excursionsBeside(stream, judged.time),
      limits,
      model: compiled ? { id: compiled.id, name: compiled.model.name, components: compiled.components } : null,
      axis: axisShown(stored, compiled, spectrum !== undefined),
      spectrum: shownValues(spectrum ?? stored.values),
      calibration: compiled?.model.band ?? null,
      ...(explained && {
        explanation: { ...explained, slopes: reasons!.slopes, says: readingWords(judged, reasons!) },
      }),
      ...samplesOf(compiled, limits),
    };
  }

  /** @throws when the record names a model that it does not keep: a damaged record. */
  model(id: string): CompiledModel {
    const known = this.#models.get(id);
    if (known) return known;
    const text = this.#store.modelText(id);
    if (text === undefined) throw new Error(`the record names model ${id} but does not keep it`);
    const compiled = compileModel(parseModel(text, `model ${id.slice(0, 12)} of the record`));
    if (this.#models.size >= mostModels) this.#models.delete(this.#models.keys().next().value!);
    this.#models.set(id, compiled);
    return compiled;
  }
}

/** The spectrum on the model's axis; undefined when it is no longer kept or cannot be brought there. */
function valuesOnAxis(
  { values, axis: spec }: StoredReading,
  { axis, channels }: CompiledModel,
): Float64Array | undefined {
  if (!values) return undefined;
  if (!spec) return values.length === channels ? values : undefined;
  try {
    const own = axisFromSpec(spec);
    if (own.points.length !== values.length) return undefined;
    if (sameAxis(own, axis)) return values;
    const out = new Float64Array(channels);
    resampler(own, axis)(values, out);
    return out;
  } catch {
    return undefined; // an axis that does not cover the model's: the reading was refused for it, and shows as received
  }
}

function axisShown(
  { values, axis: spec }: StoredReading,
  compiled: CompiledModel | undefined,
  onModelAxis: boolean,
): ReadingView["axis"] {
  if (compiled && (onModelAxis || !values))
    return { unit: compiled.axis.unit, points: Array.from(compiled.axis.points) };
  const count = values?.length ?? 0;
  if (spec && "points" in spec && spec.points.length === count) return { unit: spec.unit, points: spec.points };
  if (spec && "step" in spec && spec.count === count) {
    return { unit: spec.unit, points: Array.from({ length: count }, (_, j) => spec.start + j * spec.step) };
  }
  // Nothing says where these values lie: they are drawn by their place in the list.
  return { unit: compiled?.axis.unit ?? "nm", points: Array.from({ length: count }, (_, j) => j) };
}

function shownValues(values: Float64Array | null): (number | null)[] | null {
  return values && Array.from(values, (value) => (Number.isFinite(value) ? value : null));
}

function limitsOf(limitSet: LimitSet | undefined): ReadingView["limits"] {
  const statistics = limitSet?.statistics;
  return {
    t2: statistics?.t2.limit ?? 0,
    q: statistics?.q.limit ?? 0,
    nearest: statistics?.nearest.limit ?? 0,
  };
}

function samplesOf(compiled: CompiledModel | undefined, limits: ReadingView["limits"]): Pick<ReadingView, "samples"> {
  const places = compiled && calibrationPlaces(compiled, limits);
  if (!places) return {};
  // As a new reading of the same kind would look: each sample against the model fitted without it, where the model keeps that.
  const { t2Ratios, qRatios } = places.crossValidated ?? places.fit;
  return { samples: { names: places.names, scores: places.scores, t2: t2Ratios, q: qRatios } };
}
