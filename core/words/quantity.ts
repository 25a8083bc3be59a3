/** U+2009: it stands between a number and its unit. */
export const thin = "\u2009";

/** A number with a true minus sign. */
export function fixed(value: number, decimals: number): string {
  const text = Math.abs(value).toFixed(decimals);
  return value < 0 && Number(text) !== 0 ? `−${text}` : text;
}

/**
 * How many decimals a value may show: so many that its uncertainty has one significant digit. 0.3 → 1, 0.02 → 2, 4 → 0.
 * (0.096 rounds up to 0.1, so it is 1.) 1 where no uncertainty is known.
 */
export function decimalsFor(uncertainty: number | null | undefined): number {
  if (!uncertainty || !Number.isFinite(uncertainty) || uncertainty < 0) return 1;
  const magnitude = Math.floor(Math.log10(Number(uncertainty.toPrecision(1))));
  return Math.min(6, Math.max(0, -magnitude));
}

/** Decimals that the steps of an axis need: 0.05 → 2, 5 → 0. */
export function decimalsOfStep(step: number): number {
  for (let decimals = 0; decimals < 8; decimals++) {
    if (Math.abs(step - Number(step.toFixed(decimals))) < Math.abs(step) * 1e-6) return decimals;
  }
  return 8;
}

/** "61.4 ± 0.3", in the digits that the uncertainty leaves. */
export function withUncertainty(value: number, uncertainty: number): string {
  const decimals = decimalsFor(uncertainty);
  return `${fixed(value, decimals)} ± ${fixed(uncertainty, decimals)}`;
}

/** "61.4 wt%", apart by a thin space. */
export function withUnit(text: string, unit: string): string {
  return unit ? `${text}${thin}${unit}` : text;
}

/** A ratio to a limit in two digits: 0.35, 3.4, 12, 140; beyond 1000 in words of size. */
export function ratio(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return "—";
  if (value >= 1000) return "> 1000";
  if (value >= 10) return value.toFixed(0);
  return value >= 0.995 ? value.toFixed(1) : value.toFixed(2);
}

/** "1 724": groups of three, apart by a thin space. */
export function grouped(value: number): string {
  const [whole, rest] = String(value).split(".");
  const apart = whole.replace(/\B(?=(\d{3})+(?!\d))/g, thin);
  return rest ? `${apart}.${rest}` : apart;
}

/** "81 %" of a share 0–1. */
export function percent(share: number): string {
  return `${(share * 100).toFixed(share < 0.095 ? 1 : 0)}${thin}%`;
}

/** How an axis unit is written. */
export function axisUnit(unit: "nm" | "cm-1"): string {
  return unit === "nm" ? "nm" : "cm⁻¹";
}

const superscripts = "⁰¹²³⁴⁵⁶⁷⁸⁹";

/**
 * A number without a unit of its own (a statistic, an absorbance) in `digits` significant digits; very small and very large ones as a power
 * of ten: "0.00252", "8.1 × 10⁻⁶".
 */
export function figure(value: number, digits = 3): string {
  if (value === 0) return "0";
  if (!Number.isFinite(value)) return "—";
  const size = Math.abs(value);
  const sign = value < 0 ? "−" : "";
  if (size >= 0.001 && size < 100_000) return sign + String(Number(size.toPrecision(digits)));
  const [mantissa, exponent] = size.toExponential(digits - 1).split("e");
  const raised = [...exponent.replace("+", "")]
    .map((each) => (each === "-" ? "⁻" : superscripts[Number(each)]))
    .join("");
  return `${sign}${Number(mantissa)} × 10${raised}`;
}

/** A name at the beginning of a line: "ethyl acetate" → "Ethyl acetate". */
export function named(name: string): string {
  return name.slice(0, 1).toUpperCase() + name.slice(1);
}

/** "1 reading", "3 readings". */
export function counted(count: number, one: string, many = `${one}s`): string {
  return `${grouped(count)} ${count === 1 ? one : many}`;
}
