import type { Scenario } from "./scenario.ts";

const form = { format: "millrace-scenario", formatVersion: 1 } as const;
const minutes = 60;

/** Nothing happens. */
const calm: Scenario = { ...form, name: "calm", events: [] };

/** For someone who watches: something to see within the first minutes, every kind of trouble but the slow ones within the half hour. */
const demo: Scenario = {
  ...form,
  name: "demo",
  repeatMinutes: 30,
  // Samples far more often than anybody draws them, so that someone who watches sees the laboratory drift within the half hour.
  laboratory: { everyMinutes: 3, turnaroundMinutes: 1 },
  events: [
    { kind: "bubble", stream: "bq-201", startSeconds: 30 },
    { kind: "co-solvent", stream: "bq-305", startSeconds: 75, durationSeconds: 4 * minutes },
    { kind: "lab-bias", stream: "bq-201", startSeconds: 2 * minutes, durationSeconds: 26 * minutes },
    { kind: "bubble", stream: "bq-410", startSeconds: 4 * minutes },
    { kind: "beyond-range", stream: "bq-201", startSeconds: 8 * minutes, durationSeconds: 4 * minutes },
    { kind: "fouling", stream: "bq-410", startSeconds: 13 * minutes, durationSeconds: 11 * minutes },
    { kind: "bubble", stream: "bq-305", startSeconds: 16 * minutes },
    { kind: "silent", stream: "bq-305", startSeconds: 20 * minutes, durationSeconds: 1 * minutes },
    { kind: "bubble", stream: "bq-201", startSeconds: 23 * minutes },
    { kind: "grade-change", stream: "bq-201", startSeconds: 24 * minutes, durationSeconds: 4 * minutes },
  ],
};

/** Two hours with every kind of event once, and quiet between: what alarms are measured by. */
const faults: Scenario = {
  ...form,
  name: "faults",
  events: [
    { kind: "bubble", stream: "bq-201", startSeconds: 3 * minutes },
    { kind: "co-solvent", stream: "bq-305", startSeconds: 6 * minutes, durationSeconds: 12 * minutes },
    { kind: "beyond-range", stream: "bq-201", startSeconds: 12 * minutes, durationSeconds: 14 * minutes },
    { kind: "silent", stream: "bq-305", startSeconds: 32 * minutes, durationSeconds: 5 * minutes },
    { kind: "fouling", stream: "bq-410", startSeconds: 8 * minutes, durationSeconds: 45 * minutes },
    { kind: "temperature-swing", stream: "bq-201", startSeconds: 40 * minutes, durationSeconds: 18 * minutes },
    { kind: "frozen", stream: "bq-305", startSeconds: 50 * minutes, durationSeconds: 6 * minutes },
    { kind: "lamp-ageing", stream: "bq-410", startSeconds: 62 * minutes, durationSeconds: 40 * minutes },
    { kind: "grade-change", stream: "bq-201", startSeconds: 72 * minutes, durationSeconds: 20 * minutes },
    { kind: "cleaning", stream: "bq-305", startSeconds: 80 * minutes, durationSeconds: 12 * minutes },
  ],
};

export const builtInScenarios: Readonly<Record<"calm" | "demo" | "faults", Scenario>> = { calm, demo, faults };
