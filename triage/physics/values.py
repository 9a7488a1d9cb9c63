"""The one type the formula rooms take and give.

A formula is written once for a float and for an array alike; results broadcast as numpy does. Units are base
SI except temperatures, which are in degC.
"""

from typing import Any, TypeAlias

Values: TypeAlias = Any
"""A float, or an array of floats."""
