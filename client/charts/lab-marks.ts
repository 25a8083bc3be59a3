import { scaledFont } from "./canvas-text.ts";
import type { LabPoint, Pen } from "./lane-drawing.ts";

const half = 5;
/** with more of them the word at each would hide the trend */
const mostWords = 12;

/**
 * Results of the laboratory at the time of their samples: a diamond where the pair counts, one broken where it was kept apart. The word stands
 * beside them where there is room.
 *
 * @param place y of a value, canvas px; a value outside the scale stands at its edge
 */
export function drawLabPoints(pen: Pen, points: readonly LabPoint[], place: (value: number) => number): void {
  const { ctx, colours, ratio } = pen;
  const size = half * ratio;
  ctx.font = scaledFont(ratio);
  ctx.textBaseline = "bottom";
  ctx.textAlign = "center";
  for (const { at, value, counts } of points) {
    const [x, y] = [pen.x(at), place(value)];
    ctx.beginPath();
    ctx.moveTo(x, y - size);
    ctx.lineTo(x + size, y);
    ctx.lineTo(x, y + size);
    ctx.lineTo(x - size, y);
    ctx.closePath();
    ctx.fillStyle = colours.lane;
    ctx.fill();
    ctx.strokeStyle = counts ? colours.ink : colours.quiet;
    ctx.lineWidth = 1.6 * ratio;
    ctx.setLineDash(counts ? [] : [2 * ratio, 2 * ratio]);
    ctx.stroke();
    ctx.setLineDash([]);
    if (points.length > mostWords) continue;
    const [wide, high] = [ctx.measureText("lab").width + 4 * ratio, 13 * ratio];
    const middle = Math.min(x, pen.left + pen.width - wide / 2);
    ctx.fillStyle = colours.lane;
    ctx.fillRect(middle - wide / 2, y - size - high, wide, high);
    ctx.fillStyle = colours.quiet;
    ctx.fillText("lab", middle, y - size);
  }
}
