import type { PropertyAccount, ShiftRecord, StreamPart } from "../messages/index.ts";
import { duration, fixed, named, withUnit } from "../words/index.ts";
import { type Markup, markup, nothing } from "./markup.ts";
import type { Pen } from "./record-page.ts";
import { trendPicture } from "./trend-picture.ts";

/** Each stream: its sentence, its other properties, and its trend with the excursions marked. */
export function streamSection(record: ShiftRecord, pen: Pen): Markup {
  return markup`<section><h2>Streams</h2>${record.streams.map((part) => stream(part, record, pen))}</section>`;
}

function stream(part: StreamPart, record: ShiftRecord, { time, when }: Pen): Markup {
  const { from, to } = record;
  const excursions = record.excursions.filter((each) => each.stream === part.stream);
  return markup`<div class="stream">
    <div>
      <p><b>${part.name}</b> <span class="quiet">${part.stream}${processWords(part, when)}</span></p>
      <p>${part.says}</p>
      ${part.account.properties.slice(1).map((property) => markup`<p class="quiet">${propertyLine(property, part)}</p>`)}
    </div>
    ${trendPicture(part.trend, { from, to, excursions, time })}
  </div>`;
}

function targetWords([low, high]: [number, number], outsideMs: number): string {
  return outsideMs > 0 ? `outside ${low} to ${high} for ${duration(outsideMs)}` : `never outside ${low} to ${high}`;
}

function processWords({ process }: StreamPart, when: Pen["when"]): string {
  if (!process) return "";
  return `, ${process.state}${process.grade === undefined ? "" : ` (grade ${process.grade})`} since ${when(process.since)}`;
}

function propertyLine(
  { name, unit, decimals, mean, min, max, target, outsideMs }: PropertyAccount,
  { before }: StreamPart,
): Markup | string {
  if (mean === null || min === null || max === null) return nothing;
  const last = before?.properties.find((each) => each.name === name)?.mean ?? null;
  const parts = [
    `${named(name)} ${withUnit(fixed(mean, decimals), unit)}, ${fixed(min, decimals)} to ${fixed(max, decimals)}`,
    ...(target ? [targetWords(target, outsideMs)] : []),
    ...(last === null ? [] : [`the shift before ${fixed(last, decimals)}`]),
  ];
  return `${parts.join("; ")}.`;
}
