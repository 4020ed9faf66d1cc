"""Parts of a layered particle as a person enters them: its core and the layers around it."""

from collections.abc import Mapping
from typing import Annotated, Any

import numpy as np
from pydantic import BeforeValidator, Discriminator, Tag
from scipy.constants import epsilon_0

from model.arrays import Complex, Real
from model.declare import Part, Quantity, Text, counted
from model.polarisation import complex_permittivity

#: Most layers around one core.
MOST_LAYERS = 32
#: What a new layer starts with, as in a profile: round numbers, common practice, no source.
NEW_LAYERS: dict[str, dict[str, Any]] = {
    "membrane": {"name": "membrane", "capacitance": "10 mF/m^2", "conductance": "100 S/m^2"},
    "layer": {
        "name": "wall",
        "thickness": "100 nm",
        "relative_permittivity": 60.0,
        "conductivity": "10 mS/m",
    },
}
#: A layer up to this thickness counts as a membrane whose voltage matters: bilayers have 4 to
#: 10 nm, envelopes of two bilayers up to about 25 nm; cell walls and coats are thicker.
MEMBRANE_THICKNESS = 25e-9

RelativePermittivity = Annotated[
    float,
    Quantity("Relative permittivity", "Static, of the material.", unit="", low="1", high="1000"),
]
Conductivity = Annotated[
    float,
    Quantity("Conductivity", "Of the material.", unit="S/m", low="0 S/m", high="1e8 S/m"),
]


DispersionFrequency = Annotated[
    float,
    Quantity(
        "Dispersion at",
        "Frequency in the middle of the dispersion.",
        unit="MHz",
        low="10 Hz",
        high="100 GHz",
        detail=True,
        only_with=("dispersion_strength", ""),
    ),
]
DispersionSpread = Annotated[
    float,
    Quantity(
        "Dispersion spread",
        "0 for a single relaxation time (Debye), towards 1 for ever more spread ones (Cole–Cole's "
        "α).",
        unit="",
        low="0",
        high="0.99",
        source="Cole and Cole 1941 J. Chem. Phys. 9:341",
        detail=True,
        only_with=("dispersion_strength", ""),
    ),
]


def relaxation(omega: Real, strength: float | None, frequency: float, spread: float) -> Complex:
    """Δ/(1 + (jω/ω₀)^(1−α)), what a dispersion adds: Debye 1929 for α = 0, Cole and Cole 1941."""
    if strength is None:
        return np.zeros_like(omega, dtype=complex)
    return np.asarray(strength / (1.0 + (1j * omega / (2.0 * np.pi * frequency)) ** (1.0 - spread)))


class Material(Part):
    """A conducting dielectric, with a dispersion if it has a strength."""

    relative_permittivity: RelativePermittivity
    conductivity: Conductivity
    dispersion_strength: Annotated[
        float | None,
        Quantity(
            "Dispersion strength",
            "Fall of the relative permittivity over a dispersion, down to the relative "
            "permittivity above; the conductivity is then that at low frequency.",
            unit="",
            low="0",
            high="1e6",
            optional=True,
            empty="none",
            detail=True,
        ),
    ] = None
    dispersion_frequency: DispersionFrequency = 1e6
    dispersion_spread: DispersionSpread = 0.0

    @property
    def permittivity(self) -> float:
        """Above any dispersion, F/m."""
        return float(epsilon_0 * self.relative_permittivity)

    def complex_permittivity(self, omega: Real) -> Complex:
        """ε̃ = ε∞ + Δε/(1 + (jω/ω₀)^(1−α)) − jσ/ω, F/m, the shape of `omega`."""
        extra = relaxation(
            omega, self.dispersion_strength, self.dispersion_frequency, self.dispersion_spread
        )
        lossy = complex_permittivity(self.permittivity, self.conductivity, omega)
        return np.asarray(lossy + epsilon_0 * extra)


class Core(Material):
    """What all layers enclose, e.g. the cytoplasm."""


class Layer(Material):
    """A layer with a thickness, e.g. a cell wall."""

    name: Annotated[str, Text("Name", "How this layer is called.", longest=40)] = "layer"
    thickness: Annotated[
        float,
        Quantity("Thickness", "Of the layer.", unit="nm", low="0.1 nm", high="100 um"),
    ]

    @property
    def is_membrane(self) -> bool:
        """Whether its voltage counts as a membrane voltage: at most 25 nm thick."""
        return self.thickness <= MEMBRANE_THICKNESS


class Membrane(Part):
    """A layer without thickness, given by area-specific values as published data come."""

    name: Annotated[str, Text("Name", "How this membrane is called.", longest=40)] = "membrane"
    capacitance: Annotated[
        float,
        Quantity(
            "Membrane capacitance",
            "Per area, folds and microvilli included.",
            unit="mF/m^2",
            low="0.01 mF/m^2",
            high="1 F/m^2",
        ),
    ]
    conductance: Annotated[
        float,
        Quantity(
            "Membrane conductance",
            "Per area; 0 for a membrane that holds tight.",
            unit="S/m^2",
            low="0 S/m^2",
            high="1e8 S/m^2",
        ),
    ]

    dispersion_strength: Annotated[
        float | None,
        Quantity(
            "Dispersion strength",
            "Fall of the capacitance over a dispersion, down to the capacitance above; the "
            "conductance is then that at low frequency.",
            unit="mF/m^2",
            low="0 mF/m^2",
            high="10 F/m^2",
            optional=True,
            empty="none",
            detail=True,
        ),
    ] = None
    dispersion_frequency: DispersionFrequency = 1e6
    dispersion_spread: DispersionSpread = 0.0

    @property
    def thickness(self) -> float:
        """None of its own."""
        return 0.0

    @property
    def is_membrane(self) -> bool:
        """Always."""
        return True

    def complex_capacitance(self, omega: Real) -> Complex:
        """c̃ = C + ΔC/(1 + (jω/ω₀)^(1−α)) + G/(jω), F/m², the shape of `omega`."""
        extra = relaxation(
            omega, self.dispersion_strength, self.dispersion_frequency, self.dispersion_spread
        )
        return complex_permittivity(self.capacitance, self.conductance, omega) + extra


def _tag(value: Any) -> str | None:
    """Tell the two apart: a membrane has capacitance or conductance."""
    if isinstance(value, Mapping):
        return "membrane" if {"capacitance", "conductance"} & value.keys() else "layer"
    if isinstance(value, Membrane):
        return "membrane"
    return "layer" if isinstance(value, Layer) else None


#: One layer: with a thickness, or a membrane by capacitance and conductance.
AnyLayer = Annotated[
    Annotated[Layer, Tag("layer")] | Annotated[Membrane, Tag("membrane")],
    Discriminator(
        _tag,
        custom_error_type="declared",
        custom_error_message="must be a table with thickness, or with capacitance and conductance",
    ),
]
#: Layers around a core, outward.
Layers = Annotated[
    tuple[AnyLayer, ...], BeforeValidator(counted("layer", MOST_LAYERS, "layers, core outward"))
]
