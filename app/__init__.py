"""The dashboard: everything around the estimators."""
