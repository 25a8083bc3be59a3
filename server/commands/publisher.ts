import { mkdirSync } from "node:fs";
import { join } from "node:path";
import { Command, InvalidArgumentError } from "commander";
import { type PlantConfig, readPlantConfig } from "../config/plant-config.ts";
import { everyStream, PublisherError, PublisherStore } from "../people/publisher-store.ts";
import { askPassword } from "./ask-password.ts";

interface Options {
  config: string;
  streams: string[];
  json?: boolean;
}

/** `publisher`: which programs may sign in at the embedded broker, and which streams each may publish. The service may run meanwhile. */
export function publisherCommand(): Command {
  const publisher = new Command("publisher").description(
    "programs that may sign in at the embedded broker, and the streams that each may publish",
  );
  const sub = (name: string, description: string) =>
    publisher.command(name).description(description).requiredOption("--config <file>", "the plant's configuration");

  sub("list", "every program, and its streams")
    .option("--json", "print as JSON")
    .action((options: Options) =>
      withStore(options, (store) => {
        const list = store.list();
        if (options.json) console.log(JSON.stringify(list));
        else if (list.length === 0) console.log("none yet: the broker asks for no credentials, on this machine only");
        else for (const { name, streams } of list) console.log(`${name}: ${streams.join(", ") || "listens only"}`);
      }),
    );
  sub("add <name>", "add a program; its secret is asked for, or read from standard input")
    .option(
      "--streams <ids>",
      `streams whose readings and states it may publish, with commas between; ${everyStream} for all; without it the program only listens`,
      streamIds,
      [],
    )
    .action((name: string, options: Options) =>
      withStore(options, async (store, { streams }) => {
        const known = streams.map(({ id }) => id);
        const unknown = options.streams.find((id) => id !== everyStream && !known.includes(id));
        if (unknown !== undefined) {
          throw new PublisherError(
            `--streams names ${unknown}, expected streams of this plant: ${known.join(", ")}, or ${everyStream}.`,
          );
        }
        await store.add({ name, streams: options.streams }, await askPassword("secret"));
      }),
    );
  sub("remove <name>", "a program may sign in no more; its open connections are closed").action(
    (name: string, options: Options) => withStore(options, (store) => store.remove(name)),
  );
  return publisher;
}

async function withStore(
  { config: file }: Options,
  act: (store: PublisherStore, config: PlantConfig) => void | Promise<void>,
): Promise<void> {
  const config = readPlantConfig(file);
  mkdirSync(config.data, { recursive: true });
  const store = new PublisherStore(join(config.data, "people.db"));
  try {
    await act(store, config);
  } finally {
    store.close();
  }
}

function streamIds(text: string): string[] {
  const ids = text.split(",").map((id) => id.trim());
  if (ids.some((id) => id === "")) throw new InvalidArgumentError("expected stream ids with commas between");
  return ids;
}
