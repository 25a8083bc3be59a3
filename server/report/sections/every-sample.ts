import { figure, table } from "../html.ts";
import type { ReportInput } from "../report-input.ts";

export function everySample({ diagnostics: { samples: all }, limits: limit, model }: ReportInput): string {
  return `<h2>All samples</h2>${table(
    [
      "sample",
      "leverage",
      "T²/limit, fit",
      "held out",
      "Q/limit, fit",
      "held out",
      ...model.properties.flatMap(({ name }) => [`error of ${name}, fit`, "held out"]),
    ],
    all.map(({ name, leverage, t2, q, error }) => [
      name,
      figure(leverage, 3),
      ...[t2.fit / limit.t2, t2.crossValidated / limit.t2, q.fit / limit.q, q.crossValidated / limit.q].map((value) =>
        figure(value, 3),
      ),
      ...error.flatMap(({ fit, crossValidated }) => [figure(fit, 3), figure(crossValidated, 3)]),
    ]),
  )}`;
}
