import { hash32, keyOf, uniformAt } from "./random.ts";
import type { Wander } from "./wander.ts";

/** Steps further back than this have died away: e^(−stretch/lag) of each is left, far below any noise. */
const remembered = 4;

/**
 * What a controller makes of a set-point that people move now and then: within [−1, 1], a step once in every stretch of absolute time (at a
 * moment within it that the seed chooses), followed with a first-order lag.
 *
 * @param stretchMs one step in each, ms; at least eight lags
 * @param lagMs     time constant of the response, ms
 */
export function steppedSetPoint(seed: number, name: string, stretchMs: number, lagMs: number): Wander {
  const levelKey = keyOf(`${name}/level`);
  const momentKey = keyOf(`${name}/moment`);
  const level = (stretch: number) => hash32(seed, levelKey, stretch) / 0x8000_0000 - 1;
  const moment = (stretch: number) => (stretch + 0.1 + 0.8 * uniformAt(seed, momentKey, stretch)) * stretchMs;
  return (time) => {
    const now = Math.floor(time / stretchMs);
    const first = now - remembered;
    let followed = level(first);
    let stepped = level(first);
    let since = moment(first);
    for (let stretch = first + 1; stretch <= now && moment(stretch) <= time; stretch++) {
      const at = moment(stretch);
      followed = stepped + (followed - stepped) * Math.exp(-(at - since) / lagMs);
      stepped = level(stretch);
      since = at;
    }
    return stepped + (followed - stepped) * Math.exp(-(time - since) / lagMs);
  };
}
