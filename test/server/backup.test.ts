import { execFile } from "node:child_process";
import { cpSync, mkdtempSync, readdirSync, readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { promisify } from "node:util";
import { expect, test } from "vitest";
import { backupCommand } from "../../server/commands/backup.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { eventually, startChain } from "../chain.ts";
import { program } from "../program.ts";
import { serve } from "../serve.ts";
import { runCommand } from "./run-command.ts";
import { changes, makers, modelId, names, reading } from "./store-record.ts";

const plant = makePlant(1);

test("a backup made while readings come in holds everything from before it, and a service restored from it goes on", async () => {
  const chain = await startChain();
  let time = Date.now() - 600_000;
  let stop = false;
  const times: number[] = [];
  const publishing = (async () => {
    while (!stop) {
      time += 100;
      const values = Array.from(spectrumAt(plant, "bq-201", time));
      await chain.publish("bq-201", { time, sequence: time, values });
      times.push(time);
    }
  })();
  await eventually("some readings", () => times.length > 100);
  const judged = async (url: string, at: number) =>
    (await (await fetch(`${url}/api/v1/streams/bq-201/reading?at=${at}`)).json()) as { judged: { time: number } };
  const before = await eventually("one on record", async () => {
    const last = (await judged(chain.url, time + 1e6)).judged;
    return last?.time > times[50] ? last : undefined;
  });
  const config = join(chain.folder, "plant.json");
  const copies = mkdtempSync(join(tmpdir(), "millrace-copy-"));
  const copy = join(copies, "copy.db");
  const words = ["--config", config, "--to", copy, "--json"];
  const printed = await promisify(execFile)(process.execPath, [program, "backup", ...words]);
  expect(JSON.parse(printed.stdout)).toMatchObject({ file: copy });
  expect(readdirSync(copies)).toEqual(["copy.db"]);
  const again = await runCommand(backupCommand(), words);
  expect(String(again.error)).toMatch(/copy\.db is there already, expected a new file/);
  stop = true;
  await publishing;
  await chain.stop();

  // What was on record when it began is there to the last digit; then the service goes on from it.
  for (const file of readdirSync(chain.folder)) {
    if (file.startsWith("record.db")) renameSync(join(chain.folder, file), join(copies, `aside-${file}`));
  }
  cpSync(copy, join(chain.folder, "record.db"));
  const settings = JSON.parse(readFileSync(config, "utf8"));
  settings.http.port = 0;
  settings.mqtt.broker.embedded.port = 0;
  const restored = join(chain.folder, "restored.json");
  writeFileSync(restored, JSON.stringify(settings));
  const service = await serve(restored);
  expect((await judged(service.url, before.time)).judged).toEqual(before);
  expect(await service.stop()).toBe(0);
  chain.remove();
  rmSync(copies, { recursive: true });
});

test("a damaged record is noticed at the start, with what to do; nothing of it is changed", () => {
  const at = makers[0].place();
  const writer = at.writer();
  writer.addModel({ id: modelId, name: "first", properties: names, text: "{}" });
  for (let i = 0; i < 20; i++) {
    const readings = Array.from({ length: 50 }, (_, j) => reading(1e12 + 1000 * (50 * i + j)));
    writer.commit(changes({ readings }));
  }
  writer.close();
  const sound = readFileSync(at.file);
  const attempt = (damage: (bytes: Buffer) => Buffer) => {
    const bytes = damage(Buffer.from(sound));
    writeFileSync(at.file, bytes);
    let says = "started";
    try {
      sqliteWriter(at.file).close();
    } catch (error) {
      says = (error as Error).message;
    }
    return says;
  };
  const told =
    /record\.db is not readable as a database \(.+\), expected the record of a plant\. Move it aside .*put the last backup/;
  expect(attempt((bytes) => bytes)).toBe("started");
  expect(attempt((bytes) => bytes.fill(0, 0, 100))).toMatch(told);
  expect(attempt((bytes) => bytes.subarray(0, bytes.length / 2))).toMatch(told);
  // A page in the middle, overwritten: the header is sound, and only a look through the whole file tells.
  expect(attempt((bytes) => bytes.fill(0x5a, 20 * 4096, 21 * 4096))).toMatch(told);
  at.remove();
});
