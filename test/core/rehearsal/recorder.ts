import {
  freshState,
  hearProcessState,
  judge,
  type Note,
  type StreamRules,
  type StreamState,
  tick,
} from "../../../core/judging/index.ts";
import type { Judged, ProcessState, Reading } from "../../../core/messages/index.ts";
import {
  type Activation,
  dataGap,
  frozen,
  noGap,
  type RecordedStretch,
  unusable,
  usable,
} from "../../../core/rehearsal/index.ts";

interface Row {
  judged: Judged;
  receivedAt: number;
  gap: number;
}

/** A stream that is judged as a load judges it, and what its record then holds: alarms as notes, readings as columns. */
export class Recorder {
  state: StreamState = freshState;
  readonly notes: Note[] = [];
  readonly #rules: StreamRules;
  readonly #rows: Row[] = [];
  readonly #processStates: ProcessState[] = [];

  constructor(rules: StreamRules) {
    this.#rules = rules;
  }

  hear(process: ProcessState): void {
    const [state, heard] = hearProcessState(this.state, process, process.since, this.#rules);
    if (heard.kind !== "heard") return;
    this.state = state;
    this.notes.push(...heard.notes);
    this.#processStates.push(process);
  }

  read(reading: Reading): void {
    const receivedAt = reading.time;
    const [ticked, notes] = tick(this.state, receivedAt, this.state.receivedAt ?? receivedAt, this.#rules);
    const [state, judgement] = judge(ticked, { reading, receivedAt, known: false }, this.#rules);
    if (judgement.kind !== "judged") throw new Error(JSON.stringify(judgement));
    this.state = state;
    this.notes.push(...notes, ...judgement.notes);
    const { judged, gapFrom } = judgement;
    this.#rows.push({ judged, receivedAt, gap: gapFrom === null ? noGap : dataGap });
  }

  stretch(): RecordedStretch {
    const rows = this.#rows;
    const column = (of: (row: Row) => number | null) => Float64Array.from(rows, (row) => of(row) ?? Number.NaN);
    const names = Object.keys(rows[0]?.judged.properties ?? {});
    return {
      stream: this.#rules.stream,
      time: column(({ judged }) => judged.time),
      received: column(({ receivedAt }) => receivedAt),
      t2: column(({ judged }) => judged.t2),
      q: column(({ judged }) => judged.q),
      nearest: column(({ judged }) => judged.nearest),
      usability: Uint8Array.from(rows, ({ judged }) =>
        judged.unusableReason === "frozen" ? frozen : judged.unusable === undefined ? usable : unusable,
      ),
      gap: Uint8Array.from(rows, ({ gap }) => gap),
      history: new Uint8Array(rows.length),
      properties: new Map(names.map((name) => [name, column(({ judged }) => judged.properties[name].value)])),
      models: rows.flatMap(({ judged }) => judged.model ?? []).slice(0, 1),
      processStates: this.#processStates,
    };
  }
}

/** What the record says of each alarm's condition: since when, raised, called, cleared; alarm by alarm, in the order of time. */
export function activationsOnRecord(notes: readonly Note[]): Activation[] {
  const all: Activation[] = [];
  const open = new Map<string, Activation>();
  for (const { kind, at, alarm, setAside } of notes) {
    const key = alarm?.key ?? setAside?.key;
    if (key === undefined) continue;
    const since = alarm?.since ?? setAside?.since;
    switch (kind) {
      case "alarm raised":
      case "alarm raised again":
      case "alarm raised unannounced": {
        const called = kind === "alarm raised unannounced" ? {} : { annunciatedAt: at };
        const activation = { key, since: since!, raisedAt: at, ...called };
        all.push(activation);
        open.set(key, activation);
        break;
      }
      case "alarm annunciated anew": {
        const activation = open.get(key);
        if (activation) activation.annunciatedAt ??= at;
        break;
      }
      case "alarm cleared":
      case "alarm cleared unannounced": {
        const activation = open.get(key);
        if (activation) activation.clearedAt = at;
        open.delete(key);
        break;
      }
    }
  }
  return all;
}
