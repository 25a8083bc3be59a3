import { createReadStream } from "node:fs";
import { createInterface } from "node:readline";
import { Command, Option } from "commander";
import { verdictOf } from "../../core/judging/index.ts";
import { LimitError, nearestLimit, qLimit, type StatisticChoice, t2Limit } from "../../core/limits/index.ts";
import type { Verdict } from "../../core/messages/index.ts";
import type { Model } from "../../core/model/index.ts";
import { type CompiledModel, compileModel, newScore, type Score, scoreInto } from "../../core/pls/index.ts";
import {
  type Axis,
  describeAxis,
  parseHeader,
  parseRow,
  resampler,
  sameAxis,
  type TableHeader,
} from "../../core/spectrum/index.ts";
import { csvLine } from "../export/csv-line.ts";
import { FileError, readModel } from "./files.ts";
import { choiceOf, confidenceOption, type LimitOptions, qMethods, residualKinds, t2Methods } from "./option-values.ts";

interface Options extends LimitOptions {
  model: string;
  data: string;
  format: "csv" | "json" | "ndjson";
  axisUnit?: Axis["unit"];
}

/** What is known of one sample; null is what cannot be known. */
interface Scored {
  sample: string;
  properties: Record<string, { value: number | null; uncertainty: number | null }>;
  t2: number | null;
  q: number | null;
  leverage: number | null;
  nearest: number | null;
  limits: Limits;
  verdict: Verdict[];
}

/** null: the model does not hold what the limit is made of */
interface Limits {
  t2: number | null;
  q: number | null;
  nearest: number | null;
}

export function scoreCommand(): Command {
  return new Command("score")
    .description("predict a table of spectra: values with uncertainty, T², Q, leverage, nearest sample, verdicts")
    .requiredOption("--model <file>", "model file")
    .requiredOption("--data <file>", "table of spectra (CSV); read row by row, so it may be long")
    .addOption(new Option("--format <format>", "of the output").choices(["csv", "json", "ndjson"]).default("csv"))
    .addOption(
      new Option("--axis-unit <unit>", "unit of the table's channels (default: the model's)").choices(["nm", "cm-1"]),
    )
    .option("--confidence <share>", "of the limits", confidenceOption, 0.99)
    .addOption(
      new Option("--t2-limit <method>", "f is for new readings, beta for the calibration samples")
        .choices(t2Methods)
        .default("f"),
    )
    .addOption(
      new Option("--q-limit <method>", "how the limit of Q is worked out").choices(qMethods).default("box-moments"),
    )
    .addOption(
      new Option(
        "--q-residuals <kind>",
        "residuals it is worked out from; those of the fit are too small for new readings",
      )
        .choices(residualKinds)
        .default("cross-validated"),
    )
    .addHelpText(
      "after",
      "\nUncertainty: half width of the 95 % interval t·SEC·√(1 + leverage), the form of ASTM E1655; none is given for a reading that is not inside.\nVerdicts: inside, extrapolated (T² beyond its limit), unfamiliar (Q beyond its limit), sparse (no calibration sample near), unusable.",
    )
    .action(runScore);
}

async function runScore(options: Options): Promise<void> {
  const model = await readModel(options.model);
  const compiled = compileModel(model);
  const limits = limitsOf(model, choiceOf(options));
  const score = newScore(compiled);
  const onAxis = new Float64Array(compiled.channels);
  const print = printers[options.format](compiled);
  let header: TableHeader | undefined;
  let bring: ((values: Float64Array, out: Float64Array) => void) | undefined;
  let line = 0;
  for await (const text of linesOf(options.data)) {
    line++;
    if (header === undefined) {
      header = parseHeader(text.replace(/^\uFEFF/, ""), options.data, options.axisUnit ?? compiled.axis.unit);
      bring = wayTo(compiled.axis, header.axis);
      await write(print.start());
      continue;
    }
    const { sample, values } = parseRow(text, line, header);
    bring?.(values, onAxis);
    scoreInto(bring ? onAxis : values, compiled, score);
    await write(print.row(scored(sample, score, compiled, limits)));
  }
  if (header === undefined) parseHeader("", options.data, compiled.axis.unit); // an empty file: says what a table looks like
  await write(print.end());
}

async function* linesOf(file: string): AsyncGenerator<string> {
  const stream = createReadStream(file, { encoding: "utf8", highWaterMark: 1 << 20 });
  try {
    yield* createInterface({ input: stream, crlfDelay: Number.POSITIVE_INFINITY });
  } catch (cause) {
    if ((cause as NodeJS.ErrnoException).syscall === undefined) throw cause;
    throw new FileError(file, "read", cause);
  } finally {
    stream.destroy();
  }
}

function wayTo(model: Axis, table: Axis): ((values: Float64Array, out: Float64Array) => void) | undefined {
  if (sameAxis(model, table)) return undefined;
  const bring = resampler(table, model);
  process.stderr.write(
    `The table's axis (${describeAxis(table)}) is brought to the model's (${describeAxis(model)}) by interpolation.\n`,
  );
  return bring;
}

/** Waits while the reader of our output is slow: a long table must not pile up in memory. */
async function write(text: string): Promise<void> {
  if (text !== "" && !process.stdout.write(text)) await new Promise((resolve) => process.stdout.once("drain", resolve));
}

/** Each limit by itself: what cannot be worked out is said once, on stderr, and judged by nobody. */
function limitsOf(model: Model, choice: StatisticChoice): Limits {
  const orNull = (work: () => number): number | null => {
    try {
      return work();
    } catch (error) {
      if (!(error instanceof LimitError)) throw error;
      process.stderr.write(`${error.message}\n`);
      return null;
    }
  };
  return {
    t2: orNull(() => t2Limit(model, choice.t2)),
    q: orNull(() => qLimit(model, choice.q)),
    nearest: orNull(() => nearestLimit(model, choice.nearest)),
  };
}

function scored(sample: string, score: Score, { properties, judges }: CompiledModel, limits: Limits): Scored {
  const usable = score.values.every(Number.isFinite) && (!judges.q || Number.isFinite(score.q));
  const verdict = usable ? verdictsOf(score, limits) : (["unusable"] as Verdict[]);
  const known = (value: number) => (usable && Number.isFinite(value) ? value : null);
  const defensible = verdict[0] === "inside";
  return {
    sample,
    properties: Object.fromEntries(
      properties.map(({ name }, k) => [
        name,
        { value: known(score.values[k]), uncertainty: defensible ? known(score.uncertainties[k]) : null },
      ]),
    ),
    t2: known(score.t2),
    q: known(score.q),
    leverage: known(score.leverage),
    nearest: known(score.nearest),
    limits,
    verdict,
  };
}

/** None at all, not "inside", where a statistic that it rests on cannot be judged. */
function verdictsOf(score: Score, limits: Limits): Verdict[] {
  const ratio = (value: number, limit: number | null) => (limit === null ? Number.NaN : value / limit);
  const held = verdictOf({
    t2: ratio(score.t2, limits.t2),
    q: ratio(score.q, limits.q),
    nearest: ratio(score.nearest, limits.nearest),
  });
  const judged = limits.t2 !== null && limits.q !== null && limits.nearest !== null;
  return judged ? held : held.filter((word) => word !== "inside");
}

interface Printer {
  start(): string;
  row(scored: Scored): string;
  end(): string;
}

const printers: Record<Options["format"], (compiled: CompiledModel) => Printer> = {
  ndjson: () => ({ start: () => "", row: (one) => `${JSON.stringify(one)}\n`, end: () => "" }),
  json() {
    let rows = 0;
    return {
      start: () => "[",
      row: (one) => `${rows++ > 0 ? "," : ""}\n${JSON.stringify(one)}`,
      end: () => "\n]\n",
    };
  },
  csv: ({ properties }) => ({
    start: () =>
      csvLine([
        "sample",
        ...properties.flatMap(({ name }) => [name, `${name} uncertainty`]),
        ...["t2", "q", "leverage", "nearest", "t2 limit", "q limit", "nearest limit", "verdict"],
      ]),
    row: ({ sample, properties: values, t2, q, leverage, nearest, limits, verdict }) =>
      csvLine([
        sample,
        ...Object.values(values).flatMap(({ value, uncertainty }) => [value, uncertainty]),
        ...[t2, q, leverage, nearest, limits.t2, limits.q, limits.nearest],
        verdict.join(" "),
      ]),
    end: () => "",
  }),
};
