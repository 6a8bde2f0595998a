"""Rules on currents and voltages."""
