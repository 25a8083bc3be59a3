import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, expect, test } from "vitest";
import type { Excursion, RecordedEvent } from "../../core/messages/index.ts";
import { sqliteReader } from "../../server/store/sqlite/reader.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { Changes } from "../../server/store/store.ts";

const folder = mkdtempSync(join(tmpdir(), "millrace-alarms-"));
const file = join(folder, "record.db");
const writer = sqliteWriter(file);
const reader = sqliteReader(file);
afterAll(() => {
  reader.close();
  writer.close();
  rmSync(folder, { recursive: true });
});
const nothing: Changes = { readings: [], refusals: [], events: [], excursions: [], states: new Map() };
const keep = (excursion: Excursion) => writer.commit({ ...nothing, excursions: [excursion] });
const kept = () => reader.excursions({ limit: 10 })[0];

test("a label and notes that people put to an excursion outlive later forms of it; new ones take their place", () => {
  const bare: Excursion = {
    ...{ id: "bq-1/unfamiliar/1", stream: "bq-1", kind: "unfamiliar", start: 1, unit: "× limit", says: "here" },
    ...{ peak: 2.5, peakTime: 1, mean: 1.0000000000000002, readings: 2 },
  };
  keep(bare);
  expect(kept()).toEqual(bare);
  const label = { is: "cleaning" as const, by: "R. Quill", at: 5 };
  const notes = [{ says: 'hose "on"', by: "R. Quill", at: 5 }];
  keep({ ...bare, label, notes });
  keep({ ...bare, readings: 3, end: 9, ended: "returned" });
  expect(kept()).toEqual({ ...bare, readings: 3, end: 9, ended: "returned", label, notes });
  expect(writer.excursion(bare.id)).toEqual(kept());
  const more = [...notes, { says: "off", by: "A. Thorne", at: 7 }];
  keep({ ...bare, label: { ...label, is: "false" }, notes: more });
  expect(kept()).toEqual({ ...bare, label: { ...label, is: "false" }, notes: more });
  expect(writer.excursion("bq-1/unfamiliar/2")).toBeUndefined();
});

test("alarm events come by their time, in the order of the record, without history unless it is asked for", () => {
  const event = (cursor: number, at: number, kind: string, history = false): RecordedEvent => ({
    ...{ cursor, at, stream: "bq-1", kind, says: "" },
    ...(history ? { history } : {}),
  });
  const events = [
    event(1, 100, "alarm raised"),
    event(2, 50, "alarm cleared"),
    event(3, 70, "excursion began"),
    event(4, 80, "alarm raised", true),
    event(5, 200, "alarm raised"),
    event(6, 90, "alarming"),
  ];
  writer.commit({ ...nothing, events });
  const cursors = (history: boolean) => reader.alarmEvents({ from: 50, to: 200, history }).map(({ cursor }) => cursor);
  expect(cursors(false)).toEqual([1, 2]);
  expect(cursors(true)).toEqual([1, 2, 4]);
});
