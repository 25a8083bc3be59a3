import { compare, countedOf } from "../../core/agreement/index.ts";
import { defaultLaboratory } from "../../core/judging/index.ts";
import type { Agreement } from "../../core/messages/index.ts";
import type { PlantConfig } from "../config/plant-config.ts";
import { laboratoryOf } from "../engine/streams.ts";
import type { StoreReader } from "../store/store.ts";
import type { ReadingExplainer } from "./reading-view.ts";

export interface AgreementQuery {
  stream: string;
  property: string;
  from: number;
  to: number;
}

/** The model in charge beside the laboratory, over the samples of a stretch; undefined when the stream predicts no such property. */
export function agreementView(
  { config, store, explainer }: { config: PlantConfig; store: StoreReader; explainer: ReadingExplainer },
  query: AgreementQuery,
): Agreement | undefined {
  const { stream, property } = query;
  const id = store.limitSet(stream)?.model;
  const model = id === undefined ? undefined : explainer.model(id).model;
  const index = model?.properties.findIndex(({ name }) => name === property) ?? -1;
  if (!model || id === undefined || index < 0) return undefined;
  const { pairs, apart } = countedOf(store.labResults(query), id);
  const own = config.streams.find((each) => each.id === stream);
  const { lagMs, windowMs } = own ? laboratoryOf(own) : defaultLaboratory;
  return {
    stream,
    property,
    unit: model.properties[index].unit,
    model: { id, name: model.name },
    apart,
    ...compare(pairs, model, index),
    pairing: { lagMs, windowMs },
  };
}
