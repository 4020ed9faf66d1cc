"""The chip as a circuit: interface, liquid, walls and leads, at all frequencies at once."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.constants import epsilon_0

from model.arrays import Complex, Real
from model.design import Design
from model.electrode import Interface
from model.fields.patterns import ChipPatterns


@dataclass(frozen=True)
class Circuit:
    """Admittance of a chip and how its voltage divides.

    Parameters
    ----------
    design, patterns
        The patterns must be those of the design's chip.
    omega
        Angular frequency, rad/s, (n_frequency,).
    conductivity
        Of the liquid, S/m, () or (n_conductivity, 1).

    Notes
    -----
    Between the terminals stand the leads, then in parallel the walls and the liquid with its
    interface on every electrode. The interface is solved exactly (:mod:`model.fields.modes`);
    walls count to first order.
    """

    design: Design
    patterns: ChipPatterns
    omega: Real
    conductivity: Real

    @cached_property
    def liquid(self) -> Complex:
        """Complex conductivity σ + jωε of the liquid, S/m."""
        permittivity = self.design.liquid.state.permittivity
        return np.asarray(self.conductivity + 1j * self.omega * permittivity)

    @cached_property
    def interface(self) -> Interface:
        """Admittances per area between metal and liquid."""
        return self.design.electrode.at(self.omega, self.design.liquid, self.conductivity)

    @cached_property
    def length(self) -> Complex:
        """ℓ = (σ + jωε)/Y_interface, m: liquid of this thickness impedes as the interface does."""
        return np.asarray(self.liquid / self.interface.admittance)

    @cached_property
    def _answers(self) -> tuple[Complex, Real | None]:
        """Share behind the interface and largest voltage across it, per volt at the electrodes."""
        if not self.patterns.response.has_places:
            return self.patterns.response.share(self.length), None
        return self.patterns.response.share_and_largest(self.length)

    @cached_property
    def liquid_admittance(self) -> Complex:
        """Of the liquid with its interface, S."""
        bare = self.liquid * (self.patterns.cell_factor * self.design.chip.parallel_length)
        return np.asarray(bare * self._behind_interface)

    @cached_property
    def wall_admittance(self) -> Complex:
        """Of floor and lid, Σ (σ + jωε)·wall factor·length, S."""
        chip = self.design.chip
        total: Complex = np.zeros(self.omega.shape, dtype=complex)
        for name, factor in self.patterns.wall_factors.items():
            wall = chip.floor if name == "floor" else chip.lid
            permittivity = epsilon_0 * wall.electric_permittivity
            total += (wall.electric_conductivity + 1j * self.omega * permittivity) * factor
        return np.asarray(total * chip.parallel_length)

    @cached_property
    def _inner(self) -> Complex:
        """Admittance behind the leads, S."""
        return np.asarray(self.liquid_admittance + self.wall_admittance)

    @cached_property
    def _behind_interface(self) -> Complex:
        """Share of the electrodes' voltage that reaches the liquid."""
        return self._answers[0]

    @cached_property
    def lead_share(self) -> Complex:
        """Share of the terminals' voltage that reaches the electrodes, 1/(1 + RY)."""
        per_terminal = 2.0 / self.design.chip.terminals
        resistance = self.design.electrode.lead_resistance
        return np.asarray(1.0 / (1.0 + resistance * per_terminal * self._inner))

    @cached_property
    def admittance(self) -> Complex:
        """Of all phases together, S: its real part times V_rms² is the power."""
        return np.asarray(self._inner * self.lead_share)

    @cached_property
    def share(self) -> Complex:
        """Share of the voltage between the terminals that reaches the liquid, complex.

        The current with leads and interface over that without. The field pattern is scaled by
        this one number, while its shape really flattens as the interface takes over: the field
        leaves the edges first. Against exact solves (bars and gaps of 40 µm, channel of 100 µm):
        with a share of 0.99 the scaled E² and force along the flow are right within 2 % over
        coplanar bars and 9 % under a plate from a sixteenth of the pitch up. With 0.95 E² is
        within a quarter, the force within a third, from an eighth to a quarter of the pitch. At
        0.5 and below the true force there is up to twice the scaled one; a fortieth of the pitch
        above the edges it is half of it.
        """
        return np.asarray(self.lead_share * self._behind_interface)

    @cached_property
    def heat_share(self) -> Real:
        """Heat in the liquid over that without leads and interface, at the same voltage.

        At least |share|²: the current that the interface leaves also takes other paths.
        """
        heat = self.patterns.response.energy(self.length)
        return np.asarray(np.abs(self.lead_share) ** 2 * heat)

    @cached_property
    def _largest_drop(self) -> Real:
        """Largest amplitude across interface and film per volt between the terminals.

        Raises
        ------
        ValueError
            If it is not known where the electrodes are.
        """
        largest = self._answers[1]
        if largest is None:
            raise ValueError("it is not known where the electrodes of this chip are")
        return np.asarray(np.abs(self.lead_share) * largest)

    @property
    def diffuse_voltage(self) -> Real:
        """Largest amplitude across the diffuse part of the double layer."""
        return np.asarray(self.double_layer_voltage * self.interface.diffuse_share)

    @property
    def double_layer_voltage(self) -> Real:
        """Largest amplitude across the double layer on any electrode, V per V, both of one kind."""
        return np.asarray(self._largest_drop * np.abs(self.interface.layer_share))

    @property
    def film_voltage(self) -> Real:
        """Largest amplitude across the film on any electrode, V per V; 0 without a film."""
        return np.asarray(self._largest_drop * np.abs(self.interface.film_share))

    @property
    def wall_ratio(self) -> Real:
        """|admittance of the walls| over |that of the liquid|."""
        return np.asarray(np.abs(self.wall_admittance) / np.abs(self.liquid_admittance))
