"""`class rotation`: the rotation capacity on which plastic design of class 1 sections rests."""

from __future__ import annotations

NAME = "class rotation"
QUANTITY = "rotation capacity"
ROTATION_CAPACITY = 3.0
SOURCE = (
    "R = 3 for class 1 sections: AISC 360 Commentary to B4 and background of the EN 1993-1-1 class limits "
    "(both from memory)"
)
VALIDITY = "class 1 sections by the code of the case; a convention, not a measurement"


def capacity(section_class: int | None) -> float | None:
    """R for a class, None where the class carries none."""
    return ROTATION_CAPACITY if section_class == 1 else None
