"""Freezing a readout, the link to it, and the page a client sees."""
