"""The verdicts: what may be said, and how surely."""
