import { readFileSync } from "node:fs";
import { createRequire } from "node:module";

const find = createRequire(import.meta.url).resolve;

/** The page's style with its font inside: one file, no network. Screen in light or dark, as the reader's system is; paper always light. */
export function reportStyle(): string {
  return `${fontFace(400)}${fontFace(700)}${rules}`;
}

function fontFace(weight: number): string {
  const file = find(`@fontsource/atkinson-hyperlegible/files/atkinson-hyperlegible-latin-${weight}-normal.woff2`);
  const font = readFileSync(file).toString("base64");
  return `@font-face{font-family:"Atkinson Hyperlegible";font-weight:${weight};src:url(data:font/woff2;base64,${font}) format("woff2")}`;
}

const light =
  "--page:#ECEBE6;--card:#F8F7F4;--rule:#C8CBC6;--ink:#1D272D;--quiet:#566169;--extrapolated:#1F5FA8;--unfamiliar:#7A3B9E;--band:#DADCD6;color-scheme:light";
const dark =
  "--page:#161B1E;--card:#1E2529;--rule:#3A444A;--ink:#E4E8EA;--quiet:#9AA7AE;--extrapolated:#7FB2EC;--unfamiliar:#C79AE6;--band:#323B41;color-scheme:dark";

const rules = `
:root{${light}}
@media screen and (prefers-color-scheme:dark){:root{${dark}}}
*{box-sizing:border-box}
body{margin:0;background:var(--page);color:var(--ink);font:15px/1.45 "Atkinson Hyperlegible",system-ui,sans-serif;font-variant-numeric:tabular-nums}
main{max-width:1160px;margin:0 auto;padding:24px 20px 48px}
h1{font-size:28px;line-height:1.2;margin:0 0 4px}
h2{font-size:20px;margin:40px 0 4px;padding-top:12px;border-top:1px solid var(--rule)}
h3{font-size:15px;margin:0 0 4px}
p{margin:4px 0 12px;max-width:75ch}
.quiet{color:var(--quiet)}
.lead{font-size:16px}
.mind{border-left:4px solid var(--extrapolated);padding:4px 12px;background:var(--card)}
.cards{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,500px),1fr));gap:16px;align-items:start}
figure{margin:0;background:var(--card);border:1px solid var(--rule);border-radius:4px;padding:12px}
figure.wide{grid-column:1/-1}
figcaption{color:var(--quiet);font-size:14px;margin-top:4px}
figcaption b{color:var(--ink)}
svg{display:block;width:100%;height:auto}
.scroll{overflow-x:auto}
table{border-collapse:collapse;margin:8px 0 4px;font-size:14px;background:var(--card)}
th,td{padding:4px 12px 4px 8px;text-align:right;border-bottom:1px solid var(--rule);white-space:nowrap}
th{color:var(--quiet);font-weight:400}
th:first-child,td:first-child,td.words,th.words{text-align:left}
td.words{white-space:normal}
dl{display:grid;grid-template-columns:max-content 1fr;gap:4px 16px;margin:8px 0}
dt{color:var(--quiet)}
dd{margin:0;overflow-wrap:anywhere}
.line{fill:none;stroke-width:1.5}
.line.ink{stroke:var(--ink)}.line.quiet{stroke:var(--quiet)}.line.rule{stroke:var(--quiet);stroke-width:1}.line.faint{stroke:var(--rule);stroke-width:1}
.line.extrapolated{stroke:var(--extrapolated)}.line.unfamiliar{stroke:var(--unfamiliar)}
.band{fill:var(--band);stroke:none}
.bar.ink{fill:var(--ink)}.bar.quiet{fill:var(--quiet)}.bar.faint{fill:var(--rule)}
.dot.filled.ink{fill:var(--ink)}.dot.filled.quiet{fill:var(--quiet)}.dot.filled.unfamiliar{fill:var(--unfamiliar)}.dot.filled.extrapolated{fill:var(--extrapolated)}
.dot.hollow{fill:var(--card);stroke-width:1.2}.dot.hollow.quiet{stroke:var(--quiet)}.dot.hollow.ink{stroke:var(--ink)}.dot.hollow.unfamiliar{stroke:var(--unfamiliar)}
.grid{stroke:var(--rule);stroke-width:.5;fill:none}
.tick{stroke:var(--quiet);stroke-width:1;fill:none}
.axis,.label,.name{font-size:12px;fill:var(--quiet)}
.name{fill:var(--ink)}
.axis.title{fill:var(--ink)}
@page{margin:14mm}
@media print{
:root{--page:#fff;--card:#fff}
body{font-size:10.5pt}
.axis,.label,.name{font-size:15px}
figure.wide .axis,figure.wide .label,figure.wide .name{font-size:17px}
main{max-width:none;padding:0}
.cards{grid-template-columns:1fr 1fr;gap:4mm}
figure,tr,dl,.mind{break-inside:avoid}
h2,h3{break-after:avoid}
.scroll{overflow:visible}
table{font-size:8.5pt}th,td{padding:1mm 2mm 1mm 1mm;white-space:normal}
}`;
