import { createHash } from "node:crypto";
import { describe, expect, test } from "vitest";
import { decideHandover, drawn, type HandoverAnswer, type HandoverAsk } from "../../../core/handover/index.ts";
import type { HandoverEntry, Write } from "../../../core/messages/index.ts";
import { canonicalJson } from "../../../core/model/index.ts";
import { handoverStanding } from "../../../core/shift-page/index.ts";
import { hour, minute, record, shift } from "./some-record.ts";

/** A book that keeps what is written, as the store does. */
class Book {
  entries: HandoverEntry[] = [];
  ask(by: string, at: number, wish: Write | SignWish): HandoverAnswer {
    const answer = decideHandover({ ...wish, shift, at, by } as HandoverAsk, {
      entries: this.entries,
      entry: (number) => this.entries.find((entry) => entry.number === number),
      closing: (action) => this.entries.find((entry) => entry.kind === "action closed" && entry.refers === action),
      checks: ["probe-window"],
      next: this.entries.length + 1,
      lastAt: this.entries.at(-1)?.at ?? 0,
    });
    if (answer.kind === "written") this.entries.push(answer.entry);
    return answer;
  }
}
type SignWish = {
  kind: "sign";
  side: "outgoing" | "incoming";
  role: string;
  seen: string | null;
  record?: object;
  to?: number;
};

const end = shift.to;
const note: Write = { kind: "note", about: { kind: "shift" }, says: "Probe window cleaned." };
const outgoing = (seen: string | null = null, version = record()): SignWish => ({
  ...{ kind: "sign", side: "outgoing", role: "operator" },
  seen,
  record: drawn(version),
  to: version.to,
});
const incoming = (seen: string | null): SignWish => ({ kind: "sign", side: "incoming", role: "operator", seen });
const why = (answer: HandoverAnswer) => (answer.kind === "rejected" ? answer.why : "written");
const hashOf = (book: Book) => handoverStanding(book.entries).hash ?? null;

describe("signing", () => {
  test("the outgoing side signs, the incoming takes over; both stand under the SHA-256 of the record", () => {
    const book = new Book();
    const signed = book.ask("A. Moss", end, outgoing());
    // Node's own SHA-256, of the canonical JSON.
    const hash = createHash("sha256").update(canonicalJson(record())).digest("hex");
    expect(signed).toMatchObject({ kind: "written", record: { hash, json: canonicalJson(record()) } });
    expect(handoverStanding(book.entries).is).toBe("offered");
    expect(why(book.ask("B. Reed", end + minute, incoming(hash)))).toBe("written");
    expect(handoverStanding(book.entries).is).toBe("taken over");
    expect(book.entries).toMatchObject(
      [
        { by: "A. Moss", at: end, side: "outgoing", hash, role: "operator", meaning: /hand over this shift/ },
        { by: "B. Reed", at: end + minute, side: "incoming", hash, meaning: /take over the shift/ },
      ].map(({ meaning, ...rest }) => ({ ...rest, meaning: expect.stringMatching(meaning) })),
    );
  });

  test("of two outgoing people who sign at the same moment the second is told of the first", () => {
    const book = new Book();
    book.ask("A. Moss", end, outgoing());
    expect(why(book.ask("C. Fern", end, outgoing()))).toMatch(/A\. Moss has signed another version/);
  });

  test("of two incoming people the second finds it taken over", () => {
    const book = new Book();
    book.ask("A. Moss", end, outgoing());
    const seen = hashOf(book);
    book.ask("B. Reed", end, incoming(seen));
    expect(why(book.ask("C. Fern", end, incoming(seen)))).toMatch(/B\. Reed has taken this shift over already/);
  });

  test("who has not seen the version that stands cannot take it over", () => {
    const book = new Book();
    book.ask("A. Moss", end, outgoing());
    const old = hashOf(book);
    book.ask("A. Moss", end + minute, outgoing(old, record({ madeAt: end + minute })));
    expect(why(book.ask("B. Reed", end + 2 * minute, incoming(old)))).toMatch(/another version of this record/);
    expect(why(book.ask("B. Reed", end + 3 * minute, incoming(hashOf(book))))).toBe("written");
  });

  test("a signed record that was never there is not overwritten", () => {
    expect(why(new Book().ask("A. Moss", end, outgoing("0".repeat(64))))).toMatch(/nobody has signed this shift/);
  });

  test("nobody hands over to themselves, and nothing is taken over that was not offered", () => {
    const book = new Book();
    expect(why(book.ask("B. Reed", end, incoming(null)))).toMatch(/outgoing side has not signed yet/);
    book.ask("A. Moss", end, outgoing());
    expect(why(book.ask("A. Moss", end, incoming(hashOf(book))))).toMatch(/another person/);
  });

  test("after both have signed the record cannot be signed anew; a note stands beside it", () => {
    const book = new Book();
    book.ask("A. Moss", end, outgoing());
    book.ask("B. Reed", end, incoming(hashOf(book)));
    expect(why(book.ask("A. Moss", end, outgoing(hashOf(book))))).toMatch(/frozen/);
    book.ask("A. Moss", end + hour, note);
    expect(book.entries.at(-1)).toMatchObject({ kind: "note", amends: true });
    expect(handoverStanding(book.entries).hash).toBe(hashOf(book));
  });
});

describe("questions, objections, actions, checks", () => {
  test("the incoming side asks or objects once the outgoing has signed, until it is answered", () => {
    const book = new Book();
    expect(why(book.ask("B. Reed", end, { kind: "question", says: "Which drum?" }))).toMatch(/not signed yet/);
    book.ask("A. Moss", end, outgoing());
    book.ask("B. Reed", end, { kind: "objection", says: "Drum 4 is not empty." });
    expect(handoverStanding(book.entries).unanswered).toMatchObject([{ kind: "objection", by: "B. Reed" }]);
    expect(why(book.ask("A. Moss", end, { kind: "answer", refers: 99, says: "?" }))).toMatch(/99 .* no question/);
    book.ask("A. Moss", end, { kind: "answer", refers: 2, says: "It is now." });
    expect(handoverStanding(book.entries).unanswered).toEqual([]);
  });

  test("an action is closed once", () => {
    const book = new Book();
    book.ask("A. Moss", end, { kind: "action", says: "Empty drum 4", owner: "Birch" });
    expect(why(book.ask("B. Reed", end, { kind: "action closed", refers: 7 }))).toMatch(/no action 7/);
    expect(why(book.ask("B. Reed", end, { kind: "action closed", refers: 1 }))).toBe("written");
    expect(why(book.ask("C. Fern", end, { kind: "action closed", refers: 1 }))).toMatch(/B\. Reed has closed action 1/);
  });

  test("a check is one of the settings; it may be undone, but not ticked twice", () => {
    const book = new Book();
    const tick = (outcome: "done" | "not done"): Write => ({ kind: "check", check: "probe-window", outcome });
    expect(why(book.ask("A. Moss", end, { ...tick("done"), check: "moon" } as Write))).toMatch(
      /no check "moon"; there are probe-window/,
    );
    expect(why(book.ask("A. Moss", end, tick("done")))).toBe("written");
    expect(why(book.ask("B. Reed", end, tick("done")))).toMatch(/A\. Moss has noted "done"/);
    expect(why(book.ask("B. Reed", end, tick("not done")))).toBe("written");
  });
});

describe("a clock that was set back", () => {
  test("what is written keeps its order by number and says by how much the clock had gone back", () => {
    const book = new Book();
    book.ask("A. Moss", end, note);
    book.ask("A. Moss", end - 20 * minute, { ...note, says: "Later, by the number." });
    expect(book.entries.map(({ number, clockBackMs }) => [number, clockBackMs])).toEqual([
      [1, undefined],
      [2, 20 * minute],
    ]);
  });

  test("a shift that by this clock has not begun cannot be signed or written to", () => {
    expect(why(new Book().ask("A. Moss", shift.from - minute, outgoing()))).toMatch(
      /has not begun. Was the clock set back\?/,
    );
    expect(why(new Book().ask("A. Moss", shift.from - minute, note))).toMatch(/has not begun/);
  });
});
