"""From the tree of a board file to its facts: every mistake collected, each with its place."""
