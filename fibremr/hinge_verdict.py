"""The verdict on one hinge: what it must turn by both laws, what each method lets it turn."""

from __future__ import annotations

from dataclasses import dataclass, replace

from fibremr import available
from fibremr.available import at_edge_strain
from fibremr.beam.hinges import Hinge, at_region, scaled_rotation
from fibremr.beam.solve import Solution
from fibremr.bending import Bar, Curve
from fibremr.case.records import Case
from fibremr.classes import SectionClass, classify
from fibremr.limits import class_rotation, own

JUSTIFIED, NOT, OUTSIDE = "justified", "not justified", "outside the methods"


def worse(*verdicts: str) -> str:
    """The worst of some verdicts."""
    order = (JUSTIFIED, OUTSIDE, NOT)
    return max(verdicts, key=order.index)


@dataclass(frozen=True)
class Available:
    """What a method lets a hinge turn: plastic rotation [rad] or None, R if it gives one, and why not."""

    method: str
    rotation: float | None
    capacity: float | None
    why_not: str = ""


@dataclass(frozen=True)
class HingeVerdict:
    """A hinge at load factor 1 with what is required [rad] by both laws and what is available."""

    hinge: Hinge
    case_law: float | None
    elastic_plastic: float | None
    classed: SectionClass
    available: tuple[Available, ...]
    governing: Available | None
    verdict: str

    @property
    def required(self) -> float | None:
        """The larger of both laws [rad]."""
        found = [r for r in (self.case_law, self.elastic_plastic) if r is not None]
        return max(found) if found else None

    @property
    def use(self) -> float | None:
        """Required over available."""
        if self.required is None or self.governing is None or not self.governing.rotation:
            return None
        return self.required / self.governing.rotation


@dataclass(frozen=True)
class Judge:
    """Judges hinges: what each may turn by the methods named."""

    case: Case
    curves: dict[int, Curve]
    bars: dict[int, Bar]

    def classed(self, sense: int) -> SectionClass:
        """Class of the section in a sense."""
        found = classify(self.bars[sense], self.case.section, minor=self.case.bending.about == "minor")
        if all(steel.carbon for steel in self.case.steels):
            return found
        return SectionClass(found.code, None, (), "its classes are those of carbon steel")

    def hinge(self, shown: Solution, plastic: Solution | None, hinge: Hinge, reachable: bool) -> HingeVerdict:
        """The verdict on one hinge."""
        case_law = hinge.required if reachable else None
        other = None
        if plastic is not None:
            mate = hinge if plastic is shown else at_region(plastic, hinge.at, *self._plastic())
            other = mate.required if mate is not None and mate.sense == hinge.sense else 0.0
        methods = self._available(shown, hinge)
        names = available.named(self.case.limits)
        able = [a for a in methods if a.method in names and a.rotation is not None]
        governing = min(able, key=lambda a: a.rotation or 0.0) if able else None
        found = HingeVerdict(hinge, case_law, other, self.classed(hinge.sense), methods, governing, OUTSIDE)
        if found.required is None:
            return replace(found, verdict=NOT)
        if governing is None or governing.rotation is None:
            return found
        return replace(found, verdict=JUSTIFIED if found.required <= governing.rotation else NOT)

    def _plastic(self) -> tuple[float, float]:
        return self.bars[1].plastic.moment, self.bars[-1].plastic.moment

    def _available(self, shown: Solution, hinge: Hinge) -> tuple[Available, ...]:
        limits, found = self.case.limits, []
        if limits.strain is not None:
            state = at_edge_strain(self.curves[hinge.sense], limits.strain)
            if state is None:
                found.append(Available(own.STRAIN, None, None, "the curve ends before this strain"))
            else:
                moment = self.curves[hinge.sense].event(state).moment
                found.append(Available(own.STRAIN, scaled_rotation(shown, hinge, moment), None))
        if limits.rotation_capacity is not None:
            found.append(self._by_capacity(own.CAPACITY, limits.rotation_capacity, hinge))
        classed = self.classed(hinge.sense)
        capacity = class_rotation.capacity(classed.number)
        if capacity is None:
            why = classed.why_not or f"the section is of class {classed.number} in this sense"
            found.append(Available(class_rotation.NAME, None, None, why))
        else:
            found.append(self._by_capacity(class_rotation.NAME, capacity, hinge))
        return tuple(found)

    @staticmethod
    def _by_capacity(method: str, capacity: float, hinge: Hinge) -> Available:
        growth = max(hinge.moment, hinge.plastic) / hinge.plastic
        return Available(method, max(0.0, capacity + 1.0 - growth) * hinge.theta_p, capacity)
