/**
 * The look of a shift's record, on the screen, in an exported file and on paper (A4 or Letter, as the printer is set). Its colours are those of
 * the page around it: warm asks for action, cool asks for doubt.
 */
export const recordStyle = `
.record{display:grid;grid-template-columns:minmax(0,1fr);gap:12px;max-width:1100px;line-height:1.4}
.record h1{font-size:20px;line-height:1.25;margin:0}
.record h2{font-size:16px;margin:4px 0 2px;padding:8px 0 0;border-top:1px solid var(--rule)}
.record p,.record ul{margin:0;padding:0;max-width:none}
.record ul{list-style:none;display:grid;gap:3px}
.record .quiet,.record .by{color:var(--quiet)}
.record .whole{white-space:nowrap}
.record header{display:grid;gap:6px}
.record .state{border:1px solid var(--edge,var(--quiet));border-radius:4px;padding:6px 10px;font-weight:700}
.record .state.waits{border-style:dashed}
.record li.act{border-left:4px solid var(--ink);padding-left:8px;font-weight:700}
.record li.know,.record li.fine{border-left:4px solid var(--rule);padding-left:8px}
.record .stream{display:grid;grid-template-columns:minmax(0,1fr) 270px;gap:2px 16px;padding:6px 0;border-bottom:1px solid var(--rule);break-inside:avoid}
.record .stream>div:first-child{display:grid;gap:2px;align-content:start}
.record svg.trend{display:block;width:270px;max-width:100%;height:auto}
.record svg text{font-size:9px;fill:var(--quiet)}
.record svg .line{fill:none;stroke:var(--ink);stroke-width:1.2}
.record svg .base{fill:none;stroke:var(--rule);stroke-width:1}
.record svg .target{fill:var(--band);opacity:.7}
.record svg circle{fill:none;stroke-width:1;stroke:var(--quiet)}
.record svg circle.unfamiliar{stroke:var(--odd)}
.record svg circle.extrapolated{stroke:var(--far)}
.record svg circle.sparse{stroke:var(--sparse)}
.record svg .bar{fill:var(--ink)}
.record svg .bar.unfamiliar{fill:var(--odd)}
.record svg .bar.extrapolated{fill:var(--far)}
.record svg .bar.sparse{fill:var(--sparse)}
.record .scrolls{overflow-x:auto}
.record table{border-collapse:collapse;width:100%;background:none;font-size:14px;margin:0}
.record th,.record td{text-align:left;vertical-align:top;padding:3px 10px 3px 0;border-bottom:1px solid var(--rule);font-weight:400;white-space:normal}
.record th{color:var(--quiet)}
.record td.number,.record th.number{text-align:right;white-space:nowrap}
.record .signatures{display:grid;grid-template-columns:1fr 1fr;gap:12px}
.record .signatures>div{border:1px solid var(--rule);border-radius:4px;padding:8px 10px;break-inside:avoid}
.record .signatures b{font-size:16px}
.record code{font-size:12px;overflow-wrap:anywhere}
.record .caution{font-size:13px;border-top:1px solid var(--rule);padding-top:6px}
@media(max-width:720px){.record .stream,.record .signatures{grid-template-columns:minmax(0,1fr)}}
@media print{
.record{gap:5px;font-size:9pt;line-height:1.28;max-width:none}
.record h1{font-size:13pt}
.record h2{font-size:10.5pt;padding-top:4px;break-after:avoid}
.record table{font-size:8.5pt}
.record th,.record td{padding:1.5px 8px 1.5px 0}
.record .stream{grid-template-columns:minmax(0,1fr) 58mm;padding:3px 0}
.record svg.trend{width:58mm}
.record .signatures{grid-template-columns:1fr 1fr}
.record tr,.record li{break-inside:avoid}
.record .scrolls{overflow:visible}
.record code,.record .caution{font-size:7.5pt}
}`;
