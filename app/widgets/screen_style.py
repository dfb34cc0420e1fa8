"""The look of the pieces the screens are made of, in the tokens of the palette."""

SCREEN_STYLE = """
.st-key-journey{border-bottom:1px solid var(--hr-hair);padding-bottom:4px;row-gap:0}
.st-key-journey{margin-left:-8px}
.st-key-journey a{padding:4px 8px}
.stApp [data-testid="stPageLink-NavLink"]{background:none}
.st-key-journey a:has(strong){box-shadow:inset 0 -3px 0 var(--hr-figure);border-radius:0}
:not(.st-key-journey)>[data-testid="stElementContainer"] [data-testid="stPageLink-NavLink"] p{
 color:var(--hr-link);text-decoration:underline;text-decoration-thickness:1px;
 text-underline-offset:3px}
.hw-study{font-family:"Source Serif","Source Serif 4",Georgia,serif;font-weight:600;
 color:var(--hr-ink);padding:0 8px;border-left:1px solid var(--hr-line)}
.hw-question{margin:0 0 8px 0;font-size:1rem;max-width:44em}
.hw-verdict{margin:8px 0 0 0}
.hw-tight{margin:0}
.hw-kept{margin:0;font-weight:600;color:var(--hr-ink)}
.hw-standing{margin:0;color:var(--hr-ink);border-left:3px solid var(--hr-figure);padding-left:8px}
.hw-caption{text-align:left;color:var(--hr-soft);font-size:.875rem;padding:0 0 4px 0}
.hw-card-head{font-family:"Source Serif","Source Serif 4",Georgia,serif;font-size:1.5rem;
 font-weight:600; margin:0 0 4px 0;padding:0}
.hw-proposal{border-left:3px solid var(--hr-figure);padding:2px 0 2px 12px;margin:8px 0}
.hw-proposal p{margin:0}
.hw-bar{display:grid;grid-template-columns:minmax(6em,12em) 1fr 5em;gap:8px;align-items:center;
 font-size:.9375rem;line-height:1.5}
.hw-bars-short .hw-bar{grid-template-columns:2.5em 1fr 5em}
.hw-bar-name{overflow-wrap:anywhere;color:var(--hr-ink)}
.hw-bar-line span{display:block;height:12px;background:var(--hr-people)}
.hw-bar-text{text-align:right;font-variant-numeric:tabular-nums;color:var(--hr-ink)}
.hw-row{display:grid;grid-template-columns:6.5em 1fr;gap:0 8px;align-items:center;
 padding:0 0 8px 0;font-size:1rem}
.hw-value{white-space:nowrap;font-weight:600;font-variant-numeric:tabular-nums;
 color:var(--hr-ink)}
.hr-held .hw-value,.hr-held .hw-between{color:var(--hr-soft);font-weight:400}
.hw-between{grid-column:2;font-size:.875rem;color:var(--hr-soft)}
[class*="st-key-study_"] [data-testid="stPageLink-NavLink"],
.stMain :not(.st-key-journey)>[data-testid="stElementContainer"] [data-testid="stPageLink-NavLink"]{
 padding-left:0}
.st-key-first_figure .hr-box{max-width:36rem}
.hw-list{margin:0;padding-left:1.25rem;color:var(--hr-ink)}
.hw-list li{margin:0 0 4px 0}
.hw-strip{background:var(--hr-panel);padding:12px 16px;border-radius:4px}
.hw-strip p{margin:0 0 4px 0}
.hw-part{display:block;height:12px;border:1px solid var(--hr-hair);max-width:30rem}
.hw-part span{display:block;height:100%;background:var(--hr-people)}
.hw-link{font-family:ui-monospace,monospace;overflow-wrap:anywhere;color:var(--hr-ink);
 background:var(--hr-panel);padding:8px 12px;border-radius:4px;margin:0}
[class*="st-key-rail_row_"] button,[class*="st-key-question_row_"] button{
 text-align:left;justify-content:flex-start;min-height:0;padding:2px 0}
[class*="st-key-rail_row_"],[class*="st-key-question_row_"]{
 border-bottom:1px solid var(--hr-hair);padding-bottom:2px}
.stApp button[kind="tertiary"]{color:var(--hr-link)}
.stApp button[kind="tertiary"] p{text-decoration:underline;text-decoration-thickness:1px;
 text-underline-offset:3px;text-align:left}
.st-key-pickers_line{display:none}
@media (max-width:640px){
 .hr-number small{display:block;margin:8px 0 0 0}
 [data-testid="stColumn"]:has(.st-key-question_card){order:-1}
 .st-key-journey a{padding:4px 6px}
 .st-key-pickers_line{display:flex}
 .st-key-pickers{display:none}
 .st-key-journey{column-gap:4px}
 [class*="st-key-rail_row_"] button,[class*="st-key-question_row_"] button{min-height:44px}
}
"""
