export const chartFont = '12px "Atkinson Hyperlegible", system-ui, sans-serif';

/** The font for a canvas whose pixels are `ratio` to a CSS pixel. */
export function scaledFont(ratio: number): string {
  return `${12 * ratio}px "Atkinson Hyperlegible", system-ui, sans-serif`;
}

let patterns = new Map<string, CanvasPattern>();

/** Slanted lines for "no reading": a texture, so that it does not hang on colour. */
export function hatch(ctx: CanvasRenderingContext2D, colour: string, ratio: number): CanvasPattern {
  const key = `${colour} ${ratio}`;
  const made = patterns.get(key);
  if (made) return made;
  const size = Math.round(8 * ratio);
  const tile = new OffscreenCanvas(size, size);
  const pen = tile.getContext("2d") as OffscreenCanvasRenderingContext2D;
  pen.strokeStyle = colour;
  pen.lineWidth = ratio;
  pen.beginPath();
  for (const shift of [-size, 0, size]) {
    pen.moveTo(shift, size);
    pen.lineTo(shift + size, 0);
  }
  pen.stroke();
  const pattern = ctx.createPattern(tile, "repeat") as CanvasPattern;
  if (patterns.size > 20) patterns = new Map();
  patterns.set(key, pattern);
  return pattern;
}
