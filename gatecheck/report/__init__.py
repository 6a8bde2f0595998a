"""Report to text, one module per format. Nothing is decided here and nothing is printed."""
