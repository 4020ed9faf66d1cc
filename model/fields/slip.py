"""Flow that a slip along the electrodes drives, as a few flows to be added up."""

from collections.abc import Collection, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.linalg import qr

from model.arrays import Complex, Real
from model.fields.assembly import Space
from model.fields.cells import Index
from model.fields.lines import LineTable
from model.fields.piecewise import Piecewise
from model.fields.response import ElectrodeResponse
from model.fields.sides import GAUSS, fit_on_side
from model.fields.stored import Stored

#: Forms of slip that are kept, and the weakest one that is, to the strongest.
FORMS, WEAKEST = 14, 1e-5
#: Share below which modes and answers do not count for them.
_ALIVE = 1e-9
#: Lengths ℓ that the forms are made of, over those of the modes, how many, and their phases.
_REACH, _SIZES, _PHASES = 30.0, 60, np.pi / 2 * np.array([-1.0, -0.5, 0.0, 0.5, 1.0])


@dataclass(frozen=True, eq=False, repr=False)
class SlipForms(Stored):
    """A few forms of slip that make up that for any ℓ.

    Parameters
    ----------
    slips
        At the places of the trace, (f, q), 1/m.
    weights
        Under which they are orthonormal, (q,), m².
    """

    slips: Real
    weights: Real

    @classmethod
    def of(cls, response: ElectrodeResponse, kind: int) -> "SlipForms":
        """Forms of one kind (see `slips`): the best few for the slips at many ℓ.

        Slips crowd toward edges as ℓ shrinks. Each is taken with one size, and places weigh by the
        length of their cell, which grows with the distance from the edge, so that each decade of
        distance counts alike (singular value decomposition).
        """
        rates = np.concatenate([modes.rates for modes in response.components])
        carried = np.concatenate([modes.parts**2 * modes.rates for modes in response.components])
        rates = rates[carried > _ALIVE * carried.sum()]
        sizes = np.geomspace(1.0 / (_REACH * rates.max()), _REACH / rates.min(), _SIZES)
        slips = response.slips((sizes[:, None] * np.exp(1j * _PHASES)).ravel())[kind]
        lengths = response.components[0].trace.weights
        cells = lengths / np.tile(GAUSS[1], lengths.size // GAUSS[1].size)
        weights = lengths * cells
        root = np.sqrt(weights)[:, None]
        level = np.linalg.norm(root * slips, axis=0)
        used = level > _ALIVE * level.max()  # what two phases add needs a phase between them
        left, strength, _ = np.linalg.svd(root * slips[:, used] / level[used], full_matrices=False)
        kept = min(FORMS, int((strength > WEAKEST * strength[0]).sum()))
        return cls((left[:, :kept] / root).T, weights)

    @cached_property
    def spots(self) -> Index:
        """As many places of the trace as there are forms, at which they differ most.

        By the pivots of a QR decomposition (Drmač and Gugercin 2016 SIAM J. Sci. Comput. 38:A631).
        """
        _, _, order = qr(self.slips * np.sqrt(self.weights), mode="economic", pivoting=True)
        return np.asarray(order[: len(self.slips)])

    @cached_property
    def _from_spots(self) -> Real:
        return np.asarray(np.linalg.inv(self.slips[:, self.spots].T))

    def amounts(self, slips: Real) -> Real:
        """How much of each form, (f, …), makes up slips (f, …) at the spots.

        The fastest flow is then within 4·10⁻⁴ of its largest for any ℓ of that from the slips at
        all places.
        """
        return np.asarray(np.tensordot(self._from_spots, slips, axes=(1, 0)))

    def velocities(
        self, velocity: Space, electrodes: Sequence[str], mirrors: Collection[str]
    ) -> Real:
        """Coefficients (f, 2, n_unknown) of each slip on the electrodes, at rest elsewhere.

        At an edge, where the slip ends abruptly, they are 0: half a cell beyond it would else be
        carried along, while nearly all of the slip before it is kept.
        """
        mesh = velocity.mesh
        others = [*electrodes, *mirrors, *(velocity.joined or ())]
        walls = np.setdiff1d(
            mesh.boundary_facets(), np.concatenate([mesh.boundaries[name] for name in others])
        )
        still = velocity.on_facets(walls.astype(int))
        found, start = np.zeros((len(self.slips), 2, velocity.size)), 0
        for name in electrodes:
            count = mesh.boundaries[name].size
            stop = start + count * GAUSS[0].size
            values = self.slips[:, start:stop].reshape(len(self.slips), count, -1)
            found[:, 0] += fit_on_side(velocity, name, values, still)
            start = stop
        return found


@dataclass(frozen=True, eq=False, repr=False)
class SlipFlow(Stored):
    """Flows of the forms of one kind along the lines of a chip.

    Parameters
    ----------
    forms
        Of the slip.
    samples
        Velocities, x and y of each form in turn, on the grid of the chip's line table,
        (2·f, rows·columns), 1/m per form.
    table
        That line table.
    odd
        Whether slip and flow are the reverse of their mirror images.
    """

    forms: SlipForms
    samples: Real
    table: LineTable
    odd: bool

    @classmethod
    def of(cls, forms: SlipForms, flows: Piecewise, table: LineTable, odd: bool) -> "SlipFlow":
        """Sample the flows along the lines of a chip."""
        x, y = table.grid
        return cls(forms, flows.values(*flows.cells.locate(np.stack([x, y]))), table, odd)

    @cached_property
    def _shapes(self) -> Real:
        return self.table.spline(self.samples)

    def line(self, y: float) -> Real:
        """Velocity along the line at a height, (f, 2, n), 1/m per form."""
        rows = self.table.rows
        signs = self.table.signs[rows.flows[2] if self.odd else rows.flows[0]]
        return np.asarray(self.table.values(self._shapes, y).reshape(-1, *signs.shape) * signs)

    def amounts(self, response: ElectrodeResponse, length: Complex) -> Real:
        """How much of each form there is for ℓ, (f, …), per V²."""
        return self.forms.amounts(response.slips(length, self.forms.spots)[1 if self.odd else 0])
