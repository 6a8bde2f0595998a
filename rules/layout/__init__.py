"""Rules on copper: where parts stand and how the gate current gets back. They need a board."""
