import type { StoreWriter } from "../store/store.ts";

/** Readings gone through in one step: a few milliseconds of the engine's thread. */
const perStep = 500;
const pauseMs = 50;
const lookAgainMs = 60_000;
const dayMs = 24 * 3600 * 1000;

/**
 * Removes spectra that are older than the plant wants to keep, in small steps while the engine has nothing else to do. Results, roll-ups,
 * events, and the spectra of excursions stay for ever. @returns what stops it
 */
export function retireOldSpectra(options: {
  store: StoreWriter;
  streams: readonly string[];
  days: number;
  isIdle: () => boolean;
  trouble: (says: string) => void;
}): () => void {
  const { store, streams, days, isIdle, trouble } = options;
  let timer: NodeJS.Timeout;
  const step = () => {
    let more = !isIdle();
    try {
      const before = Date.now() - days * dayMs;
      if (!more) more = streams.map((stream) => store.retireSpectra(stream, before, perStep)).includes(true);
    } catch (error) {
      trouble(`Old spectra could not be removed (${(error as Error).message}); it is tried again.`);
    }
    timer = setTimeout(step, more ? pauseMs : lookAgainMs);
  };
  timer = setTimeout(step, pauseMs);
  return () => clearTimeout(timer);
}
