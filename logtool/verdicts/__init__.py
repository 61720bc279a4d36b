"""What the figures allow to say, and how surely."""
