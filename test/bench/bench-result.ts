/** One line of a bench: a figure, and what was wanted of it. */
export interface BenchResult {
  name: string;
  value: number;
  unit: string;
  wanted?: string;
  /** is it as wanted? */
  good?: boolean;
  note?: string;
}
