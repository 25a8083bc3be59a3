import type { EntryOf, HandoverEntry, Shift, Write } from "../messages/index.ts";
import { type HandoverStanding, handoverStanding, meanings } from "../shift-page/index.ts";
import type { Drawn } from "./drawn.ts";

/** A wish to sign. `seen`: the hash of the record that the signer has before them; null where nobody has signed yet. */
export type Sign =
  | {
      kind: "sign";
      side: "outgoing";
      role: string;
      seen: string | null;
      record: Drawn /** until when it tells, epoch ms */;
      to: number;
    }
  | { kind: "sign"; side: "incoming"; role: string; seen: string | null };

/** What a person asks of a shift's record; `at` is the server's wall clock, epoch ms. */
export type HandoverAsk = (Write | Sign) & { shift: Shift; at: number; by: string };

export interface HandoverBooks {
  /** entries of the shift, in the order of their numbers */
  entries: readonly HandoverEntry[];
  /** of any shift, by its number */
  entry: (number: number) => HandoverEntry | undefined;
  /** has the action been closed? */
  closing: (action: number) => HandoverEntry | undefined;
  /** keys of the checks that the settings ask for */
  checks: readonly string[];
  /** the number of this entry, if there is to be one */
  next: number;
  /** time of the newest entry of any shift */
  lastAt: number;
}

export type HandoverAnswer =
  | { kind: "written"; entry: HandoverEntry; record?: Drawn }
  | { kind: "rejected"; why: string };

/**
 * Answers a person who writes to a shift's record or signs it. Nothing is ever changed or taken out: what is written after both sides have
 * signed stands beside the frozen record. Pure.
 */
export function decideHandover(ask: HandoverAsk, books: HandoverBooks): HandoverAnswer {
  const standing = handoverStanding(books.entries);
  const why = reasonAgainst(ask, standing, books);
  if (why !== undefined) return { kind: "rejected", why };
  const clockBackMs = books.lastAt - ask.at;
  const head = {
    number: books.next,
    shift: ask.shift.from,
    at: ask.at,
    by: ask.by,
    ...(standing.is === "taken over" ? { amends: true as const } : {}),
    ...(clockBackMs > 0 ? { clockBackMs } : {}),
  };
  if (ask.kind !== "sign") return { kind: "written", entry: { ...head, ...written(ask) } };
  const { side, role } = ask;
  const signature = (hash: string): HandoverEntry => ({
    ...head,
    kind: "signature",
    side,
    role,
    meaning: meanings[side],
    hash,
  });
  if (ask.side === "incoming") return { kind: "written", entry: signature(standing.hash!) };
  return { kind: "written", entry: signature(ask.record.hash), record: ask.record };
}

function written({ shift: _, at: __, by: ___, ...write }: Write & Omit<HandoverAsk, keyof Write>): Write {
  return write as Write;
}

function reasonAgainst(ask: HandoverAsk, standing: HandoverStanding, books: HandoverBooks): string | undefined {
  if (ask.at < ask.shift.from) {
    return "by the server's clock this shift has not begun. Was the clock set back? Set it right, then write";
  }
  switch (ask.kind) {
    case "sign":
      return againstSigning(ask, standing);
    case "action closed":
      return againstClosing(ask.refers, books);
    case "answer":
      return againstAnswering(ask.refers, books.entries);
    case "check":
      return againstTicking(ask, books);
    case "question":
    case "objection":
      return standing.is === "open"
        ? "the outgoing side has not signed yet: there is nothing to answer for"
        : undefined;
    case "note":
    case "action":
      return undefined;
    default:
      return ask satisfies never;
  }
}

/** Two people may sign at the same moment: who comes second has not seen what the first one signed, and is told so. */
function againstSigning(
  ask: Sign & { by: string },
  { is, outgoing, incoming, hash }: HandoverStanding,
): string | undefined {
  if (is === "taken over") {
    return `${incoming!.by} has taken this shift over already and the record is frozen. Add a note: it will stand beside it`;
  }
  if (ask.side === "incoming") {
    if (is === "open")
      return "the outgoing side has not signed yet. Until it does the shift is seen as not handed over";
    if (outgoing!.by === ask.by)
      return `${ask.by} has signed as the outgoing side: the incoming side is another person`;
  }
  if (ask.seen === (hash ?? null)) return undefined;
  return outgoing
    ? `${outgoing.by} has signed another version of this record meanwhile. Read it, then sign`
    : "nobody has signed this shift, but a signed record was named. Read it again, then sign";
}

function againstClosing(action: number, { entry, closing }: HandoverBooks): string | undefined {
  if (entry(action)?.kind !== "action") return `there is no action ${action}`;
  const closed = closing(action);
  return closed && `${closed.by} has closed action ${action} already`;
}

function againstAnswering(asked: number, entries: readonly HandoverEntry[]): string | undefined {
  const found = entries.find(({ number }) => number === asked);
  const isAsked = found?.kind === "question" || found?.kind === "objection";
  return isAsked ? undefined : `entry ${asked} of this shift is no question and no objection`;
}

function againstTicking(
  { check, outcome }: EntryOf<"check"> | Extract<Write, { kind: "check" }>,
  books: HandoverBooks,
) {
  if (!books.checks.includes(check))
    return `there is no check "${check}"; there are ${books.checks.join(", ") || "none"}`;
  const last = books.entries.findLast((entry) => entry.kind === "check" && entry.check === check);
  if (last?.kind === "check" && last.outcome === outcome) return `${last.by} has noted "${outcome}" for it already`;
  return undefined;
}
