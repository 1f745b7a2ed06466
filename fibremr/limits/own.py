"""Limits of the user's own: a strain at the extreme edge, and a rotation capacity with its source."""

from __future__ import annotations

STRAIN = "own strain"
CAPACITY = "own rotation capacity"
STRAIN_SOURCE = "given in the case: applied strain eps0 - kappa z at the more strained edge"
STRAIN_VALIDITY = "any section and law; the strain is the user's own"
CAPACITY_VALIDITY = "any section and law; R and its source are the user's own"
