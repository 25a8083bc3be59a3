/** What is known of how a stream numbers its readings. */
export interface Numbering {
  last: number;
  /** rises by one with every number that follows its predecessor, falls by more with one that does not */
  trust: number;
}

/** Only a stream that counts by ones can be found to lack any: this many in a row say that it does. */
const trusted = 10;
const mostTrust = 20;
/** A stream whose numbers jump all the time does not count, whatever it did once. */
const trustLostByGap = 5;

/**
 * Follows a stream's sequence numbers, reading by reading in order of time. Says how many are missing before this one: lost on the way to us,
 * or still to come late. 0 while it is not known that the stream counts by ones, and when its count begins anew. Pure.
 */
export function followNumbering(before: Numbering | undefined, sequence: number): [Numbering, number] {
  if (!before) return [{ last: sequence, trust: 0 }, 0];
  const { last, trust } = before;
  if (sequence === last + 1) return [{ last: sequence, trust: Math.min(mostTrust, trust + 1) }, 0];
  const missing = sequence > last && trust >= trusted ? sequence - last - 1 : 0;
  return [{ last: sequence, trust: Math.max(0, trust - trustLostByGap) }, missing];
}
