import type { TimeWindow } from "../data/time-window.ts";
import { longestMs, shortestMs } from "../data/time-window.ts";

/** Where a person is: the whole of it stands in the URL, so that it can be sent to someone else. */
export type Route =
  | { view: "watch"; window: TimeWindow; stream?: string }
  | { view: "reading"; stream?: string; at?: number }
  | { view: "excursions"; stream?: string }
  | { view: "limits"; stream?: string }
  /** `at`: any time in the shift; without it the one that runs. `words`: what is looked for in all that people said */
  | { view: "handover"; at?: number; words?: string }
  | { view: "agreement"; stream?: string; property?: string; days?: number }
  /** `kept`: limits under consideration, by their name */
  | { view: "rehearse"; stream?: string; from?: number; to?: number; kept?: string }
  | { view: "alarms" }
  | { view: "plant" };
export type ViewName = Route["view"];

export const defaultWindow: TimeWindow = { kind: "live", spanMs: 3_600_000 };

function timeOf(text: string | null): number | undefined {
  if (text === null) return undefined;
  const at = /^\d+$/.test(text) ? Number(text) : Date.parse(text);
  return Number.isFinite(at) ? at : undefined;
}

function daysOf(text: string | null): number | undefined {
  const days = Number(text);
  return days > 0 && days <= 4000 ? days : undefined;
}

function windowOf(query: URLSearchParams): TimeWindow {
  const from = timeOf(query.get("from"));
  const to = timeOf(query.get("to"));
  if (from !== undefined && to !== undefined && to - from >= shortestMs && to - from <= longestMs) {
    return { kind: "stopped", from, to };
  }
  const since = timeOf(query.get("since"));
  if (since !== undefined) return { kind: "since", from: since };
  const seconds = Number(query.get("last"));
  if (seconds * 1000 >= shortestMs && seconds * 1000 <= longestMs) return { kind: "live", spanMs: seconds * 1000 };
  return defaultWindow;
}

/** Reads a URL's path and query; what it cannot make sense of it leaves out, and an unknown path is Watch. */
export function parseRoute(path: string, search: string): Route {
  const query = new URLSearchParams(search);
  const [view, segment] = path.split("/").filter(Boolean);
  const stream = segment ? decodeURIComponent(segment) : undefined;
  switch (view) {
    case "reading":
      return { view, stream, at: timeOf(query.get("at")) };
    case "excursions":
    case "limits":
      return { view, stream };
    case "handover":
      return { view, at: timeOf(query.get("at")), words: query.get("words") ?? undefined };
    case "agreement":
      return { view, stream, property: query.get("property") ?? undefined, days: daysOf(query.get("days")) };
    case "rehearse": {
      const [from, to] = [timeOf(query.get("from")), timeOf(query.get("to"))];
      return { view, stream, from, to, kept: query.get("kept") ?? undefined };
    }
    case "alarms":
    case "plant":
      return { view };
    default:
      return { view: "watch", window: windowOf(query), stream: view === "watch" ? stream : undefined };
  }
}

const iso = (at: number) => new Date(Math.round(at)).toISOString();

function queryOf(window: TimeWindow): string {
  switch (window.kind) {
    case "live":
      return `last=${Math.round(window.spanMs / 1000)}`;
    case "since":
      return `since=${iso(window.from)}`;
    case "stopped":
      return `from=${iso(window.from)}&to=${iso(window.to)}`;
  }
}

/** The URL of a route; `parseRoute` gives the route back. */
export function href(route: Route): string {
  const stream = "stream" in route && route.stream ? `/${encodeURIComponent(route.stream)}` : "";
  switch (route.view) {
    case "watch": {
      const { window } = route;
      return `/watch${stream}?${queryOf(window)}`;
    }
    case "reading":
      return `/reading${stream}${route.at === undefined ? "" : `?at=${iso(route.at)}`}`;
    case "handover": {
      const query = new URLSearchParams();
      if (route.at !== undefined) query.set("at", iso(route.at));
      if (route.words) query.set("words", route.words);
      return query.size > 0 ? `/handover?${query}` : "/handover";
    }
    case "agreement": {
      const { property, days } = route;
      const query = new URLSearchParams({ ...(property && { property }), ...(days && { days: String(days) }) });
      return `/agreement${stream}${query.size > 0 ? `?${query}` : ""}`;
    }
    case "rehearse": {
      const query = new URLSearchParams();
      if (route.from !== undefined) query.set("from", iso(route.from));
      if (route.to !== undefined) query.set("to", iso(route.to));
      if (route.kept) query.set("kept", route.kept);
      return `/rehearse${stream}${query.size > 0 ? `?${query}` : ""}`;
    }
    default:
      return `/${route.view}${stream}`;
  }
}
