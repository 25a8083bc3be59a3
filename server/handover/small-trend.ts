import type { WantedProperty } from "../../core/handover/index.ts";
import { type SmallTrend, worstOfMask } from "../../core/messages/index.ts";
import type { StoreReader } from "../store/store.ts";

/** As many intervals as the small picture has room for; an interval's worst verdict is kept, so no excursion vanishes. */
const points = 144;

/** The trend of a stream's first property, small; null where there is nothing to draw. */
export function smallTrend(
  store: StoreReader,
  stream: string,
  property: WantedProperty | undefined,
  { from, to }: { from: number; to: number },
): SmallTrend | null {
  if (!property) return null;
  const { name, unit, target, decimals } = property;
  const trend = store.trend(stream, [name], from, to, points);
  if (trend.time.length === 0) return null;
  const digits = 10 ** (decimals + 1);
  return {
    property: name,
    unit,
    ...(target ? { target } : {}),
    time: trend.time,
    value: trend.properties[name].mean.map((value) => (value === null ? null : Math.round(value * digits) / digits)),
    verdict: trend.verdict.map((mask) => worstOfMask(mask) ?? "unusable"),
    gaps: trend.gaps,
  };
}
