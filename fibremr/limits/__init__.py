"""Limits that end a curve, one file a method or standard, and the list of them."""

from __future__ import annotations

from fibremr.limits import class_rotation, own

METHODS: tuple[dict[str, str], ...] = (
    {
        "method": class_rotation.NAME,
        "gives": class_rotation.QUANTITY,
        "source": class_rotation.SOURCE,
        "validity": class_rotation.VALIDITY,
    },
    {
        "method": own.STRAIN,
        "gives": "strain",
        "source": own.STRAIN_SOURCE,
        "validity": own.STRAIN_VALIDITY,
    },
    {
        "method": own.CAPACITY,
        "gives": "rotation capacity",
        "source": "given in the case with rotation_source",
        "validity": own.CAPACITY_VALIDITY,
    },
)
