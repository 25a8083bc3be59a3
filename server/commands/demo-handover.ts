import { drawn } from "../../core/handover/index.ts";
import type { Shift, Write } from "../../core/messages/index.ts";
import type { PlantConfig } from "../config/plant-config.ts";
import type { HandoverCommand } from "../engine/handover-command.ts";
import { ReadingExplainer } from "../gateway/reading-view.ts";
import { ShiftBook } from "../handover/shift-book.ts";
import { inventedPeople } from "../people/invented.ts";
import type { Service } from "../service.ts";

const [quill, marsh] = inventedPeople;
const hour = 3_600_000;

/** What the invented people have written, so that a first look finds a handover under way; by the same queue as everything that people write. */
export async function writeDemoHandover({ store, engine }: Service, config: PlantConfig): Promise<void> {
  const book = new ShiftBook(config, store, new ReadingExplainer(store));
  const now = Date.now();
  const last = book.calendar.before(book.calendar.at(now));
  const older = book.calendar.before(last);
  const ask = async (wish: HandoverCommand["ask"]) => void (await engine.command({ kind: "handover", ask: wish }));
  const write = (shift: Shift, by: string, wish: Write) => ask({ ...wish, shift, by });
  const sign = { kind: "sign" as const, role: quill.role, shift: older };

  await write(older, quill.name, {
    kind: "note",
    about: { kind: "stream", stream: "bq-305" },
    says: "Took the second feed tank into the blend at half past nine; the line was swept for ten minutes.",
  });
  const record = book.draw(older, now);
  await ask({ ...sign, side: "outgoing", by: quill.name, seen: null, record: drawn(record), to: record.to });
  await ask({ ...sign, side: "incoming", by: marsh.name, seen: book.bound(older, now).hash });
  await write(last, marsh.name, {
    kind: "action",
    says: "Look at the seal of the probe window on the dryer outlet; a little damp was seen there.",
    owner: "the next day shift",
    due: now + 8 * hour,
  });
  await write(last, marsh.name, {
    kind: "note",
    about: { kind: "shift" },
    says: "Quiet yard. The delivery of solvent drums is expected in the morning.",
  });
  await write(last, marsh.name, { kind: "check", check: "probe-windows", outcome: "done" });
}
