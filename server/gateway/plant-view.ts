import type { LimitSet } from "../../core/limit-set/index.ts";
import type { Plant, PlantProperty, PlantStream } from "../../core/messages/index.ts";
import type { PlantConfig, StreamConfig } from "../config/plant-config.ts";
import { gapMsOf } from "../engine/streams.ts";
import type { StoreReader } from "../store/store.ts";
import type { ReadingExplainer } from "./reading-view.ts";

export const caution =
  "Advisory only. Not a safety function, no layer of protection, no basis for a trip or an interlock. Site procedures, the site's alarm philosophy, local codes and licensed practice come first.";

/** What the screens must know before they draw anything. */
export function plantView(
  config: PlantConfig,
  store: StoreReader,
  explainer: ReadingExplainer,
  about: { version: string; person: Plant["person"]; troubles: ReadonlyMap<string, string> },
): Plant {
  const { version, person, troubles } = about;
  return {
    site: config.site,
    name: config.name,
    timeZone: config.timeZone,
    version,
    serverTime: Date.now(),
    demo: config.demo ?? false,
    person,
    caution,
    streams: config.streams.map((stream) => streamView(stream, store, explainer, troubles.get(stream.id))),
  };
}

function streamView(
  config: StreamConfig,
  store: StoreReader,
  explainer: ReadingExplainer,
  trouble: string | undefined,
): PlantStream {
  const limitSet = store.limitSet(config.id);
  const shown = { id: config.id, name: config.name, periodMs: config.periodMs, gapMs: gapMsOf(config.periodMs) };
  if (!limitSet) {
    return {
      ...shown,
      properties: [],
      model: null,
      limitSet: 0,
      trouble: trouble ?? "The stream has no usable model.",
    };
  }
  const { model, properties } = explainer.model(limitSet.model);
  return {
    ...shown,
    properties: properties.map((property) => propertyView(property, config, limitSet)),
    model: { id: limitSet.model, name: model.name },
    limitSet: limitSet.version,
    ...(trouble === undefined ? {} : { trouble }),
  };
}

function propertyView(
  property: { name: string; unit: string; range: readonly [number, number] | number[] },
  { properties }: StreamConfig,
  limitSet: LimitSet,
): PlantProperty {
  const own = properties?.[property.name];
  const [low, high] = property.range;
  const margin = 0.1 * (high - low);
  return {
    name: property.name,
    unit: property.unit,
    range: [low, high],
    ...(own?.target ? { target: own.target } : {}),
    scale: own?.scale ?? [low - margin, high + margin],
    limits: limitSet.alarms.flatMap(({ watches, priority }) =>
      watches.kind === "property" && watches.property === property.name
        ? [{ side: watches.side, limit: watches.limit, priority }]
        : [],
    ),
  };
}
