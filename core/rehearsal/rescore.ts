import { MillraceError } from "../errors.ts";
import type { Scorer } from "../judging/index.ts";
import type { AxisSpec } from "../messages/index.ts";
import { AxisError } from "../spectrum/index.ts";
import { type RecordedStretch, usable } from "./stretch.ts";

export class RescoreError extends MillraceError {
  readonly code = "rescore";
}

interface Spectrum {
  time: number;
  values: Float64Array | null;
  axis?: AxisSpec;
}

/** Progress is told every so many readings. */
const tellEvery = 1000;

/**
 * The stretch as another model would have scored it: its recorded spectra once more. What was unusable stays so.
 *
 * @param spectra of the stretch's readings, in the same order; later ones that came meanwhile are left out
 * @throws RescoreError when a spectrum is no longer kept, or the model's axis is not covered
 */
export function rescored(
  stretch: RecordedStretch,
  spectra: Iterable<Spectrum>,
  scorer: Scorer,
  progress: (done: number) => void = () => {},
): RecordedStretch {
  const n = stretch.time.length;
  const column = () => new Float64Array(n).fill(Number.NaN);
  const [t2, q, nearest] = [column(), column(), column()];
  const values = scorer.compiled.properties.map(({ name }) => [name, column()] as const);
  let i = 0;
  for (const spectrum of spectra) {
    if (i === n) break;
    if (stretch.usability[i] === usable) {
      const score = scoreOf(spectrum, scorer);
      t2[i] = score.t2;
      q[i] = score.q;
      nearest[i] = score.nearest;
      for (let p = 0; p < values.length; p++) values[p][1][i] = score.values[p];
    }
    if (++i % tellEvery === 0) progress(i);
  }
  return { ...stretch, t2, q, nearest, properties: new Map(values), models: [scorer.compiled.id] };
}

function scoreOf({ time, values, axis }: Spectrum, scorer: Scorer) {
  const at = new Date(time).toISOString();
  const { name } = scorer.compiled.model;
  if (!values) {
    throw new RescoreError(
      `The spectrum of ${at} is no longer kept, so ${name} cannot score it. Choose a stretch after the spectra were retired, or the model that scored it then.`,
    );
  }
  try {
    return scorer.run(values, axis);
  } catch (cause) {
    if (!(cause instanceof AxisError)) throw cause;
    throw new RescoreError(`${name} cannot score the spectrum of ${at}: ${cause.message}`, { cause });
  }
}
