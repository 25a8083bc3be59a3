import {
  calendarDays,
  checksFor,
  type RequiredCheck,
  recordHash,
  type ShiftCalendar,
  type ShiftFacts,
  shiftCalendar,
  shiftRecord,
  type WantedProperty,
} from "../../core/handover/index.ts";
import type { BoundRecord, Shift, ShiftRecord } from "../../core/messages/index.ts";
import { handoverStanding } from "../../core/shift-page/index.ts";
import { decimalsFor, type PlantTime, plantTime } from "../../core/words/index.ts";
import type { PlantConfig, StreamConfig } from "../config/plant-config.ts";
import { gapMsOf } from "../engine/streams.ts";
import { caution } from "../gateway/plant-view.ts";
import type { ReadingExplainer } from "../gateway/reading-view.ts";
import type { StoreReader } from "../store/store.ts";
import { alarmsKnownBefore } from "./alarms-known-before.ts";
import { laboratoryOf } from "./laboratory.ts";
import { smallTrend } from "./small-trend.ts";

/** The shifts of a plant and their records, out of the plant's record alone: it works beside a running service, or without one. */
export class ShiftBook {
  readonly calendar: ShiftCalendar;
  readonly #config: PlantConfig;
  readonly #store: StoreReader;
  readonly #explainer: ReadingExplainer;
  readonly #time: PlantTime;

  constructor(config: PlantConfig, store: StoreReader, explainer: ReadingExplainer) {
    this.#config = config;
    this.#store = store;
    this.#explainer = explainer;
    this.#time = plantTime(config.timeZone);
    this.calendar = shiftCalendar(config.shifts ?? calendarDays, config.timeZone);
  }

  /** The checks that this shift has to do. */
  checks(shift: Shift): RequiredCheck[] {
    return checksFor(this.#config.checks ?? [], shift);
  }

  /** As it was signed, where it was; else as it is at `now`, wall clock. */
  bound(shift: Shift, now: number): BoundRecord {
    const entries = this.#store.handover.entries(shift.from);
    const { hash } = handoverStanding(entries);
    if (hash === undefined) return { record: this.draw(shift, now), hash: null, entries };
    const frozen = this.#store.handover.frozen(hash);
    if (!frozen) throw new Error(`the record of a shift was signed as ${hash}, but is not kept`);
    const record = JSON.parse(frozen.json) as ShiftRecord;
    return { record, hash, ...(recordHash(frozen.json) === hash ? {} : { altered: true as const }), entries };
  }

  /** Draws a shift's record up anew, as it is at `now`. */
  draw(shift: Shift, now: number): ShiftRecord {
    return shiftRecord(this.#facts(shift, now));
  }

  #facts(shift: Shift, now: number): ShiftFacts {
    const { site, name, timeZone, demo = false, streams } = this.#config;
    const store = this.#store;
    const before = this.calendar.before(shift);
    // Signed before its end, the record before leaves a rest: it is told here, so that nothing falls between the two.
    const from = Math.min(shift.from, store.handover.frozenTo(before.from) ?? shift.from);
    const to = Math.max(shift.from + 1, Math.min(now, shift.to));
    return {
      plant: { site, plant: name, timeZone, demo, caution },
      ...{ shift, from, to, madeAt: now },
      streams: streams.map((stream) => this.#stream(stream, { from, to, before })),
      events: store.eventsBetween(from, to),
      alarmEvents: [...alarmsKnownBefore(store, from), ...store.alarmEvents({ from, to, history: true })],
      excursions: store.excursions({ from, to, limit: 100_000 }),
      refused: store.refusedBetween(from, to),
      laboratory: streams.flatMap(({ id }) => laboratoryOf(store, this.#explainer, id, { from, to, time: this.#time })),
      entries: store.handover.entries(shift.from),
      actions: this.#actions(shift.from, from, to),
      checks: this.checks(shift),
    };
  }

  #stream(
    config: StreamConfig,
    { from, to, before }: { from: number; to: number; before: Shift },
  ): ShiftFacts["streams"][number] {
    const { id, name, periodMs } = config;
    const wanted = this.#wanted(config, to);
    const gapMs = gapMsOf(periodMs);
    const account = (since: number, until: number) =>
      this.#store.account(id, { wanted, from: since, to: until, gapMs });
    const process = this.#store.lastEvent("process state", id, to)?.process;
    return {
      stream: id,
      name,
      account: account(from, to),
      before: account(before.from, before.to),
      trend: smallTrend(this.#store, id, wanted[0], { from, to }),
      ...(process ? { process } : {}),
    };
  }

  /** The stream's properties, in the digits that their uncertainty leaves. */
  #wanted({ id, properties = {} }: StreamConfig, to: number): WantedProperty[] {
    const limitSet = this.#store.limitSet(id);
    if (!limitSet) return [];
    const last = this.#store.readingBefore(id, to)?.judged.properties ?? {};
    return this.#explainer.model(limitSet.model).model.properties.map(({ name, unit, rmsec }) => ({
      ...{ name, unit },
      ...(properties[name]?.target ? { target: properties[name].target } : {}),
      decimals: decimalsFor(last[name]?.uncertainty ?? rmsec),
    }));
  }

  /** As they stood at `to`: one that was closed later was open then. */
  #actions(shift: number, from: number, to: number): ShiftFacts["actions"] {
    return this.#store.handover
      .actions({ shift, from, to })
      .map(({ action, closed }) => ({ action, closed: closed && closed.at < to ? closed : undefined }));
  }
}
