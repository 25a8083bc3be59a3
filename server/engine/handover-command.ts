import { decideHandover, type HandoverAsk } from "../../core/handover/index.ts";
import type { Note } from "../../core/judging/index.ts";
import type { HandoverEntry, RecordedEvent } from "../../core/messages/index.ts";
import { entryWords } from "../../core/shift-page/index.ts";
import type { FrozenRecord, HandoverBook } from "../store/handover-store.ts";

type Untimed<Ask> = Ask extends HandoverAsk ? Omit<Ask, "at"> : never;
/** What a person writes to a shift's record, or their signature. The engine gives it its time. */
export interface HandoverCommand {
  kind: "handover";
  ask: Untimed<HandoverAsk>;
}

export interface HandoverContext {
  book: HandoverBook;
  /** keys of the checks that the settings ask for */
  checks: readonly string[];
}

export type HandoverDone =
  | { kind: "written"; note: Note; frozen?: FrozenRecord; number: number }
  | { kind: "rejected"; why: string };

/**
 * Answers a person at `now`, wall clock. Pure but for reading the book.
 *
 * @param events of this turn, which the book does not have yet
 * @param next the number that the entry's event will have
 */
export function answerHandover(
  { ask }: HandoverCommand,
  { now, next, events }: { now: number; next: number; events: readonly RecordedEvent[] },
  { book, checks }: HandoverContext,
): HandoverDone {
  const fresh = events.flatMap(({ handover }): HandoverEntry[] => (handover ? [handover] : []));
  const { shift } = ask;
  const answer = decideHandover({ ...ask, at: now } as HandoverAsk, {
    entries: [...book.entries(shift.from), ...fresh.filter((entry) => entry.shift === shift.from)],
    entry: (number) => fresh.find((entry) => entry.number === number) ?? book.entry(number),
    closing: (action) =>
      fresh.find((entry) => entry.kind === "action closed" && entry.refers === action) ?? book.closing(action),
    checks,
    next,
    lastAt: fresh.at(-1)?.at ?? book.lastAt(),
  });
  if (answer.kind === "rejected") return answer;
  const { entry, record } = answer;
  const stream = entry.kind === "note" && entry.about.kind !== "shift" ? entry.about.stream : null;
  const note = {
    at: now,
    stream,
    kind: `handover ${entry.kind}`,
    says: entryWords(entry),
    by: entry.by,
    handover: entry,
  };
  return {
    kind: "written",
    number: entry.number,
    note,
    ...(record && ask.kind === "sign" && ask.side === "outgoing"
      ? { frozen: { ...record, shift: shift.from, to: ask.to } }
      : {}),
  };
}
