"""One graph of parts, pins and nets, whatever file it came from. SI units from here on."""
