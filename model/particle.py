"""What every particle kind provides; the kinds themselves stand in ``model/particles/``."""

from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from model.arrays import Complex, Real
from model.declare import Choice, Flag, Part, Quantity, Text
from model.medium import Medium
from model.quantity import plain_text

Role = Literal["collect", "pass", "watch"]
Radius = Annotated[
    float,
    Quantity("Radius", "Outer, of the median particle.", unit="um", low="5 nm", high="500 um"),
]


def radius_field(radius: float) -> dict[str, Any]:
    """The radius, m, as it stands in a profile."""
    return {"radius": plain_text(radius, "um")}


@dataclass(frozen=True)
class Sample:
    """Single particles of a population, relative to the declared one.

    Parameters
    ----------
    size
        Of all radii or semi-axes; layers keep their thickness.
    membrane
        Of the capacitance of every membrane.
    """

    size: ArrayLike = 1.0
    membrane: ArrayLike = 1.0


#: The declared particle itself.
MEDIAN = Sample()


@dataclass(frozen=True)
class Alignment:
    """How a particle that can turn lies in the field.

    Parameters
    ----------
    lengths
        All semi-axes, m, (3,).
    axis
        Which of them stands along the field, (…, n_frequency).
    advantage
        By how much Re K along it exceeds that along the next one of another length.
    """

    lengths: Real
    axis: NDArray[np.intp]
    advantage: Real


class Particle(Part, ABC):
    """One population in the liquid.

    A kind adds its own fields, a ``kind`` literal, and the methods below. All of them take the
    medium with its frequencies (phasors exp(+jωt)) and a sample of single particles; all broadcast
    against one another with frequency as the last axis, e.g. sizes ``(n_sample, 1)``.
    """

    #: What a new one starts with, as in a profile: round numbers, common practice, no source.
    usual: ClassVar[Mapping[str, Any]]

    name: Annotated[str, Text("Name", "How this population is called.", longest=40, needed=True)]
    kind: str
    role: Annotated[
        Role,
        Choice(
            "Role",
            "Collect: the task must work for it. Pass: it must not be caught. Watch: shown only.",
            options={"collect": "collect", "pass": "let pass", "watch": "watch"},
        ),
    ] = "collect"
    must_live: Annotated[bool, Flag("Must live", "The membrane-voltage limit applies to it.")] = (
        False
    )
    density: Annotated[
        float,
        Quantity(
            "Density",
            "Mass per volume; its excess over the liquid's makes the particle sink.",
            unit="kg/m^3",
            low="500 kg/m^3",
            high="20000 kg/m^3",
        ),
    ] = 1050.0
    radius_cv: Annotated[
        float,
        Quantity(
            "Variation of size",
            "Coefficient of variation of the radius, lognormal about the median; 0 for equal "
            "particles.",
            unit="",
            low="0",
            high="0.5",
        ),
    ] = 0.0
    source: Annotated[
        str | None,
        Text(
            "Source",
            "Where its numbers come from.",
            longest=240,
            optional=True,
            empty="not told",
            detail=True,
        ),
    ] = None

    @classmethod
    @abstractmethod
    def sized(cls, radius: float) -> dict[str, Any]:
        """Fields, as in a profile, that give it an equivalent radius, m."""

    @property
    @abstractmethod
    def equivalent_radius(self) -> float:
        """Radius of the sphere of equal volume, in m: a³ is the volume over 4π/3."""

    @property
    def hydrodynamic_radius(self) -> float:
        """Radius of the sphere of equal Stokes drag, m, the mean over all orientations."""
        return self.equivalent_radius

    @property
    def membrane_spread(self) -> float:
        """Coefficient of variation of the membrane capacitance; 0 without a membrane."""
        return 0.0

    @property
    def smallest_size(self) -> float:
        """Least relative size that a single particle can have; draws are cut there."""
        return 0.0

    @abstractmethod
    def polarisation(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Polarisation factor K, dimensionless: F = 2πε_m a³ Re K ∇|E_rms|².

        a is the equivalent radius. Of particles that can turn it is that of the orientation they
        take.
        """

    @abstractmethod
    def membrane_gain(self, medium: Medium, sample: Sample = MEDIAN) -> Real | None:
        """Induced membrane voltage at the pole per outside field, |ΔV|/E in m (V per V/m).

        Of several membranes the largest at each frequency. None if the kind has no membrane.
        """

    def conductance(self, medium: Medium) -> Real | None:
        """Surface conductance K_s in this medium, S; None if the kind has no such surface."""
        return None

    def spinning_factor(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Polarisation factor of which Im K makes it spin in a rotating field."""
        return self.polarisation(medium, sample)

    @property
    def spinning_ease(self) -> float:
        """Share c in the rate of spinning −c·(ε_m/η)·Im K·E²; ½ for a sphere."""
        return 0.5

    def alignment(self, medium: Medium, sample: Sample = MEDIAN) -> Alignment | None:
        """How the particle lies in the field; None if it does not matter or is left to chance."""
        return None
