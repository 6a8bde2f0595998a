"""The numbers: pure functions of SI floats and arrays, without parts, files or printing.

Every parameter is keyword-only and carries its unit in its name; every function names the source of its
formula and the range it holds in. Arrays broadcast: the leading axes are corners (one entry per assumed
set of values), so a thousand cases cost little more than one.
"""
