"""placeholder"""
PastedCount = PastedCounts = read_pasted_counts = None
