import type { EntryOf, SigningSide } from "../messages/index.ts";
import { type Markup, markup } from "./markup.ts";
import { entryLine } from "./people-sections.ts";
import type { PageInput, Pen } from "./record-page.ts";
import { handoverStanding } from "./standing.ts";

/** Both signatures with name, time and meaning, the hash of what was signed, and all that was written since, beside it. */
export function signatureSection({ entries, hash }: PageInput, pen: Pen): Markup {
  const { outgoing, incoming } = handoverStanding(entries);
  const since = outgoing ? entries.filter(({ number, kind }) => number > outgoing.number && kind !== "signature") : [];
  const beside = (amends: boolean) => since.filter((entry) => (entry.amends === true) === amends);
  return markup`<section><h2>Signatures</h2>
    <div class="signatures">${signature("outgoing", outgoing, pen)}${signature("incoming", incoming, pen)}</div>
    ${hash === null ? "" : markup`<p class="quiet">SHA-256 of the signed record: <code>${hash}</code></p>`}
  </section>
  ${entryList("Asked and said before taking over", beside(false), pen)}
  ${entryList("Amendments, after both had signed", beside(true), pen)}`;
}

function signature(side: SigningSide, signed: EntryOf<"signature"> | undefined, { time }: Pen): Markup {
  const title = side === "outgoing" ? "Outgoing side" : "Incoming side";
  if (!signed) return markup`<div><p class="quiet">${title}</p><p>Not signed.</p></div>`;
  const back = signed.clockBackMs === undefined ? "" : " (the server's clock had been set back)";
  return markup`<div><p class="quiet">${title}</p>
    <p><b>${signed.by}</b>, ${signed.role}</p>
    <p>${time.full(signed.at)}${back}</p>
    <p>${signed.meaning}</p></div>`;
}

function entryList(title: string, entries: PageInput["entries"], pen: Pen): Markup {
  if (entries.length === 0) return markup``;
  return markup`<section><h2>${title}</h2><ul>${entries.map((entry) => markup`<li>${entryLine(entry, pen)}</li>`)}</ul></section>`;
}
