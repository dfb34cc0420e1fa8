"""Where studies are kept: SQLAlchemy over SQLite, and the uploaded bytes beside it."""
