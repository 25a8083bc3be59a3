import { escapeText } from "./plot.ts";
import type { ReportInput } from "./report-input.ts";
import { channels } from "./sections/channels.ts";
import { components } from "./sections/components.ts";
import { errors } from "./sections/errors.ts";
import { everySample } from "./sections/every-sample.ts";
import { head } from "./sections/head.ts";
import { limits } from "./sections/limits.ts";
import { record } from "./sections/record.ts";
import { samples } from "./sections/samples.ts";
import { reportStyle } from "./style.ts";

/** The report of a calibration as one HTML page that needs nothing else: pictures, figures with their formulas, what to mind, and the record. */
export function calibrationReport(input: ReportInput): string {
  const { model } = input;
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; font-src data:; img-src data:">
<title>${escapeText(model.name)}: calibration report</title><style>${reportStyle()}</style></head>
<body><main>
${head(input)}
${errors(input)}
${components(input)}
${samples(input)}
${channels(input)}
${limits(input)}
${everySample(input)}
${record(input)}
</main></body></html>
`;
}
