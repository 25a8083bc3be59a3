import { describe, expect, test } from "vitest";
import type { SmallTrend, Verdict } from "../../core/messages/index.ts";
import { markup, recordCsv, recordPage } from "../../core/shift-page/index.ts";
import { account, begin, hour, record } from "./handover/some-record.ts";

const minute = 60_000;
const verdicts: Verdict[] = ["inside", "inside", "extrapolated", "unfamiliar", "inside", "inside"];

function pictureOf(more: Partial<SmallTrend> = {}): string {
  const trend: SmallTrend = {
    ...{ property: "ethanol", unit: "wt%", target: [88, 94.5], gaps: [] },
    time: verdicts.map((_, i) => begin + i * minute),
    value: [91, 92, 300, 90, 91, 91],
    verdict: verdicts,
    ...more,
  };
  const streams = [{ stream: "s-1", name: "Column overhead", account: account(), before: null, trend }];
  return recordPage({ record: record({ streams, to: begin + hour }), hash: null, entries: [] }).text;
}

describe("the small trend of a stream", () => {
  test("is a line where inside, hollow points where not, and what lies beyond the scale stands at its edge", () => {
    const picture = pictureOf();
    expect(picture.match(/<path class="line" d="([^"]*)"/)![1].match(/M/g)).toHaveLength(2);
    expect(picture).toMatch(/<circle class="extrapolated" cx="[\d.]+" cy="3" r="1.4"\/>/);
    expect(picture.match(/<circle class="unfamiliar"/g)).toHaveLength(1);
  });

  test("no line crosses a gap", () => {
    const inside = verdicts.map((): Verdict => "inside");
    const value = verdicts.map(() => 91);
    const lines = (gaps: SmallTrend["gaps"]) =>
      pictureOf({ verdict: inside, value, gaps })
        .match(/<path class="line" d="([^"]*)"/)![1]
        .match(/M/g)!.length;
    expect([lines([]), lines([[begin + minute, begin + 2 * minute]])]).toEqual([1, 2]);
  });

  test("without readings says so", () => {
    expect(pictureOf({ value: verdicts.map(() => null) })).toContain("No numbers to draw.");
  });
});

test("a template escapes what it is given, and joins lists", () => {
  const given = `<b title="x">&'`;
  expect(markup`<i>${given}${[1, null, markup`<br>`]}</i>`.text).toBe(
    "<i>&lt;b title=&quot;x&quot;&gt;&amp;&#39;1<br></i>",
  );
});

test("the table holds what the page holds, a line for each thing", () => {
  const note = {
    number: 1,
    shift: begin,
    at: begin,
    by: "A. Moss",
    kind: "note" as const,
    about: { kind: "shift" as const },
    says: 'Said "so", and left',
  };
  const csv = recordCsv(record({ entries: [note] }), [note]);
  expect(csv.split("\r\n")[0]).toMatch(/^section,stream,what,from \(UTC\)/);
  expect(csv).toContain('"Said ""so"", and left",A. Moss');
  expect(csv).toContain("stream,s-1,ethanol mean,,,,91.2,wt%");
});
