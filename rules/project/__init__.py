"""Rules about the design as a whole: whether its files say the same."""
