import { chartFont } from "./canvas-text.ts";
import { coloursAt } from "./colours.ts";

export interface SheetPart {
  caption: string;
  /** as it is on the screen, in device pixels */
  canvas: HTMLCanvasElement;
}

export interface Sheet {
  title: string;
  /** whose, when, by which clock, what it says: a picture that leaves the screen must carry its own circumstances */
  lines: readonly string[];
  parts: readonly SheetPart[];
}

const margin = 20;
const lineHeight = 20;
const partGap = 6;
const face = '"Atkinson Hyperlegible", system-ui, sans-serif';

/**
 * Charts under one another with title and circumstances over them, as a PNG in the theme that is on the screen.
 *
 * @throws Error when the browser cannot make the picture (too large, or no memory)
 */
export async function pictureSheet(sheet: Sheet, element: Element): Promise<Blob> {
  const ratio = devicePixelRatio || 1;
  const widest = Math.max(480, ...sheet.parts.map(({ canvas }) => canvas.width / ratio));
  const measure = new OffscreenCanvas(1, 1).getContext("2d") as OffscreenCanvasRenderingContext2D;
  measure.font = `15px ${face}`;
  const lines = sheet.lines.flatMap((line) => wrapped(line, widest, (text) => measure.measureText(text).width));
  const heights = sheet.parts.map(({ canvas }) => lineHeight + canvas.height / ratio + partGap);
  const height = 2 * margin + 28 + lines.length * lineHeight + heights.reduce((sum, each) => sum + each, 8);
  const out = new OffscreenCanvas(Math.ceil((widest + 2 * margin) * ratio), Math.ceil(height * ratio));
  const ctx = out.getContext("2d") as OffscreenCanvasRenderingContext2D;
  const colours = coloursAt(element);
  ctx.scale(ratio, ratio);
  ctx.fillStyle = colours.lane;
  ctx.fillRect(0, 0, widest + 2 * margin, height);
  ctx.textBaseline = "top";
  const write = (text: string, y: number, font: string, colour: string) => {
    ctx.font = font;
    ctx.fillStyle = colour;
    ctx.fillText(text, margin, y);
  };
  write(sheet.title, margin, `700 18px ${face}`, colours.ink);
  for (const [i, line] of lines.entries()) write(line, margin + 28 + i * lineHeight, `15px ${face}`, colours.ink);
  let y = margin + 28 + lines.length * lineHeight + 8;
  sheet.parts.forEach(({ caption, canvas }, i) => {
    write(caption, y + 4, chartFont, colours.quiet);
    ctx.drawImage(canvas, margin, y + lineHeight, canvas.width / ratio, canvas.height / ratio);
    y += heights[i];
  });
  return out.convertToBlob({ type: "image/png" });
}

/** Words of a line laid into as many lines as the width asks for. */
export function wrapped(text: string, width: number, widthOf: (text: string) => number): string[] {
  const lines: string[] = [];
  let line = "";
  for (const word of text.split(" ")) {
    const longer = line === "" ? word : `${line} ${word}`;
    if (line !== "" && widthOf(longer) > width) {
      lines.push(line);
      line = word;
    } else line = longer;
  }
  return [...lines, line];
}
