"""Text to syntax: knows the file formats, no electricity. Lengths are still millimetres here."""
