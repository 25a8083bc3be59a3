import type { AxisSpec } from "../../core/messages/index.ts";

const startNm = 1000;
const stepNm = 4;
/** Every analyzer of the plant sees 1000–2200 nm, every 4 nm. */
export const channelCount = 301;
export const analyzerAxis = { unit: "nm", start: startNm, step: stepNm, count: channelCount } satisfies AxisSpec;

/** Wavelengths of the channels, nm. */
export const wavelengths: Float64Array = Float64Array.from({ length: channelCount }, (_, j) => startNm + stepNm * j);

/** Place of each channel along the axis, −1 at 1000 nm to 1 at 2200 nm: what baselines are drawn over. */
export const along: Float64Array = wavelengths.map((nm) => (nm - 1600) / 600);
