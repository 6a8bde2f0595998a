"""Facts about packages, pin names and circuits as data, each with its origin. Never about part numbers."""
