"""Pure functions of SI numbers: no parts, no files, no printing."""
