"""The style sheet of the readout page, as text: served under its hash, or put into the file."""

from __future__ import annotations

import hashlib

from app.charts.palette import DARK, LIGHT, PRINT, css_variables
from app.charts.picture_style import PICTURE_STYLE
from app.sharing.style_sheets import StyleSheet

_SCREEN = """
*{box-sizing:border-box}
html{background:var(--hr-page);color:var(--hr-ink);color-scheme:light dark;
 -webkit-text-size-adjust:100%;text-size-adjust:100%;scroll-padding-top:16px}
body{margin:0;font:1rem/1.5 "Source Sans","Source Sans 3","Source Sans Pro",system-ui,-apple-system,
 "Segoe UI",Roboto,sans-serif;overflow-wrap:break-word}
h1,h2{font-family:"Source Serif","Source Serif 4","Source Serif Pro",ui-serif,Georgia,
 "Times New Roman",serif;font-weight:600;margin:0;text-wrap:balance}
h1{font-size:2.25rem;line-height:1.15}
h2{font-size:1.5rem;line-height:1.2}
p,ul,ol,dl,dd,figure,blockquote{margin:0}
a{color:var(--hr-link);text-decoration:underline;text-underline-offset:.15em}
:focus-visible{outline:3px solid var(--hr-link);outline-offset:2px;border-radius:4px}
:target{scroll-margin-top:16px}
.skip{position:absolute;left:16px;top:-100px;background:var(--hr-page);padding:12px 16px;z-index:1}
.skip:focus{top:8px}
.unseen{position:absolute;width:1px;height:1px;overflow:hidden;clip-path:inset(50%)}
.frame{max-width:60rem;margin:0 auto;padding:40px 24px 64px}
.head{padding-bottom:24px;border-bottom:1px solid var(--hr-hair)}
.head p{color:var(--hr-soft)}
.head h1{margin:4px 0 8px}
.notice{border-left:3px solid var(--hr-ink);padding:8px 16px;margin-bottom:24px;
 background:var(--hr-panel)}
.notice li+li{margin-top:4px}
.notice ul{padding-left:1.2em}
.contents{display:none}
.opening{display:grid;gap:24px;padding:24px 0}
.opening h2,.after h2{font-size:1.25rem;margin-bottom:8px}
.in-short p{font-size:1.25rem;line-height:1.4;max-width:36em}
.in-short p+p{margin-top:8px}
.how-to-read{background:var(--hr-panel);border-radius:4px;padding:16px 16px 12px}
.how-to-read .hr-halo,.contents .hr-halo{stroke:var(--hr-panel)}
.how-to-read .legend{max-width:26rem;margin:12px 0 4px}
.how-to-read dl{display:grid;grid-template-columns:max-content 1fr;gap:0 12px}
.how-to-read dt{font-weight:600}
.how-to-read dd{color:var(--hr-ink)}
.how-to-read .between{margin-top:8px;color:var(--hr-soft)}
.figure{padding:32px 0 24px;border-top:1px solid var(--hr-hair)}
.figure .number{font-weight:400;color:var(--hr-soft);margin-right:.5em}
.figure .sentence{font-size:1.25rem;line-height:1.4;max-width:36em;margin-top:8px}
.figure .comment{max-width:44em;margin-top:8px;white-space:pre-line}
.on-screen{border-left:3px solid var(--hr-ink);padding-left:16px}
.now{font-size:.875rem;color:var(--hr-soft)}
.rows{width:100%;border-collapse:collapse;margin-top:16px;
 font-variant-numeric:lining-nums tabular-nums}
.rows caption{caption-side:bottom;text-align:left;padding-top:8px;font-size:.875rem;
 color:var(--hr-soft)}
.rows th,.rows td{padding:8px 16px 8px 0;text-align:right;vertical-align:middle;font-weight:400}
.rows thead th{font-size:.875rem;color:var(--hr-soft);padding:4px 16px 4px 0;vertical-align:bottom;
 border-bottom:1px solid var(--hr-line)}
.rows .who{text-align:left;width:20%;min-width:5.5rem}
.rows .value{white-space:nowrap;width:11%}
.rows .between{width:16%}
.rows .answers{width:8%}
.rows .firm .value{font-weight:600}
.rows tbody tr:first-child .who{font-weight:600}
.rows .between,.rows .answers{white-space:nowrap}
.rows .held{color:var(--hr-soft)}
.rows .rail{padding-right:0;width:45%;min-width:14rem}
.rows tbody tr+tr>*{border-top:1px solid var(--hr-hair)}
.rows .ends{display:flex;justify-content:space-between;gap:16px}
.rows sup{position:absolute;font-size:.75rem;line-height:1;margin-left:2px}
.notes{list-style:none;padding:0;margin-top:4px;font-size:.875rem;color:var(--hr-soft)}
.notes sup{margin-right:4px}
.cautions{list-style:none;padding:0;margin-top:12px;max-width:44em}
.cautions li{border-left:3px solid var(--hr-figure);padding-left:12px}
.cautions li+li{margin-top:8px}
details{margin-top:8px}
summary{cursor:pointer;color:var(--hr-link);text-decoration:underline;
 text-underline-offset:.15em;padding:10px 0;width:fit-content}
.fan{max-width:46rem;padding:8px 0}
.fan figcaption{margin-top:8px;font-size:.875rem;color:var(--hr-soft);max-width:44em}
.asked{max-width:40em;padding-left:16px;border-left:1px solid var(--hr-line)}
.after{padding:32px 0 8px;border-top:1px solid var(--hr-hair)}
.after dl{display:grid;grid-template-columns:minmax(9rem,14rem) 1fr;gap:8px 24px}
.after dt{font-weight:600}
.after dd{max-width:44em}
.after ul{padding-left:1.2em;max-width:44em}
.after li+li{margin-top:4px}
.version{color:var(--hr-soft);font-size:.875rem;padding-top:16px}
@media (min-width:760px){
 .opening.with-short{grid-template-columns:1fr 20rem;gap:40px;align-items:start}
}
@media (min-width:1200px){
 .frame{max-width:none;display:grid;grid-template-columns:13rem minmax(0,60rem);
  column-gap:40px;justify-content:center}
 .contents{display:block;position:sticky;top:24px;align-self:start;max-height:calc(100vh - 48px);
  overflow:auto;font-size:.875rem;padding:4px 0 4px 4px}
 .contents p{font-weight:600;margin-bottom:4px}
 .contents ol{list-style:none;padding:0}
 .contents a{display:block;padding:5px 0;color:var(--hr-ink);text-decoration:none;line-height:1.35}
 .contents a:hover{text-decoration:underline}
 .contents .number{color:var(--hr-soft);margin-right:.4em}
}
@media (max-width:640px){
 .frame{padding:24px 16px 40px}
 h1{font-size:1.75rem}
 .rows{display:grid;grid-template-columns:minmax(4.5rem,1fr) auto auto auto;column-gap:14px}
 .rows thead,.rows tbody{display:contents}
 .rows tr{display:grid;grid-template-columns:subgrid;grid-column:1/-1;align-items:baseline}
 .rows caption{display:block;grid-column:1/-1;order:2}
 .rows thead tr{border-bottom:1px solid var(--hr-line);padding-bottom:4px}
 .rows tbody tr{padding:8px 0 10px;min-height:44px}
 .rows tbody tr+tr{border-top:1px solid var(--hr-hair)}
 .rows tbody tr+tr>*{border-top:0}
 .rows th,.rows td,.rows thead th{padding:0;border:0}
 .rows .who,.rows .value,.rows .between,.rows .answers{width:auto}
 .rows .who{min-width:0}
 .rows .between{white-space:normal}
 .rows .without .who{grid-column:1/4}
 .rows .without .answers{grid-column:4;grid-row:1}
 .rows .without .held{grid-column:1/-1;grid-row:2;text-align:left}
 .rows .without .rail{grid-row:3}
 .rows .rail{grid-column:1/-1;width:auto;min-width:0;margin-top:4px}
 .rows thead .rail{margin-top:6px}
 summary,.skip{min-height:44px}
 .how-to-read dl{gap:0 8px}
 .after dl{display:block}
 .after dd+dt{margin-top:12px}
}
"""

_PRINT = """
@page{margin:18mm 16mm}
@media print{
 html{color-scheme:light;background:#fff}
 body{font-size:10.5pt}
 .skip,.contents,.runs{display:none}
 .frame{display:block;max-width:none;padding:0}
 h1{font-size:22pt}
 h2{font-size:14pt;break-after:avoid}
 .figure,.how-to-read,.after dt,.rows tr{break-inside:avoid}
 .how-to-read{border:1px solid #999}
 .after dt{break-after:avoid}
 summary{color:#000;text-decoration:none;font-weight:600;list-style:none;padding:4px 0}
 summary::-webkit-details-marker{display:none}
 details::details-content{content-visibility:visible;block-size:auto}
 a[href^="http"]::after{content:" (" attr(href) ")"}
}
"""

STYLE_TEXT = (
    f":root{{{css_variables(LIGHT)}}}"
    f"@media (prefers-color-scheme:dark){{:root{{{css_variables(DARK)}}}}}"
    f"@media print{{:root{{{css_variables(PRINT)}}}}}"
    f"{PICTURE_STYLE}{_SCREEN}{_PRINT}"
)
STYLE_HASH = hashlib.sha256(STYLE_TEXT.encode()).hexdigest()
READOUT_STYLE = StyleSheet(STYLE_TEXT)
