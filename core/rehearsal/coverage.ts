import { noGap, type RecordedStretch, type Span } from "./stretch.ts";

/** The times in which there were data, one after the other, and their sum. */
export interface Coverage {
  spans: Span[];
  end: number;
  totalMs: number;
}

export function coverage({ time, gap }: RecordedStretch): Coverage {
  const spans: Span[] = [];
  let from = time[0];
  for (let i = 1; i < time.length; i++) {
    if (gap[i] === noGap) continue;
    spans.push({ from, to: time[i - 1] });
    from = time[i];
  }
  if (time.length > 0) spans.push({ from, to: time[time.length - 1] });
  return {
    spans,
    end: time[time.length - 1] ?? 0,
    totalMs: spans.reduce((sum, span) => sum + span.to - span.from, 0),
  };
}
