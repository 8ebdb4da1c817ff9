"""What C arithmetic means on the target; knows no source text."""
