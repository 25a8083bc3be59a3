import { readFile } from "node:fs/promises";
import { Command } from "commander";
import { MillraceError } from "../../core/errors.ts";
import type { LabImport } from "../../core/messages/index.ts";

export class LabImportError extends MillraceError {
  readonly code = "lab-import";
}

interface Options {
  stream: string;
  data: string;
  url: string;
  token?: string;
  json?: boolean;
}

/** `lab`: brings a table of laboratory results to the running service: every row, or none. */
export function labCommand(): Command {
  return new Command("lab")
    .description(
      "bring a table of laboratory results of one stream to the running service: every row is taken, or none",
    )
    .requiredOption("--stream <id>", "the stream whose samples they are")
    .requiredOption(
      "--data <file>",
      "a table (CSV) with the columns time (when the sample was drawn), property, value, unit and, where wanted, method, sample, by",
    )
    .option("--url <url>", "the running service", "http://127.0.0.1:8480")
    .option("--token <token>", "of an engineer, where people sign in (or MILLRACE_TOKEN in the environment)")
    .option("--json", "print the outcome as JSON")
    .action(run);
}

async function run({ stream, data, url, token = process.env.MILLRACE_TOKEN, json }: Options): Promise<void> {
  const table = await tableIn(data);
  const answer = await send(`${url}/api/v1/streams/${encodeURIComponent(stream)}/lab/table`, table, token);
  const body = (await answer.json()) as LabImport & { says?: string };
  if (!answer.ok && answer.status !== 422) {
    throw new LabImportError(`${data}: ${body.says ?? `the service answered ${answer.status}.`}`);
  }
  const { done, accepted, repeated, refused, rows } = body;
  if (json) process.stdout.write(`${JSON.stringify(body)}\n`);
  else if (done) process.stdout.write(`${stream}: ${accepted} results recorded, ${repeated} already there.\n`);
  if (done) return;
  const wrong = rows.filter(({ outcome }) => outcome === "refused").map(({ row, says }) => `  line ${row}: ${says}`);
  throw new LabImportError(
    `${data}: ${refused} of ${rows.length} rows refused, so nothing was taken. Correct them and send the table again.\n${wrong.join("\n")}`,
  );
}

async function tableIn(file: string): Promise<string> {
  try {
    return await readFile(file, "utf8");
  } catch (cause) {
    const { code } = cause as NodeJS.ErrnoException;
    throw new LabImportError(`${file} is not readable (${code}). Name an existing file with --data.`, { cause });
  }
}

async function send(url: string, body: string, token: string | undefined): Promise<Response> {
  const headers: Record<string, string> = { "content-type": "text/csv" };
  if (token !== undefined) headers["authorization"] = `Bearer ${token}`;
  try {
    return await fetch(url, { method: "POST", headers, body });
  } catch (cause) {
    throw new LabImportError(
      `${url} does not answer. Start the service first ('millrace serve' or 'millrace demo'), or name it with --url.`,
      { cause },
    );
  }
}
