"""Reports to text: no decisions, no printing."""
