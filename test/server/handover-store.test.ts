import Database from "better-sqlite3";
import { afterEach, beforeEach, describe, expect, test } from "vitest";
import type { HandoverEntry, RecordedEvent } from "../../core/messages/index.ts";
import { entryWords } from "../../core/shift-page/index.ts";
import type { StoreReader, StoreWriter } from "../../server/store/store.ts";
import { changes, event, makers } from "./store-record.ts";

const shift = Date.UTC(2026, 4, 12, 4);
const hour = 3_600_000;

type Loose = Partial<HandoverEntry> & { kind: string };
function entry(number: number, more: Loose): HandoverEntry {
  return { number, shift, at: shift + number * hour, by: "A. Moss", ...more } as HandoverEntry;
}
function eventOf(written: HandoverEntry): RecordedEvent {
  const { number, at, by, kind } = written;
  return event(number, {
    at,
    by,
    stream: null,
    kind: `handover ${kind}`,
    says: entryWords(written),
    handover: written,
  });
}

describe.each(makers)("what people wrote, in the record kept by $name", (maker) => {
  let place: ReturnType<typeof maker.place>;
  let writer: StoreWriter;
  let reader: StoreReader;
  const write = (...entries: HandoverEntry[]) => writer.commit(changes({ events: entries.map(eventOf) }));
  beforeEach(() => {
    place = maker.place();
    writer = place.writer();
    reader = place.reader();
  });
  afterEach(() => {
    writer.close();
    reader.close();
    place.remove();
  });
  const note = entry(1, { kind: "note", about: { kind: "shift" }, says: "Drum 4 leaks a little." } as Loose);
  const action = entry(2, { kind: "action", says: "Empty drum 4", owner: "Birch" } as Loose);
  const closed = entry(3, { kind: "action closed", refers: 2, at: shift + 20 * hour } as Loose);

  test("entries are found by their shift, in their order, by both sides of the record", () => {
    write(note, action, entry(3, { kind: "question", says: "?", shift: shift + 12 * hour } as Loose));
    for (const { handover } of [writer, reader]) {
      expect(handover.entries(shift)).toEqual([note, action]);
      expect(handover.entry(2)).toEqual(action);
      expect(handover.lastAt()).toBe(shift + 3 * hour);
    }
  });

  test("an action is carried over until it is closed, and from then on no more", () => {
    write(note, action, closed);
    const during = (from: number) => reader.handover.actions({ shift: from, from, to: from + 12 * hour });
    expect(during(shift)).toEqual([{ action, closed }]);
    expect(during(shift + 12 * hour)).toEqual([{ action, closed }]);
    expect(during(shift + 24 * hour)).toEqual([]);
    expect(writer.handover.closing(2)).toEqual(closed);
  });

  test("a signed record is found by its hash, and with it until when it tells", () => {
    const signed = entry(1, {
      kind: "signature",
      side: "outgoing",
      hash: "h1",
      meaning: "m",
      role: "operator",
    } as Loose);
    const record = { hash: "h1", shift, to: shift + 11 * hour, json: "{}" };
    writer.commit(changes({ events: [eventOf(signed)], shiftRecords: [{ record, number: 1 }] }));
    expect(reader.handover.frozen("h1")).toEqual(record);
    expect(reader.handover.frozenTo(shift)).toBe(shift + 11 * hour);
    expect(reader.handover.frozenTo(shift + 12 * hour)).toBeUndefined();
    expect(reader.handover.signatures(shift, shift + 1)).toEqual([signed]);
  });

  test("what anybody said is found by its words, newest first: notes, and the words at alarms and excursions", () => {
    write(note, action);
    writer.commit(
      changes({
        events: [
          event(3, { by: "B. Reed", says: "Unfamiliar: acknowledged by B. Reed: Düse am drum 4 gereinigt." }),
          event(4, { says: "drum 4 by the machine" }),
        ],
      }),
    );
    const cursors = (words: string) => reader.handover.said(words, 10).events.map(({ cursor }) => cursor);
    expect(cursors("drum")).toEqual([3, 2, 1]);
    expect(cursors("DRUM lea")).toEqual([1]);
    expect(cursors("duse")).toEqual([3]);
    expect(reader.handover.said("drum", 1)).toMatchObject({ events: [{ cursor: 3 }], count: 3 });
  });

  test.each(['"', "*", "drum AND", "NEAR(", "says:drum", "a'b; DROP TABLE event", "   ", "-"])(
    "what a person types is never an operator of the index: %s",
    (words) => {
      write(note);
      expect(() => reader.handover.said(words, 10)).not.toThrow();
    },
  );

  test("entries and signed records are neither changed nor deleted, whoever holds the file", () => {
    write(note);
    const record = { hash: "h1", shift, to: shift, json: "{}" };
    writer.commit(changes({ shiftRecords: [{ record, number: 9 }], events: [event(2)] }));
    const db = new Database(place.file);
    const sql = [
      "UPDATE handover_entry SET json = '{}'",
      "DELETE FROM handover_entry",
      "UPDATE shift_record SET json = ''",
      "DELETE FROM shift_record",
    ];
    for (const each of sql) expect(() => db.exec(each)).toThrow(/never/);
    db.close();
  });
});
