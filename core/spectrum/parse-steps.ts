import { type Step, StepError } from "./step.ts";

const forms = [
  "absorbance",
  "savitzky-golay WINDOW ORDER DERIVATIVE",
  "snv",
  "msc",
  "detrend [ORDER]",
  "offset [FROM-TO]",
  "normalise area|length",
  "select FROM-TO [FROM-TO …]",
  "center",
  "scale",
];

/**
 * Reads steps as a person writes them: "snv; savitzky-golay 15 2 1; center". `detrend` alone takes a line (order 1); `offset` alone takes
 * each spectrum's smallest value.
 *
 * @throws StepError naming the step that cannot be read, with every form that can.
 */
export function parseSteps(text: string): Step[] {
  const written = text.split(";").map((part) => part.trim());
  if (written.at(-1) === "") written.pop();
  return written.map(parseStep);
}

/** The same form that {@link parseSteps} reads. */
export function writeSteps(steps: readonly Step[]): string {
  return steps.map(writeStep).join("; ");
}

function parseStep(text: string): Step {
  const [name = "", ...words] = text.split(/\s+/);
  const counts: Record<string, [number, number]> = {
    absorbance: [0, 0],
    "savitzky-golay": [3, 3],
    snv: [0, 0],
    msc: [0, 0],
    detrend: [0, 1],
    offset: [0, 1],
    normalise: [1, 1],
    select: [1, 100],
    center: [0, 0],
    scale: [0, 0],
  };
  const [least, most] = Object.hasOwn(counts, name) ? counts[name] : [1, 0];
  if (words.length < least || words.length > most) throw unreadable(text);
  switch (name) {
    case "savitzky-golay": {
      const [window, order, derivative] = words.map((word) => whole(word, text));
      if (window < 3 || window > 999 || order > 9 || derivative > 4) throw unreadable(text);
      return { step: name, window, order, derivative };
    }
    case "detrend": {
      const order = words.length === 0 ? 1 : whole(words[0], text);
      if (order > 5) throw unreadable(text);
      return { step: name, order };
    }
    case "offset":
      return words.length === 0 ? { step: name } : { step: name, range: rangeOf(words[0], text) };
    case "normalise":
      if (words[0] !== "area" && words[0] !== "length") throw unreadable(text);
      return { step: name, by: words[0] };
    case "select":
      return { step: name, ranges: words.map((word) => rangeOf(word, text)) };
    default:
      return { step: name as "absorbance" | "snv" | "msc" | "center" | "scale" };
  }
}

function writeStep(step: Step): string {
  switch (step.step) {
    case "savitzky-golay":
      return `savitzky-golay ${step.window} ${step.order} ${step.derivative}`;
    case "detrend":
      return `detrend ${step.order}`;
    case "offset":
      return step.range ? `offset ${step.range[0]}-${step.range[1]}` : "offset";
    case "normalise":
      return `normalise ${step.by}`;
    case "select":
      return `select ${step.ranges.map(([from, to]) => `${from}-${to}`).join(" ")}`;
    default:
      return step.step;
  }
}

function whole(word: string, text: string): number {
  if (!/^\d{1,3}$/.test(word)) throw unreadable(text);
  return Number(word);
}

function rangeOf(word: string, text: string): [number, number] {
  const found = /^(\d+(?:\.\d+)?)[-–](\d+(?:\.\d+)?)$/.exec(word);
  if (!found) throw unreadable(text);
  return [Number(found[1]), Number(found[2])];
}

function unreadable(text: string): StepError {
  return new StepError("step", {
    got: text === "" ? "empty" : `"${text}"`,
    expected: `one of: ${forms.join(" · ")}`,
    todo: "Separate steps by semicolons, the numbers of a step by spaces.",
  });
}
