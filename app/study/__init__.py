"""What a manager talks about: studies, questions, plans, figures. No Streamlit, SQL or plotly."""
