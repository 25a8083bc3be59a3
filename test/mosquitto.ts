import { execFileSync, spawn } from "node:child_process";
import { existsSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { createServer } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { eventually } from "./chain.ts";

const places = ["/usr/sbin/mosquitto", "/usr/bin/mosquitto"];

/** The system's Mosquitto; MOSQUITTO names another. undefined when there is none. */
export function findMosquitto(): string | undefined {
  return [process.env.MOSQUITTO, ...places].find((place) => place !== undefined && existsSync(place));
}

/** Before the tests: a broker that is not ours. Installs Debian's where that is allowed, else says what to install. */
export default function setup(): void {
  if (findMosquitto()) return;
  if (process.getuid?.() === 0 && existsSync("/usr/bin/apt-get")) {
    console.log("no Mosquitto found: installing Debian's package");
    const environment = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
    const run = (...args: string[]) => execFileSync("apt-get", args, { stdio: "inherit", env: environment });
    run("update", "-q");
    run("install", "-y", "-q", "--no-install-recommends", "mosquitto");
  }
  if (!findMosquitto()) {
    throw new Error(
      "No Mosquitto was found, and the tests with a broker that is not ours need one: install Debian's package 'mosquitto' (apt-get install mosquitto), or name a Mosquitto with the environment variable MOSQUITTO.",
    );
  }
}

export interface Mosquitto {
  port: number;
  folder: string;
  /** what it has printed */
  printed: () => string;
  stop: (signal?: NodeJS.Signals) => Promise<void>;
  start: () => Promise<void>;
  remove: () => Promise<void>;
}

/** Starts a Mosquitto on a free port; `settings` are further lines of its configuration, `prepare` puts files into its folder first. */
export async function startMosquitto(
  settings: (folder: string) => string[],
  prepare: (folder: string) => void = () => {},
): Promise<Mosquitto> {
  const folder = mkdtempSync(join(tmpdir(), "millrace-mosquitto-"));
  prepare(folder);
  const port = await freePort();
  const file = join(folder, "mosquitto.conf");
  const lines = [
    `listener ${port} 127.0.0.1`,
    // Else it gives up root for a user that may not write here.
    "user root",
    "persistence true",
    `persistence_location ${folder}/`,
    "log_dest stderr",
    ...settings(folder),
  ];
  writeFileSync(file, `${lines.join("\n")}\n`);
  let printed = "";
  let child: ReturnType<typeof spawn> | undefined;
  let exited: Promise<unknown> = Promise.resolve();
  const mosquitto: Mosquitto = {
    port,
    folder,
    printed: () => printed,
    async start() {
      const from = printed.length;
      const started = spawn(findMosquitto()!, ["-c", file], { stdio: ["ignore", "ignore", "pipe"] });
      child = started;
      exited = new Promise((resolve) => started.once("exit", resolve));
      started.stderr!.on("data", (chunk) => (printed += String(chunk)));
      await eventually("Mosquitto running", () => /running|Opening ipv4 listen socket/.test(printed.slice(from)));
    },
    async stop(signal = "SIGTERM") {
      child?.kill(signal);
      await exited;
    },
    async remove() {
      await mosquitto.stop();
      rmSync(folder, { recursive: true, force: true });
    },
  };
  await mosquitto.start();
  return mosquitto;
}

export function freePort(): Promise<number> {
  return new Promise((resolve) => {
    const server = createServer().listen(0, "127.0.0.1", () => {
      const { port } = server.address() as { port: number };
      server.close(() => resolve(port));
    });
  });
}
