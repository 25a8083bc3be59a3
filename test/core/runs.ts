/** How often a property is tried: so many times each day, twenty times as often in the full run (npm run test:full). */
export function runs(daily: number): number {
  return process.env.MILLRACE_FULL === "1" ? 20 * daily : daily;
}
