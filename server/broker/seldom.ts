import type { Log } from "../log.ts";

const everyMs = 10_000;

/** Says what happens often: the first of each kind at once, and from then on at most one line every ten seconds, which tells how many there were. */
export function seldom(log: Log): (kind: string, says: string) => void {
  const kinds = new Map<string, { at: number; more: number }>();
  return (kind, says) => {
    const now = performance.now();
    const last = kinds.get(kind);
    if (last && now - last.at < everyMs) {
      last.more++;
      return;
    }
    log(`${says}${last?.more ? ` (and ${last.more} more like it before)` : ""}`, "warn");
    kinds.set(kind, { at: now, more: 0 });
  };
}
