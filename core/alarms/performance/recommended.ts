import type { Figure } from "../../messages/index.ts";

/** What the standards recommend for one figure, and where they say so. */
export interface Recommendation {
  key: string;
  title: string;
  unit: string;
  /** very likely acceptable up to here */
  acceptable: number;
  /** the most that is manageable */
  manageable?: number;
  /** "below" where the recommendation excludes the number itself */
  below?: boolean;
  source: string;
}

const isa2009 = "ISA-18.2-2009";
const both = `${isa2009} and IEC 62682:2014`;

/** Per operator, from at least 30 days. Figures from memory of the editions named; look them up before you quote them to an auditor. */
export const recommendations = {
  perDay: {
    ...{ key: "per-day", title: "Alarms per day", unit: "", acceptable: 150, manageable: 300 },
    source: `${isa2009} (IEC 62682:2014: 144 and 288); dropped in ISA-18.2-2016, since a daily mean hides bursts`,
  },
  perHour: {
    ...{ key: "per-hour", title: "Alarms per hour, mean", unit: "", acceptable: 6, manageable: 12 },
    source: both,
  },
  perTenMinutes: {
    ...{ key: "per-10-min", title: "Alarms per 10 minutes, mean", unit: "", acceptable: 1, manageable: 2 },
    source: both,
  },
  badTenMinutes: {
    ...{ key: "bad-10-min", title: "10-minute periods with more than 10 alarms (fixed periods)", unit: "%" },
    ...{ acceptable: 1, below: true, source: both },
  },
  badHours: {
    ...{
      key: "bad-hours",
      title: "Hours with more than 30 alarms (fixed hours)",
      unit: "%",
      acceptable: 1,
      below: true,
    },
    source: both,
  },
  mostInTenMinutes: {
    ...{ key: "most-10-min", title: "Most alarms in any 10 minutes (sliding)", unit: "", acceptable: 10 },
    source: both,
  },
  inFlood: {
    ...{ key: "in-flood", title: "Time in flood", unit: "%", acceptable: 1, below: true },
    source: both,
  },
  topTen: {
    ...{ key: "top-ten", title: "Share of the ten most frequent alarms", unit: "%", acceptable: 5 },
    source: `${both}: 1–5 % at most, with a plan where more; means little with few alarms`,
  },
  chattering: { key: "chattering", title: "Chattering alarms", unit: "", acceptable: 0, source: both },
  fleeting: {
    ...{ key: "fleeting", title: "Fleeting alarms", unit: "", acceptable: 0 },
    source: `${both}; fleeting: gone unanswered within a minute (the minute is ours)`,
  },
  stale: {
    ...{ key: "stale", title: "Most stale alarms on any day", unit: "", acceptable: 5, below: true },
    source: `${isa2009}: fewer than 5, with a plan; stale: longer than 24 h (from memory)`,
  },
} satisfies Record<string, Recommendation>;

/** Share of the annunciated alarms by priority, %: about these. ISA-18.2-2009 and IEC 62682:2014. */
export const recommendedShares = { high: 5, medium: 15, low: 80 } as const;
export const recommendedSharesSource = both;

/** A value beside what is recommended for it; null where there is nothing to judge. */
export function figureOf(recommendation: Recommendation, value: number | null): Figure {
  const { key, title, unit, acceptable, manageable, source } = recommendation;
  return {
    ...{ key, title, unit, value, acceptable, source },
    ...(manageable === undefined ? {} : { manageable }),
    recommended: words(recommendation),
    rating: value === null ? null : ratingOf(value, recommendation),
  };
}

function words({ acceptable, manageable, below, unit }: Recommendation): string {
  const of = unit === "%" ? " %" : "";
  if (acceptable === 0) return "none";
  const first = below ? `below ${acceptable}${of}` : `${acceptable}${of} or fewer`;
  return manageable === undefined ? first : `${first}; ${manageable} at most`;
}

function ratingOf(value: number, { acceptable, manageable, below }: Recommendation): NonNullable<Figure["rating"]> {
  if (below ? value < acceptable : value <= acceptable) return "acceptable";
  return manageable !== undefined && value <= manageable ? "manageable" : "beyond";
}
