import { MillraceError } from "../../core/errors.ts";
import { Scorer } from "../../core/judging/index.ts";
import type { LimitSet } from "../../core/limit-set/index.ts";
import { qLimit, type StatisticChoice, t2Limit } from "../../core/limits/index.ts";
import { type Model, parseModel } from "../../core/model/index.ts";
import { compileModel } from "../../core/pls/index.ts";
import {
  type LimitOf,
  labelledEvents,
  outcomeOf,
  periodsOf,
  pictureOf,
  type RecordedStretch,
  Rehearsal,
  type RehearsalRequest,
  type RehearsalResult,
  rescored,
  type SweepCell,
  spansOfStates,
  sweep,
  theoryOf,
  withoutCuts,
  withSetting,
} from "../../core/rehearsal/index.ts";
import type { StoreReader } from "../store/store.ts";

export class RehearsalError extends MillraceError {
  readonly code = "rehearsal";
}

/** What runs, and where: the stream, its live period, and how to tell how far it is. */
export interface RehearsalJob {
  stream: string;
  periodMs: number;
  request: RehearsalRequest;
}
export type Progress = (doing: string, done: number, total: number) => void;

/** Excursions with a label are few; a stretch with more open questions than this has other troubles. */
const mostExcursions = 20_000;

/**
 * Rehearsals from the record, one after the other. The stretch that was read last, and what was replayed over it, stay at hand: a person who
 * changes one number is answered from memory.
 */
export class Rehearser {
  readonly #store: StoreReader;
  readonly #models = new Map<string, Model>();
  #at: { key: string; rehearsal: Rehearsal; cut: { from: number; to: number }[] } | undefined;
  #other: { key: string; rehearsal: Rehearsal } | undefined;

  constructor(store: StoreReader) {
    this.#store = store;
  }

  /** @throws RehearsalError, RescoreError, LimitError with what to do */
  run({ stream, periodMs, request }: RehearsalJob, progress: Progress): RehearsalResult {
    const inForce = this.#inForce(stream);
    const { rehearsal, cut } = this.#recorded(stream, periodMs, inForce.model, request, progress);
    const { stretch } = rehearsal;
    const truth = labelledEvents(
      this.#store.excursions({ stream, from: request.from, to: request.to, limit: mostExcursions }),
      request,
    );
    const limitSet = this.#proposed(request, inForce);
    const other =
      limitSet && limitSet.model !== inForce.model
        ? this.#scoredBy(limitSet.model, rehearsal, request, progress)
        : rehearsal;
    return {
      stretch: {
        stream,
        from: stretch.time[0],
        to: stretch.time[stretch.time.length - 1],
        readings: stretch.time.length,
        cut,
        states: [...new Set(stretch.processStates.map(({ state }) => state))],
      },
      truth,
      version: inForce.version,
      inForce: outcomeOf(rehearsal.run(inForce), truth),
      ...(limitSet ? { proposed: outcomeOf(other.run(limitSet), truth), limitSet } : {}),
      ...(request.pictures ? { pictures: this.#pictures(stretch, inForce) } : {}),
    };
  }

  /** The cells of a sweep, as they come. */
  *sweep(job: RehearsalJob, progress: Progress): Generator<SweepCell> {
    const { stream, periodMs, request } = job;
    const inForce = this.#inForce(stream);
    const base = this.#proposed(request, inForce) ?? inForce;
    const { rehearsal } = this.#recorded(stream, periodMs, inForce.model, request, progress);
    const on = base.model === inForce.model ? rehearsal : this.#scoredBy(base.model, rehearsal, request, progress);
    const truth = labelledEvents(
      this.#store.excursions({ stream, from: request.from, to: request.to, limit: mostExcursions }),
      request,
    );
    const [first, second] = request.sweep ?? [];
    if (!first) throw new RehearsalError("The sweep names no setting; give one or two.");
    yield* sweep(on, base, second ? [first, second] : [first], truth, limitOf(this.#model(base.model), base));
  }

  #proposed({ limitSet, settings = [] }: RehearsalRequest, inForce: LimitSet): LimitSet | undefined {
    if (!limitSet && settings.length === 0) return undefined;
    const base = limitSet ?? inForce;
    const recompute = limitOf(this.#model(base.model), base);
    return settings.reduce((limits, { setting, value }) => withSetting(limits, setting, value, recompute), base);
  }

  #inForce(stream: string): LimitSet {
    const inForce = this.#store.limitSet(stream);
    if (inForce) return inForce;
    throw new RehearsalError(`${stream} has no limits yet: it has no usable model. Nothing can be rehearsed.`);
  }

  /** The stretch as the model in charge scored it, without the cuts. */
  #recorded(stream: string, periodMs: number, model: string, request: RehearsalRequest, progress: Progress) {
    const { from, to, cuts = [], cutStates = [] } = request;
    const key = JSON.stringify([stream, model, from, to, cuts, cutStates]);
    if (this.#at?.key === key) return this.#at;
    if (!(from < to)) throw new RehearsalError(`The stretch ends (${iso(to)}) before it begins (${iso(from)}).`);
    progress("reading the record", 0, 1);
    const all = this.#store.stretch(stream, from, to);
    const cut = [...cuts, ...spansOfStates(all, cutStates, { from, to })];
    const kept = withoutCuts(all, cut);
    if (kept.time.length === 0) {
      const why = all.time.length === 0 ? "has no readings" : `is cut out whole (${all.time.length} readings)`;
      throw new RehearsalError(`The stretch ${iso(from)} to ${iso(to)} ${why}. Choose another.`);
    }
    const foreign = kept.models.some((id) => id !== model);
    const stretch = foreign ? this.#again(kept, model, request, cut, progress) : kept;
    this.#at = { key, cut, rehearsal: new Rehearsal(stretch, periodsOf(stretch, periodMs)) };
    this.#other = undefined;
    return this.#at;
  }

  #scoredBy(model: string, { stretch }: Rehearsal, request: RehearsalRequest, progress: Progress): Rehearsal {
    const key = `${this.#at!.key} ${model}`;
    if (this.#other?.key !== key) {
      const other = this.#again(stretch, model, request, this.#at!.cut, progress);
      this.#other = { key, rehearsal: new Rehearsal(other, this.#at!.rehearsal.periods) };
    }
    return this.#other.rehearsal;
  }

  #again(
    stretch: RecordedStretch,
    model: string,
    { from, to }: RehearsalRequest,
    cut: readonly { from: number; to: number }[],
    progress: Progress,
  ): RecordedStretch {
    const scorer = new Scorer(compileModel(this.#model(model)));
    const isCut = (time: number) => cut.some((span) => span.from <= time && time < span.to);
    const spectra = kept(this.#store.spectra(stretch.stream, from, to), isCut);
    return rescored(stretch, spectra, scorer, (done) =>
      progress("scoring the spectra again", done, stretch.time.length),
    );
  }

  #pictures(stretch: RecordedStretch, { model, statistics }: LimitSet): RehearsalResult["pictures"] {
    const theory = theoryOf(this.#model(model));
    const picture = (name: "t2" | "q") => {
      const { limit, confidence } = statistics[name];
      const nominal = confidence === undefined ? null : 1 - confidence;
      return pictureOf(stretch, stretch[name], { limit, nominal, ...(theory[name] ? { theory: theory[name] } : {}) });
    };
    return { t2: picture("t2"), q: picture("q") };
  }

  #model(id: string): Model {
    const known = this.#models.get(id);
    if (known) return known;
    const text = this.#store.modelText(id);
    if (text === undefined) {
      throw new RehearsalError(
        `The model ${id.slice(0, 12)}… is not on record. Choose one that is, or put it on record first.`,
      );
    }
    const model = parseModel(text, `model ${id.slice(0, 12)}… of the record`);
    this.#models.set(id, model);
    return model;
  }
}

function* kept<T extends { time: number }>(spectra: Iterable<T>, isCut: (time: number) => boolean): Generator<T> {
  for (const spectrum of spectra) if (!isCut(spectrum.time)) yield spectrum;
}

/** By the method that the limit set names. */
function limitOf(model: Model, { statistics }: Pick<LimitSet, "statistics">): LimitOf {
  return (name, confidence) => {
    const { method, residuals } = statistics[name];
    if (method === "fixed" || method === "learnt" || method === "largest") {
      throw new RehearsalError(
        `The limit of ${name === "t2" ? "T²" : "Q"} is ${method}, so it has no confidence to vary. Vary the number itself, or choose another method.`,
      );
    }
    return name === "t2"
      ? t2Limit(model, { method, confidence } as StatisticChoice["t2"])
      : qLimit(model, { method, residuals: residuals ?? "cross-validated", confidence } as StatisticChoice["q"]);
  };
}

function iso(time: number): string {
  return new Date(time).toISOString();
}
