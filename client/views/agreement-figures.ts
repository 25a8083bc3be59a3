import { html, nothing } from "lit";
import { pWords } from "../../core/agreement/index.ts";
import type { AgreementStatistics, Estimate, Test } from "../../core/messages/index.ts";
import { decimalsFor, fixed, thin } from "../words/quantity.ts";

interface Row {
  name: string;
  estimate: Estimate | null;
  unit: string;
  decimals: number;
  formula: string;
  test?: string;
}

/** The statistics with their intervals, and under each the formula that made it: some of these names mean other things elsewhere. */
export function agreementFigures(statistics: AgreementStatistics, unit: string, rmsecv: number | null) {
  return html`<table>
    <caption>
      ${statistics.n} pairs; e = predicted − laboratory; intervals hold 95 %
    </caption>
    <thead>
      <tr>
        <th scope="col">Figure</th>
        <th scope="col" class="number">Value</th>
        <th scope="col" class="number">95 % interval</th>
        <th scope="col">Test</th>
      </tr>
    </thead>
    <tbody>
      ${rowsOf(statistics, unit, rmsecv).map(
        ({ name, estimate, unit: own, decimals, formula, test }) => html`<tr>
          <th scope="row">${name}<br /><span class="quiet">${formula}</span></th>
          <td class="number">${estimate ? `${fixed(estimate.value, decimals)}${own && thin + own}` : "—"}</td>
          <td class="number">${estimate ? intervalWords(estimate, decimals) : "—"}</td>
          <td>${test ?? nothing}</td>
        </tr>`,
      )}
    </tbody>
  </table>`;
}

function rowsOf(statistics: AgreementStatistics, unit: string, rmsecv: number | null): Row[] {
  const { rmsep, bias, sep, slope, intercept, r2, biasTest, sepTest, slopeTest } = statistics;
  const decimals = decimalsFor(sep.value) + 1;
  const own = { unit, decimals };
  return [
    { ...own, name: "Bias", estimate: bias, formula: "mean of e", test: `is it 0? ${testWords("t", biasTest)}` },
    {
      ...own,
      name: "SEP",
      estimate: sep,
      formula: "√(Σ(e − bias)²/(n − 1)): the scatter, without the bias",
      test: sepTest
        ? `larger than RMSECV ${fixed(rmsecv ?? 0, decimals)}${thin}${unit}? ${testWords("F", sepTest)}`
        : "the model does not say its RMSECV",
    },
    { ...own, name: "RMSEP", estimate: rmsep, formula: "√(Σe²/n): bias and scatter together" },
    {
      name: "Slope",
      estimate: slope,
      unit: "",
      decimals: 3,
      formula: "laboratory = intercept + slope · predicted",
      test: slopeTest ? `is it 1? ${testWords("t", slopeTest)}` : undefined,
    },
    { ...own, name: "Intercept", estimate: intercept, formula: "of the same line" },
    {
      name: "R²",
      estimate: r2,
      unit: "",
      decimals: 3,
      formula: "squared correlation: depends on the spread of the samples",
    },
  ];
}

function intervalWords({ low, high }: Estimate, decimals: number): string {
  return low === null || high === null ? "—" : `${fixed(low, decimals)} to ${fixed(high, decimals)}`;
}

function testWords(name: string, { statistic, freedom, p }: Test): string {
  const value =
    statistic === null ? "no scatter to measure by" : `${name}(${freedom.join(", ")}) = ${fixed(statistic, 2)}`;
  return `${value}, p ${pWords(p)}`;
}
