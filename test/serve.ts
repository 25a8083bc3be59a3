import { spawn } from "node:child_process";
import { eventually } from "./chain.ts";
import { program } from "./program.ts";

export interface Served {
  url: string;
  printed: () => string;
  /** SIGTERM; resolves with the exit code */
  stop: () => Promise<number | null>;
}

/** `serve --config` as a process of its own. */
export async function serve(config: string, environment: Record<string, string> = {}): Promise<Served> {
  const child = spawn(process.execPath, [program, "serve", "--config", config], {
    stdio: ["ignore", "pipe", "pipe"],
    env: { ...process.env, ...environment },
  });
  let printed = "";
  for (const stream of [child.stdout, child.stderr]) stream.on("data", (chunk) => (printed += String(chunk)));
  let code: number | null | undefined;
  const exited = new Promise<number | null>((resolve) =>
    child.once("exit", (ended) => {
      code = ended;
      resolve(ended);
    }),
  );
  const address = () => {
    if (code !== undefined) throw new Error(`the service ended with ${code}:\n${printed}`);
    return /: (http:\/\/127\.0\.0\.1:\d+)/.exec(printed)?.[1];
  };
  // A large record is looked through at the start, and the machine may have other work.
  const url = await eventually("the service's address", address, 60_000);
  return {
    url,
    printed: () => printed,
    async stop() {
      child.kill("SIGTERM");
      return exited;
    },
  };
}
