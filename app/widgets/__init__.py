"""Streamlit pieces: functions that show data and return what was chosen."""
