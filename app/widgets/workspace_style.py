"""What the theme settings cannot say about the look of the workspace, as one style sheet."""

from __future__ import annotations

from app.charts.palette import DARK, LIGHT, PRINT, css_variables, css_variables_by_scheme
from app.charts.picture_style import PICTURE_STYLE

_WORKSPACE = """
[data-testid="stMainBlockContainer"]{padding-top:64px;padding-bottom:40px}
[data-testid="stMarkdownContainer"] p,[data-testid="stMarkdownContainer"] li{line-height:1.5}
.stApp h1{line-height:1.15;text-wrap:balance}
.stApp h2,.stApp h3{line-height:1.2}
.stApp [data-testid="stCaptionContainer"],.stApp [data-testid="stCaptionContainer"] *{
 color:var(--hr-soft);opacity:1}
.stApp button[kind^="primary"],.stApp button[kind^="primary"] *{color:var(--hr-page)}
.stApp button[kind^="primary"]{font-weight:600}
.stApp [data-tag],.stApp [data-tag] *{color:var(--hr-page)}
.stApp [data-testid="stCheckbox"] svg,.stApp [data-testid="stCheckbox"] polyline{
 stroke:var(--hr-page)}
.stApp [data-testid="stAlertContainer"]{border-left:3px solid currentColor;border-radius:0}
.stApp :focus-visible{outline:2px solid var(--hr-link);outline-offset:2px}
.hr-number{font-family:"Source Serif","Source Serif 4",Georgia,serif;font-weight:600;
 font-size:3.5rem; line-height:1;color:var(--hr-ink);margin:0 0 8px;overflow-wrap:anywhere}
.hr-number small{font:400 1rem/1.5 "Source Sans","Source Sans 3",sans-serif;color:var(--hr-soft);
 margin-left:8px}
.hr-sentence{font-size:1.25rem;line-height:1.4;max-width:36em;color:var(--hr-ink);margin:0}
.hr-soft{color:var(--hr-soft)}
.hr-small{font-size:.875rem}
.hr-problem{color:var(--hr-problem)}
.hr-held{color:var(--hr-soft)}
.hr-counts{display:flex;flex-wrap:wrap;gap:4px 24px;font-size:1.25rem;line-height:1.4}
.hr-counts b{font-weight:600}
.hr-rows{width:100%;border-collapse:collapse;font-size:1rem;line-height:1.5}
.hr-rows th{font-size:.875rem;font-weight:400;color:var(--hr-soft);text-align:left;
 border-bottom:1px solid var(--hr-line);padding:4px 8px 4px 0;vertical-align:bottom}
.hr-rows td,.hr-rows tbody th{padding:8px 8px 8px 0;border-bottom:1px solid var(--hr-hair);
 color:var(--hr-ink);font-size:1rem;vertical-align:middle}
.hr-rows .hr-count{text-align:right;white-space:nowrap;font-variant-numeric:tabular-nums}
.hr-rows .hr-wide{width:45%;min-width:8rem}
@media (max-width:640px){
 [data-testid="stMainBlockContainer"]{padding-left:16px;padding-right:16px}
 .hr-number{font-size:2.75rem}
 .stApp .stButton button,.stApp .stDownloadButton button,.stApp .stFormSubmitButton button,
 .stApp [data-testid="stPageLink-NavLink"],.stApp [data-testid="stPopoverButton"],
 .stApp [data-testid="stRadioOption"],.stApp [data-testid="stCheckbox"] label,
 .stApp [data-testid="stExpander"] summary,.stApp [data-testid="stTabs"] [role="tab"],
 .stApp [data-testid="stButtonGroup"] button,.stApp [data-testid="stFileUploader"] button,
 .stApp .react-aria-ComboBox>[role="group"],.stApp [data-testid="stTextInputRootElement"],
 .stApp [data-testid="stNumberInputContainer"],.stApp [data-testid="stDateInputField"],
 .stApp .react-aria-ComboBox input,.stApp [data-testid="stTextInputRootElement"] input,
 .stApp [data-testid="stNumberInputContainer"] input{min-height:44px}
}
@media print{
 [data-testid="stSidebar"],[data-testid="stHeader"],[data-testid="stToolbar"],.stButton,
 .stDownloadButton,.stFormSubmitButton,.modebar-container{display:none !important}
 .stApp,.stApp *{color:#000 !important}
 .stApp,[data-testid="stMain"]{background:#fff !important}
 [data-testid="stMainBlockContainer"]{padding-top:0}
 .hr-rows tr{break-inside:avoid}
}
"""


def workspace_style() -> str:
    """Return the style sheet every screen of the workspace carries.

    Colours follow the theme by themselves: the platform sets `color-scheme` on the page, and
    each colour is a pair that answers to it.
    """
    variables = (
        f":root{{{css_variables(LIGHT)}}}"
        f"@media (prefers-color-scheme:dark){{:root{{{css_variables(DARK)}}}}}"
        f"@supports (color:light-dark(#000,#fff)){{:root{{{css_variables_by_scheme()}}}}}"
        f"@media print{{:root{{{css_variables(PRINT)}}}}}"
    )
    return variables + PICTURE_STYLE + _WORKSPACE
