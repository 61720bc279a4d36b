"""From an unknown text to a recipe for it."""
