import { statSync } from "node:fs";
import { Counter, collectDefaultMetrics, Gauge, Histogram, Registry } from "prom-client";
import { priorities } from "../../core/messages/index.ts";
import type { BrokerState } from "../broker/embedded-broker.ts";
import type { Account, Count } from "../engine/meter.ts";
import type { LiveHub } from "./live-hub.ts";

/** The service's own figures, in the form that Prometheus reads. Counters begin at 0 with every start of the service. */
export class Figures {
  readonly #registry = new Registry();
  readonly #readings;
  readonly #refusals;
  readonly #events;
  readonly #commits;
  readonly #failedCommits;

  /** `files`: those whose size is shown, by what they are; `broker`: the embedded one */
  constructor(live: LiveHub, files: Record<string, string>, broker?: () => BrokerState) {
    const registers = [this.#registry];
    const counter = (name: string, help: string, ...labelNames: string[]) =>
      new Counter({ name: `millrace_${name}`, help, labelNames, registers });
    /** `look` is asked when somebody reads the figures. */
    const gauge = (name: string, help: string, labelNames: string[], look: (set: SetGauge) => void) =>
      new Gauge({
        ...{ name: `millrace_${name}`, help, labelNames, registers },
        collect() {
          this.reset();
          look((value, labels = {}) => this.set(labels, value));
        },
      });

    collectDefaultMetrics({ register: this.#registry });
    this.#readings = counter("readings_total", "Readings put on record", "stream", "verdict", "origin");
    this.#refusals = counter("refusals_total", "Messages and readings refused, by reason", "stream", "reason");
    this.#events = counter("events_total", "Events put on record (alarms, excursions, sequence gaps, starts)", "kind");
    this.#failedCommits = counter("failed_commits_total", "Commits that failed and are tried again");
    this.#commits = new Histogram({
      name: "millrace_commit_seconds",
      help: "Time that one commit to the record takes",
      buckets: [0.001, 0.0025, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 5],
      registers,
    });
    gauge("engine_running", "1 while the engine reports every second", [], (set) => set(live.engineHeard ? 1 : 0));
    gauge("source_connected", "1 while the broker that readings come from is reached", [], (set) =>
      set(live.picture.health.source ? 1 : 0),
    );
    gauge("record_trouble", "1 while the record cannot be written", [], (set) =>
      set(live.picture.health.trouble === undefined ? 0 : 1),
    );
    gauge("waiting_readings", "Readings received and not yet on record", [], (set) => set(live.picture.health.waiting));
    gauge("behind_seconds", "Age of the oldest reading that waits", [], (set) =>
      set(live.picture.health.behindMs / 1000),
    );
    gauge("live_clients", "Open live links of screens", [], (set) => set(live.clients));
    gauge("open_alarms", "Alarms that need a person", ["priority"], (set) => {
      const open = live.picture.now.flatMap(({ alarms }) => alarms);
      for (const priority of priorities) {
        set(open.filter((alarm) => alarm.priority === priority).length, { priority });
      }
    });
    gauge("latest_reading_timestamp_seconds", "Time of a stream's newest reading", ["stream"], (set) => {
      for (const { stream, latest } of live.picture.now) if (latest) set(latest.time / 1000, { stream });
    });
    gauge("file_bytes", "Size of the files that the service keeps", ["file"], (set) => {
      for (const [file, path] of Object.entries(files)) {
        set(statSync(path, { throwIfNoEntry: false })?.size ?? 0, { file });
      }
    });
    if (!broker) return;
    gauge("broker_connections", "Open connections at the embedded broker", [], (set) => set(broker().connections));
    gauge("inbox_bytes", "Readings kept by the embedded broker, not yet on record", [], (set) =>
      set(broker().inboxBytes),
    );
    gauge("held_readings", "Readings in memory whose publisher waits for its PUBACK", [], (set) => set(broker().held));
    new Counter({
      name: "millrace_broker_turned_away_total",
      help: "What the embedded broker did not let in, by reason",
      labelNames: ["reason"],
      registers,
      collect() {
        this.reset();
        for (const [reason, count] of Object.entries(broker().turnedAway)) this.inc({ reason }, count);
      },
    });
  }

  /** What the engine has put on record since it last told. */
  take({ readings, refusals, events, commits, failedCommits }: Account): void {
    add(this.#readings, readings);
    add(this.#refusals, refusals);
    add(this.#events, events);
    for (const seconds of commits) this.#commits.observe(seconds);
    this.#failedCommits.inc(failedCommits);
  }

  get contentType(): string {
    return this.#registry.contentType;
  }
  text(): Promise<string> {
    return this.#registry.metrics();
  }
}

type SetGauge = (value: number, labels?: Record<string, string>) => void;

function add(counter: Counter, counts: readonly Count[]): void {
  for (const { labels, count } of counts) counter.inc(labels, count);
}
