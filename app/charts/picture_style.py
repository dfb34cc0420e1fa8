"""The style sheet of rails, marks and fans, shared by the workspace and the client page."""

from __future__ import annotations

# two diagonals that stretch with the rail; a mask, so that their colour comes from the theme
_CROSS = (
    "url(\"data:image/svg+xml,%3Csvg xmlns='http://www.w3.org/2000/svg' viewBox='0 0 9 9' "
    "preserveAspectRatio='none'%3E%3Cpath d='M0 0 9 9M9 0 0 9' stroke='%23000' fill='none' "
    "vector-effect='non-scaling-stroke'/%3E%3C/svg%3E\") 0 0/100% 100% no-repeat"
)

PICTURE_STYLE = """
.hr-defs{position:absolute;width:0;height:0;overflow:hidden}
.hr-rail-picture{display:block;width:100%;overflow:visible}
.hr-rail{fill:none;stroke:var(--hr-hair)}
.hr-solid{fill:var(--hr-figure)}
.hr-hatch{stroke:var(--hr-figure);stroke-width:1}
.hr-dashed{stroke-dasharray:3 2}
.hr-hatch-line{stroke:var(--hr-figure)}
.hr-zero{stroke:var(--hr-line);stroke-width:1}
.hr-crossed{stroke:var(--hr-line);stroke-width:1}
.hr-halo{stroke:var(--hr-page);stroke-width:4}
.hr-stroke{stroke:var(--hr-ink);stroke-width:2}
.hr-glyph{vertical-align:-1px;flex:none}
.hr-glyph-fill{fill:var(--hr-ink)}
.hr-glyph-edge{fill:none;stroke:var(--hr-ink);stroke-width:1.25}
.hr-mark{display:inline-block;box-sizing:border-box;width:12px;height:12px;flex:none;
 border:1.25px solid var(--hr-ink);vertical-align:-1px;
 -webkit-print-color-adjust:exact;print-color-adjust:exact}
.hr-mark-publish{background:var(--hr-ink)}
.hr-mark-note{background:linear-gradient(90deg,var(--hr-ink) 50%,transparent 50%)}
.hr-mark-hidden{background:
 linear-gradient(45deg,transparent 45%,var(--hr-ink) 45% 55%,transparent 55%),
 linear-gradient(-45deg,transparent 45%,var(--hr-ink) 45% 55%,transparent 55%)}
.hr-verdict{white-space:nowrap}
.hr-box{position:relative;height:16px;width:100%;
 -webkit-print-color-adjust:exact;print-color-adjust:exact}
.hr-box::before{content:"";position:absolute;inset:3px 0;border:1px solid var(--hr-hair)}
.hr-box-hidden::after{content:"";position:absolute;inset:3px 0;background:var(--hr-line);
 -webkit-mask:CROSS;mask:CROSS}
.hr-box span{position:absolute;top:3px;bottom:3px;box-sizing:border-box}
.hr-box .hr-box-solid{background:var(--hr-figure)}
.hr-box .hr-box-hatch{border:1px solid var(--hr-figure);background:
 repeating-linear-gradient(-45deg,var(--hr-figure) 0 1.6px,transparent 1.6px 4px)}
.hr-box-not-counted .hr-box-hatch{border-style:dashed}
.hr-box .hr-box-stroke{top:0;bottom:0;margin-left:-2px;box-sizing:content-box;
 border:solid var(--hr-page);border-width:0 1px;min-width:2px;background:var(--hr-ink)}
.hr-box .hr-box-zero{top:0;bottom:0;border-left:1px solid var(--hr-line)}
.hr-fan{display:block;width:100%;overflow:visible;font-size:13px}
.hr-fan text{fill:var(--hr-soft)}
.hr-fan .hr-fan-left{fill:var(--hr-people)}
.hr-fan .hr-fan-right{fill:var(--hr-figure)}
.hr-fan .hr-fan-title{font-weight:600}
.hr-fan .hr-fan-value{fill:var(--hr-ink);font-weight:600;font-size:16px}
.hr-fan .hr-fan-end{fill:var(--hr-ink)}
.hr-fan .hr-fan-tick{font-size:12px}
.hr-people{fill:var(--hr-people)}
.hr-band{fill:var(--hr-band-on-page)}
.hr-band-edge{stroke:var(--hr-figure);stroke-width:1;fill:none}
.hr-beside{fill:var(--hr-band-on-page)}
.hr-paper{fill:var(--hr-page)}
.hr-curve{fill:none;stroke:var(--hr-figure);stroke-width:1.5}
.hr-axis{fill:none;stroke:var(--hr-hair)}
.hr-runs{display:block;width:100%}
.hr-run{fill:none;stroke:var(--hr-figure);stroke-width:1.5}
.hr-run-open{fill:var(--hr-page);stroke:var(--hr-figure);stroke-width:1}
.hr-run-line{stroke:var(--hr-ink);stroke-width:1.5}
.hr-endless{stroke:var(--hr-soft);stroke-width:1;stroke-dasharray:2 3}
""".replace("CROSS", _CROSS)
