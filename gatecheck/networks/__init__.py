"""Which transistors are switches, and what stands between each gate and its driver."""
