"""The array types of this folder.

A parameter takes a float or an array of corners (`Real`); a result is always an array, of the shape its
parameters broadcast to (with further axes behind, where the function says so).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

RealArray = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]
IndexArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]
Real = float | RealArray
