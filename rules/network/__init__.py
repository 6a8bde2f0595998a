"""Rules that need nothing but the network: what is in series with the gate, and in which order."""
