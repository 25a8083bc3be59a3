import type { EntryOf, HandoverEntry } from "../messages/index.ts";

/** Where a shift's handover stands, as its entries tell. */
export interface HandoverStanding {
  /** open: nobody has signed · offered: the outgoing side has · taken over: both have, the record is frozen */
  is: "open" | "offered" | "taken over";
  outgoing?: EntryOf<"signature">;
  incoming?: EntryOf<"signature">;
  /** of the record that the outgoing side signed last */
  hash?: string;
  /** questions and objections that nobody has answered */
  unanswered: (EntryOf<"question"> | EntryOf<"objection">)[];
}

/** @param entries of one shift, in the order of their numbers */
export function handoverStanding(entries: readonly HandoverEntry[]): HandoverStanding {
  const signatures = entries.filter((entry) => entry.kind === "signature");
  const outgoing = signatures.findLast(({ side }) => side === "outgoing");
  const incoming = signatures.find(({ side }) => side === "incoming");
  return {
    is: incoming ? "taken over" : outgoing ? "offered" : "open",
    ...(outgoing ? { outgoing, hash: outgoing.hash } : {}),
    ...(incoming ? { incoming } : {}),
    unanswered: unansweredIn(entries),
  };
}

function unansweredIn(entries: readonly HandoverEntry[]): HandoverStanding["unanswered"] {
  const answered = new Set(entries.flatMap((entry) => (entry.kind === "answer" ? [entry.refers] : [])));
  return entries.filter(
    (entry): entry is EntryOf<"question"> | EntryOf<"objection"> =>
      (entry.kind === "question" || entry.kind === "objection") && !answered.has(entry.number),
  );
}
