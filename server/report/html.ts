import { figure as plainFigure } from "../commands/figures.ts";
import { escapeText, type Plot } from "./plot.ts";

export function card(title: string, plot: Plot, reads: string, wide = false): string {
  return `<figure${wide ? ' class="wide"' : ""}><h3>${escapeText(title)}</h3>${plot}${reads && `<figcaption>${reads}</figcaption>`}</figure>`;
}

export function table(header: readonly string[], rows: readonly (readonly string[])[], lastIsWords = false): string {
  const words = (k: number) => (lastIsWords && k === header.length - 1 ? ' class="words"' : "");
  const line = (cells: readonly string[], tag: "th" | "td") =>
    `<tr>${cells.map((cell, k) => `<${tag}${words(k)}>${escapeText(cell)}</${tag}>`).join("")}</tr>`;
  return `<div class="scroll"><table><thead>${line(header, "th")}</thead><tbody>${rows.map((row) => line(row, "td")).join("")}</tbody></table></div>`;
}

/** With a true minus sign. */
export function figure(value: number | undefined, digits?: number): string {
  return plainFigure(value, digits).replaceAll("-", "−");
}
