import type { Settings } from "../../core/messages/index.ts";

export type LanePlaces = Settings["lanes"];

export interface LaneGroup {
  /** empty for lanes of no group */
  name: string;
  streams: string[];
}

/**
 * Every stream with its place, top to bottom: as it was arranged, lanes of one group together where the first of them stands; streams that
 * nobody arranged follow in the plant's order, without a group. Streams that the plant no longer has are left out.
 */
export function placesOf(streams: readonly string[], lanes: LanePlaces): LanePlaces {
  const known = lanes.filter(({ stream }, i) => streams.includes(stream) && firstOf(lanes, stream) === i);
  const fresh = streams
    .filter((stream) => !known.some((each) => each.stream === stream))
    .map((stream) => ({ stream, group: "" }));
  return gathered([...known, ...fresh]);
}

/** The same by groups, in the order of the screen. */
export function groupsOf(places: LanePlaces): LaneGroup[] {
  const groups: LaneGroup[] = [];
  for (const { stream, group } of places) {
    const last = groups.at(-1);
    if (last?.name === group) last.streams.push(stream);
    else groups.push({ name: group, streams: [stream] });
  }
  return groups;
}

/** One lane a place up (−1) or down (1). At the edge of its group it changes places with the whole group beside it. */
export function moved(places: LanePlaces, stream: string, by: -1 | 1): LanePlaces {
  const index = firstOf(places, stream);
  const other = places[index + by];
  if (!other) return places;
  if (other.group === places[index].group) {
    const next = [...places];
    [next[index], next[index + by]] = [next[index + by], next[index]];
    return next;
  }
  const groups = groupsOf(places);
  const at = groups.findIndex(({ streams }) => streams.includes(stream));
  [groups[at], groups[at + by]] = [groups[at + by], groups[at]];
  return groups.flatMap(({ name, streams }) => streams.map((each) => ({ stream: each, group: name })));
}

/** One lane put into a group ("": none): to the end of those that are in it. */
export function regrouped(places: LanePlaces, stream: string, group: string): LanePlaces {
  return gathered(places.map((each) => (each.stream === stream ? { stream, group } : each)));
}

function gathered(places: LanePlaces): LanePlaces {
  const names = [...new Set(places.map(({ group }) => group))];
  return names.flatMap((name) => places.filter(({ group }) => group === name));
}

function firstOf(places: LanePlaces, stream: string): number {
  return places.findIndex((each) => each.stream === stream);
}
