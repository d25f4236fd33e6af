"""What a hand and an eye meet; it computes nothing of its own."""
