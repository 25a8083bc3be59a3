type Part = Markup | string | number | null | undefined | readonly Part[];

/** Text of a page that is markup already: made by `markup` alone, so that whatever people or analyzers sent is never taken for it. */
export class Markup {
  readonly text: string;
  constructor(text: string) {
    this.text = text;
  }
}

/** A template of HTML or SVG: every value is escaped, lists are joined, nothing stands for what is null; only markup goes in as it is. */
export function markup(template: TemplateStringsArray, ...parts: readonly Part[]): Markup {
  return new Markup(template.reduce((text, piece, i) => text + textOf(parts[i - 1]) + piece));
}

const escapes: Record<string, string> = { "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;", "'": "&#39;" };

function textOf(part: Part): string {
  if (part === null || part === undefined) return "";
  if (part instanceof Markup) return part.text;
  if (typeof part === "object") return part.map(textOf).join("");
  return String(part).replace(/[&<>"']/g, (each) => escapes[each]);
}

export const nothing = new Markup("");
