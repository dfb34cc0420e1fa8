"""What every request and socket meets before a screen does: checks, headers, caps."""
