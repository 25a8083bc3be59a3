import { Command } from "commander";
import { endOf, spawnSimulator } from "./simulator-process.ts";

/** `simulate`: the invented plant, publishing to a broker. Its options are the simulator's own. */
export function simulateCommand(): Command {
  return new Command("simulate")
    .description("publish the readings of the invented plant (all options: simulate --help)")
    .helpOption(false)
    .allowUnknownOption()
    .allowExcessArguments()
    .argument("[options...]")
    .action(async (options: string[]) => {
      const child = spawnSimulator(["run", ...options], "inherit");
      // Ctrl-C reaches the child by the terminal; a plain signal to us alone is handed on.
      for (const signal of ["SIGINT", "SIGTERM"] as const) process.on(signal, () => child.kill(signal));
      const code = await new Promise<number>((resolve) => child.once("exit", (exit) => resolve(exit ?? 0)));
      if (code === 2) process.exitCode = 2;
      else if (code !== 0) await endOf(child, "the simulator");
    });
}
