"""Which of two hears better, by how many dB, and how surely."""
