import type { ReadStream } from "node:fs";
import { createReadStream } from "node:fs";
import { extname } from "node:path";
import { Readable } from "node:stream";
import { Command, Option } from "commander";
import { LoadError } from "../load/readings.ts";

const types: Record<string, string> = {
  ".csv": "text/csv",
  ".ndjson": "application/x-ndjson",
  ".cbor": "application/cbor-seq",
};

/** `load`: brings recorded readings to the running service, through the same scoring and judging as live ones. */
export function loadCommand(): Command {
  return new Command("load")
    .description("bring recorded readings of one stream to the running service, to be scored and judged like live ones")
    .requiredOption("--stream <id>", "the stream they belong to")
    .requiredOption(
      "--data <file>",
      "readings in order of time: *.csv (a table with a time column), *.ndjson (one a line) or *.cbor (a CBOR sequence, RFC 8742)",
    )
    .addOption(new Option("--axis-unit <unit>", "unit of a table's channels").choices(["nm", "cm-1"]).default("nm"))
    .option("--url <url>", "the running service", "http://127.0.0.1:8480")
    .option("--json", "print the outcome as JSON")
    .action(run);
}

async function run(options: {
  stream: string;
  data: string;
  axisUnit: string;
  url: string;
  json?: boolean;
}): Promise<void> {
  const type = types[extname(options.data)];
  if (!type)
    throw new LoadError(`--data ${options.data}: expected a name that ends in ${Object.keys(types).join(", ")}.`);
  const body = await opened(options.data);
  const answer = await send(
    `${options.url}/api/v1/streams/${encodeURIComponent(options.stream)}/load?axisUnit=${options.axisUnit}`,
    type,
    body,
  );
  const outcome = (await answer.json()) as { says?: string; recorded: number; repeated: number; refused: number };
  if (!answer.ok) throw new LoadError(`${options.data}: ${outcome.says ?? `the service answered ${answer.status}`}`);
  const { recorded, repeated, refused } = outcome;
  if (options.json) console.log(JSON.stringify({ recorded, repeated, refused }));
  else console.log(`${options.stream}: ${recorded} readings recorded, ${repeated} already there, ${refused} refused.`);
}

function opened(file: string): Promise<ReadStream> {
  return new Promise((resolve, reject) => {
    const stream = createReadStream(file);
    stream.once("open", () => resolve(stream));
    stream.once("error", (cause: NodeJS.ErrnoException) =>
      reject(new LoadError(`${file} is not readable (${cause.code}). Name an existing file with --data.`, { cause })),
    );
  });
}

async function send(url: string, type: string, body: ReadStream): Promise<Response> {
  try {
    const stream = Readable.toWeb(body) as ReadableStream;
    return await fetch(url, {
      method: "POST",
      headers: { "content-type": type },
      body: stream,
      duplex: "half",
    } as RequestInit);
  } catch (cause) {
    throw new LoadError(
      `${url} does not answer. Start the service first ('millrace serve' or 'millrace demo'), or name it with --url.`,
      { cause },
    );
  }
}
