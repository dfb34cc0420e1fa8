"""Pictures: plotly figures and inline SVG, drawn from numbers that app.study prepared."""
