import type { PropertyAccount, StreamAccount, TimeKind } from "../messages/index.ts";
import { duration, fixed, named, percent, thin, withUnit } from "../words/index.ts";

/** Most of the time first to be said of a stream that was not inside. */
const doubts: readonly TimeKind[] = ["unfamiliar", "extrapolated", "sparse", "unusable", "no data"];

/** A share in words that never say all or nothing unless it is: 99.97 % is "over 99 %", 0.01 % "under 0.1 %". */
export function shareWords(part: number, whole: number): string {
  if (part <= 0 || whole <= 0) return `0${thin}%`;
  if (part >= whole) return `100${thin}%`;
  const share = part / whole;
  if (share > 0.995) return `over 99${thin}%`;
  return share < 0.001 ? `under 0.1${thin}%` : percent(share);
}

export function wholeMs({ ms }: StreamAccount): number {
  return Object.values(ms).reduce((sum, part) => sum + part, 0);
}

/** The sentence that leads a stream: how far it could be believed, how its first property was, and how that compares. */
export function streamWords(account: StreamAccount, before: StreamAccount | null): string {
  if (account.readings === 0 && account.ms["no data"] === wholeMs(account)) return "No readings in this shift.";
  const [first] = account.properties;
  return [`${trustWords(account)}.`, ...(first ? [propertyWords(first)] : []), beforeWords(before)].join(" ");
}

function trustWords(account: StreamAccount): string {
  const whole = wholeMs(account);
  if (account.ms.inside === whole) return "Inside all the time";
  const others = doubts
    .filter((kind) => account.ms[kind] > 0)
    .map((kind) => `${kind} ${shareWords(account.ms[kind], whole)} (${duration(account.ms[kind])})`);
  return `Inside ${shareWords(account.ms.inside, whole)} of the time; ${others.join(", ")}`;
}

function propertyWords({ name, unit, decimals, mean, min, max, target, outsideMs }: PropertyAccount): string {
  if (mean === null || min === null || max === null) return `${named(name)}: no number that may be believed.`;
  const value = `${named(name)} ${withUnit(fixed(mean, decimals), unit)} on average, ${fixed(min, decimals)} to ${fixed(max, decimals)}`;
  if (!target) return `${value}.`;
  const outside = outsideMs > 0 ? `outside for ${duration(outsideMs)}` : "never outside";
  return `${value}; target ${target[0]} to ${target[1]}: ${outside}.`;
}

function beforeWords(before: StreamAccount | null): string {
  if (!before || before.readings === 0) return "No readings in the shift before.";
  const [first] = before.properties;
  const mean = first?.mean ?? null;
  const value = mean === null ? "" : `, ${first.name} ${withUnit(fixed(mean, first.decimals), first.unit)}`;
  return `The shift before: inside ${shareWords(before.ms.inside, wholeMs(before))}${value}.`;
}
