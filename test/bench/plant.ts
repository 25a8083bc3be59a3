import { type ChildProcess, spawn } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { createServer } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { calibrate, contiguous } from "../../core/pls/index.ts";
import { parseSteps } from "../../core/spectrum/index.ts";
import { inventedSpectra } from "./invented-spectra.ts";

const samples = 60;

/** A model on 1 000 channels with 8 components and all usual steps: SNV, Savitzky–Golay, centring. */
export function benchModel() {
  const set = inventedSpectra(samples, 1000);
  const { model } = calibrate(set, {
    name: "bench",
    created: "2026-01-01T00:00:00Z",
    steps: parseSteps("snv; savitzky-golay 15 2 1; center"),
    components: 8,
    mostComponents: 8,
    segments: contiguous(samples, 5),
    validation: "folds:5:contiguous",
  });
  return model;
}

export interface BenchPlant {
  url: string;
  brokerUrl: string;
  ids: string[];
  /** a figure of /metrics, summed over its labels */
  figure: (name: string) => Promise<number>;
  stop: () => Promise<void>;
}

/** The whole service in a process of its own, with so many streams of one model. */
export async function startBenchPlant(streams: number): Promise<BenchPlant> {
  const folder = mkdtempSync(join(tmpdir(), "millrace-bench-"));
  writeFileSync(join(folder, "bench.model.json"), JSON.stringify(benchModel()));
  const ids = Array.from({ length: streams }, (_, i) => `s-${i}`);
  const port = await freePort();
  const settings = {
    site: "bench",
    name: "Bench",
    timeZone: "UTC",
    data: ".",
    http: { host: "127.0.0.1", port: 0 },
    mqtt: { prefix: "millrace", broker: { embedded: { host: "127.0.0.1", port } } },
    streams: ids.map((id) => ({ id, name: id, model: "bench.model.json", periodMs: 86_400_000 })),
  };
  const file = join(folder, "plant.json");
  writeFileSync(file, JSON.stringify(settings));
  const program = fileURLToPath(new URL("../../server/main.js", import.meta.url));
  const child = spawn(process.execPath, [program, "serve", "--config", file], { stdio: ["ignore", "pipe", "pipe"] });
  const url = await addressOf(child);
  return {
    url,
    brokerUrl: `mqtt://127.0.0.1:${port}`,
    ids,
    async figure(name) {
      const text = await (await fetch(`${url}/metrics`)).text();
      const lines = text.split("\n").filter((line) => line.startsWith(`${name} `) || line.startsWith(`${name}{`));
      return lines.reduce((sum, line) => sum + Number(line.slice(line.lastIndexOf(" "))), 0);
    },
    async stop() {
      const exited = new Promise((resolve) => child.once("exit", resolve));
      child.kill("SIGTERM");
      await exited;
      rmSync(folder, { recursive: true });
    },
  };
}

function addressOf(child: ChildProcess): Promise<string> {
  let printed = "";
  return new Promise((resolve, reject) => {
    const hear = (chunk: Buffer) => {
      printed += String(chunk);
      const found = /(http:\/\/127\.0\.0\.1:\d+)/.exec(printed);
      if (found) resolve(found[1]);
    };
    child.stdout!.on("data", hear);
    child.stderr!.on("data", hear);
    child.once("exit", (code) => reject(new Error(`the service ended with ${code}:\n${printed}`)));
  });
}

function freePort(): Promise<number> {
  return new Promise((resolve) => {
    const server = createServer().listen(0, "127.0.0.1", () => {
      const { port } = server.address() as { port: number };
      server.close(() => resolve(port));
    });
  });
}
