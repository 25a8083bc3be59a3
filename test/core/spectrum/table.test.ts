import { describe, expect, test } from "vitest";
import { parseTable, splitLine, TableError } from "../../../core/spectrum/index.ts";

const read = (text: string) => parseTable(text, "t.csv", "nm");

describe("a table of spectra", () => {
  test("is read with its samples, groups, reference values and a falling axis", () => {
    const { header, rows } = read(
      'sample,group,"water, wt%",1004,1002\r\n"a ""1""",g1,3.5,0.1,-2e-3\r\nb,g2,,.5,+1\r\n',
    );
    expect(Array.from(header.axis.points)).toEqual([1004, 1002]);
    expect(header.properties).toEqual(["water, wt%"]);
    expect(rows.map(({ sample, group, line }) => [sample, group, line])).toEqual([
      ['a "1"', "g1", 2],
      ["b", "g2", 3],
    ]);
    expect(rows[0].references).toEqual({ "water, wt%": 3.5 });
    expect(rows[1].references["water, wt%"]).toBeNaN();
    expect(rows.map(({ values }) => Array.from(values))).toEqual([
      [0.1, -0.002],
      [0.5, 1],
    ]);
  });

  test("without a column sample counts its rows", () => {
    expect(read("900,902\n1,2\n3,4\n").rows.map(({ sample }) => sample)).toEqual(["1", "2"]);
  });

  test.each([
    ["", /line 1: the header is without channels/],
    ["sample;900;902\n", /separated by semicolons, expected columns separated by commas/],
    ["sample\t900\t902\n", /separated by tabs/],
    ["sample,900,902\na,1\n", /line 2 is 2 fields, expected 3/],
    ["sample,900,902\na,1,2\n\n", /line 3 is empty/],
    ["sample,900,902\na,1,x\n", /line 2, column 902 is "x", expected a number/],
    ["sample,900,902\na,1,\n", /line 2, column 902 is empty/],
    ["sample,900,902\na,1,NaN\n", /line 2, column 902 is "NaN"/],
    ["sample,900,902\na,1,1e999\n", /line 2, column 902 is "1e999"/],
    ["sample,y,900,902\na,high,1,2\n", /line 2, column y is "high"/],
    ["sample,900,902\na,1,2\na,3,4\n", /line 3: the sample is "a", as in line 2/],
    ["sample,900,902\n,1,2\n", /line 2: the sample is empty/],
    ["sample,900,902,900\n", /column 4 is "900", as column 2/],
    ["sample,900,902,901\n", /the axis is wrong: axis point 3 is 901 nm after 902/],
    ['sample,900,902\n"a,1,2\n', /line 2, field 1 is quoted in a way that cannot be read/],
    ['sample,900,902\n"a"b,1,2\n', /line 2, field 1 is quoted/],
  ])("%j is refused, naming line and column", (text, says) => {
    expect(() => read(text)).toThrow(TableError);
    expect(() => read(text)).toThrow(says);
  });
});

test("a line that begins with an empty field, before one in quotes, is read field by field", () => {
  expect(splitLine(',"x ""y""",,1', 1, "t.csv")).toEqual(["", 'x "y"', "", "1"]);
  expect(splitLine('"a",', 1, "t.csv")).toEqual(["a", ""]);
});
