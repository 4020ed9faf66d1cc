"""What every particle kind provides; the kinds themselves stand in ``model/particles/``."""

from abc import ABC, abstractmethod
from typing import Annotated, Literal

from numpy.typing import ArrayLike

from model.arrays import Complex, Real
from model.declare import Choice, Flag, Part, Quantity, Text

Role = Literal["collect", "pass", "watch"]
Radius = Annotated[
    float,
    Quantity("Radius", "Outer, of the median particle.", unit="um", low="5 nm", high="500 um"),
]


class Particle(Part, ABC):
    """One population in the liquid.

    A kind adds its own fields, a ``kind`` literal, and the methods below. All of them take the
    angular frequency `omega` and the medium's complex permittivity ε̃ = ε − jσ/ω (phasors
    exp(+jωt)), and the `size` of single particles relative to the declared one; all three
    broadcast against one another with frequency as the last axis, e.g. sizes ``(n_sample, 1)``.
    """

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

    @property
    @abstractmethod
    def equivalent_radius(self) -> float:
        """Radius of the sphere of equal volume, in m: a³ is the volume over 4π/3."""

    @property
    def smallest_size(self) -> float:
        """Least relative size that a single particle can have; draws are cut there."""
        return 0.0

    @abstractmethod
    def polarisation(self, omega: Real, medium: Complex, size: ArrayLike = 1.0) -> Complex:
        """Polarisation factor K (Clausius–Mossotti factor), dimensionless."""

    @abstractmethod
    def membrane_gain(self, omega: Real, medium: Complex, size: ArrayLike = 1.0) -> Real | None:
        """Induced membrane voltage at the pole per outside field, |ΔV|/E in m (V per V/m).

        Of several membranes the largest at each frequency. None if the kind has no membrane.
        """
