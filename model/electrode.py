"""The electrodes of a design: what lies between their metal and the liquid, and their leads."""

from dataclasses import dataclass
from typing import TYPE_CHECKING, Annotated, Literal

import numpy as np
from scipy.constants import epsilon_0

from model.arrays import Complex, Real
from model.declare import Choice, Part, Quantity
from model.interface import capacitive, constant_phase, in_series, slab
from model.liquid.electrolyte import debye_length

if TYPE_CHECKING:
    from model.liquid.liquid import Liquid


class Electrode(Part):
    """Double layer or constant-phase element, with an optional film on the metal.

    No part of the chip's solve: any of it can change afterwards.
    """

    interface: Annotated[
        Literal["double-layer", "constant-phase"],
        Choice(
            "Interface",
            "Double layer: the diffuse layer's capacitance in series with the Stern layer's. "
            "Constant phase: a measured element Q(jω)ⁿ instead of both.",
            options={"double-layer": "double layer", "constant-phase": "constant phase"},
            source="Debye and Hückel 1923; Stern 1924; constant phase: common practice, no source",
        ),
    ] = "double-layer"
    stern_capacitance: Annotated[
        float,
        Quantity(
            "Stern capacitance",
            "Of the layer of ions and water next to the metal, per area.",
            unit="F/m^2",
            low="0.001 F/m^2",
            high="10 F/m^2",
            source="0.05 to 0.4 F/m² for noble metals; 0.2 is common practice, no source",
            detail=True,
            only_with=("interface", "double-layer"),
        ),
    ] = 0.2
    ionic_strength: Annotated[
        float | None,
        Quantity(
            "Ionic strength",
            "For the thickness of the diffuse layer, instead of an estimate from conductivity.",
            unit="mmol/L",
            low="0.0001 mmol/L",
            high="5000 mmol/L",
            optional=True,
            detail=True,
            empty="from conductivity",
        ),
    ] = None
    constant_phase_magnitude: Annotated[
        float,
        Quantity(
            "Constant phase Q, S·sⁿ/m²",
            "Magnitude of the constant-phase element, per area; used if it is chosen above.",
            unit="",
            low="1e-6",
            high="1000",
            source="order of smooth metal in dilute salt, common practice, no source",
            detail=True,
            only_with=("interface", "constant-phase"),
        ),
    ] = 0.3
    constant_phase_exponent: Annotated[
        float,
        Quantity(
            "Constant phase n",
            "Exponent of the constant-phase element: 1 is a capacitance, 0.5 diffusion.",
            unit="",
            low="0.5",
            high="1",
            source="0.8 to 0.95 for smooth metal, common practice, no source",
            detail=True,
            only_with=("interface", "constant-phase"),
        ),
    ] = 0.9
    lead_resistance: Annotated[
        float,
        Quantity(
            "Lead resistance",
            "Of both leads on the chip together, between its terminals and the electrodes.",
            unit="ohm",
            low="0 ohm",
            high="100 kohm",
        ),
    ] = 0.0
    film_thickness: Annotated[
        float | None,
        Quantity(
            "Film thickness",
            "Of an insulating film on the electrodes; empty for bare metal. Taken as thin against "
            "their width: current crosses it straight.",
            unit="nm",
            low="1 nm",
            high="20 um",
            optional=True,
            detail=True,
            empty="no film",
        ),
    ] = None
    film_permittivity: Annotated[
        float,
        Quantity(
            "Film relative permittivity",
            "Of that film.",
            unit="",
            low="1",
            high="500",
            source="silicon dioxide, handbook value, from memory",
            detail=True,
            only_with=("film_thickness", ""),
        ),
    ] = 3.9
    film_conductivity: Annotated[
        float,
        Quantity(
            "Film conductivity",
            "Of that film.",
            unit="S/m",
            low="0 S/m",
            high="1e3 S/m",
            detail=True,
            only_with=("film_thickness", ""),
        ),
    ] = 0.0
    film_strength: Annotated[
        float,
        Quantity(
            "Film breakdown strength",
            "Field at which that film breaks down, peak.",
            unit="V/um",
            low="0.1 V/um",
            high="5000 V/um",
            source="half of good thermal oxide, for deposited films; common practice, no source",
            detail=True,
            only_with=("film_thickness", ""),
        ),
    ] = 500e6

    def at(self, omega: Real, liquid: "Liquid", conductivity: Real) -> "Interface":
        """Admittances at angular frequencies (n_frequency,) and conductivities (…, 1) or ()."""
        permittivity = liquid.state.permittivity
        if self.ionic_strength is None:
            length = liquid.electrolyte(conductivity).debye_length(permittivity)
        else:
            strength, warm = self.ionic_strength, liquid.temperature
            length = debye_length(permittivity, strength, warm)
        diffuse = permittivity / length
        if self.interface == "double-layer":
            layer = in_series(capacitive(omega, self.stern_capacitance), capacitive(omega, diffuse))
        else:
            layer = constant_phase(
                omega, self.constant_phase_magnitude, self.constant_phase_exponent
            )
        film = None
        if self.film_thickness is not None:
            permittivity = epsilon_0 * self.film_permittivity
            film = slab(omega, self.film_thickness, permittivity, self.film_conductivity)
        return Interface(
            layer, film, length, self.stern_capacitance / (self.stern_capacitance + diffuse)
        )


@dataclass(frozen=True)
class Interface:
    """What a current meets between metal and liquid.

    Parameters
    ----------
    layer
        Admittance per area of the double layer or constant-phase element, S/m².
    film
        That of the film, None without.
    debye_length
        λ_D, m.
    diffuse_share
        Λ = C_s/(C_s + C_d), the share of the double layer's voltage that stands over its
        diffuse part; also taken where a constant-phase element stands for both.
    """

    layer: Complex
    film: Complex | None
    debye_length: Real
    diffuse_share: Real

    @property
    def admittance(self) -> Complex:
        """Of all in series, S/m²."""
        return self.layer if self.film is None else in_series(self.layer, self.film)

    @property
    def layer_share(self) -> Complex:
        """Share of the interface's voltage that stands over the double layer."""
        return np.asarray(self.admittance / self.layer)

    @property
    def film_share(self) -> Complex:
        """Share of the interface's voltage that stands over the film; 0 without one."""
        if self.film is None:
            return np.zeros_like(self.layer)
        return np.asarray(self.admittance / self.film)
