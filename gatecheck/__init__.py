"""gatecheck reads hardware design files and checks that every power-switch gate is damped.

Nothing heavy is imported here: the start of `gatecheck --help` depends on it.
"""

from pathlib import Path

__version__ = "0.1.0"

# In the wheel the rule modules lie inside this package. In a checkout they lie
# in the sibling folder, so let `gatecheck.rules` resolve there.
_HERE = Path(__file__).parent
if not (_HERE / "rules" / "__init__.py").is_file():
    __path__.append(str(_HERE.parent))
