import {
  calendarDays,
  checksFor,
  type HandoverStanding,
  handoverStanding,
  type RequiredCheck,
  type ShiftCalendar,
  type ShiftFacts,
  shiftCalendar,
  shiftRecord,
  type WantedProperty,
} from "../../core/handover/index.ts";
import type { HandoverEntry, Shift, ShiftRecord } from "../../core/messages/index.ts";
import { decimalsFor } from "../../core/words/index.ts";
import type { PlantConfig, StreamConfig } from "../config/plant-config.ts";
import { gapMsOf } from "../engine/streams.ts";
import { caution } from "../gateway/plant-view.ts";
import type { ReadingExplainer } from "../gateway/reading-view.ts";
import type { StoreReader } from "../store/store.ts";
import { alarmsKnownBefore } from "./alarms-known-before.ts";
import { smallTrend } from "./small-trend.ts";

/** A shift's record with where its handover stands. */
export interface BoundRecord {
  record: ShiftRecord;
  /** SHA-256 of the record that the outgoing side signed; null: nobody has, and the record is as it is now */
  hash: string | null;
  standing: HandoverStanding;
  /** all that people wrote to this shift, in the order of their numbers */
  entries: HandoverEntry[];
}

/** The shifts of a plant and their records, out of the plant's record alone: it works beside a running service, or without one. */
export class ShiftBook {
  readonly calendar: ShiftCalendar;
  readonly #config: PlantConfig;
  readonly #store: StoreReader;
  readonly #explainer: ReadingExplainer;

  constructor(config: PlantConfig, store: StoreReader, explainer: ReadingExplainer) {
    this.#config = config;
    this.#store = store;
    this.#explainer = explainer;
    this.calendar = shiftCalendar(config.shifts ?? calendarDays, config.timeZone);
  }

  /** The checks that this shift has to do. */
  checks(shift: Shift): RequiredCheck[] {
    return checksFor(this.#config.checks ?? [], shift);
  }

  /** As it was signed, where it was; else as it is at `now`, wall clock. */
  bound(shift: Shift, now: number): BoundRecord {
    const entries = this.#store.handover.entries(shift.from);
    const standing = handoverStanding(entries);
    const frozen = standing.hash === undefined ? undefined : this.#store.handover.frozen(standing.hash);
    const record = frozen ? (JSON.parse(frozen.json) as ShiftRecord) : this.draw(shift, now);
    return { record, hash: frozen?.hash ?? null, standing, entries };
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
      laboratory: [],
      entries: store.handover.entries(shift.from),
      actions: this.#actions(from, to),
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
  #actions(from: number, to: number): ShiftFacts["actions"] {
    return this.#store.handover
      .actions(from, to)
      .map(({ action, closed }) => ({ action, closed: closed && closed.at < to ? closed : undefined }));
  }
}
