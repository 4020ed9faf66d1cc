"""Solves a chip once into its patterns."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from skfem import Mesh

from model.arrays import Real
from model.fields.assembly import Space, load, space
from model.fields.cells import Cells
from model.fields.electric import Potential, solve_potential
from model.fields.feedback import solve_feedback
from model.fields.flow import FlowSpace, solve_flow
from model.fields.heat import Cooling, LiquidHeat, conduction
from model.fields.modes import combined, electrode_modes, even_mode
from model.fields.patterns import ChipPatterns, Warmth
from model.fields.piecewise import Piecewise
from model.fields.response import ElectrodeResponse
from model.fields.sampling import sample_lines
from model.fields.section import Section
from model.fields.slip import SlipFlow, SlipForms
from model.fields.wall_energy import wall_energy
from model.files import Files, no_files

if TYPE_CHECKING:
    from model.layout import Layout

#: Water at 25 °C and 0.1 MPa, W/(m K), IAPWS R15-11.
WATER = 0.6065
#: Polynomial degrees: φ is differentiated twice, so it is the finest.
FIELD_DEGREE, HEAT_DEGREE, FLOW_DEGREE = 8, 4, 4
#: Quadrature order of heat and forces; the field's own matrix takes twice its degree.
ORDER = 12


def solve_chip(
    chip: "Layout",
    thermal_conductivity: float = WATER,
    refinement: int = 0,
    files: Files = no_files,
) -> ChipPatterns:
    """Solve field, heat and electrothermal flow of a chip.

    Parameters
    ----------
    chip
        Its layout; `section` gives the mesh.
    thermal_conductivity
        k of the liquid, W/(m K).
    refinement
        Levels of uniform refinement, for convergence tests; each takes about four times longer.
    files
        Gives the contents of a file that the layout names.

    Raises
    ------
    ValueError
        If floor and lid are both insulated, so that no steady temperature exists.
    DesignError
        If a file cannot be used.
    """
    section = chip.section_from(files, refinement)
    mesh = section.liquid()
    field = _solve_field(section, mesh)
    cells = Cells.of(mesh)
    potential = Piecewise.of(
        field.potentials[0].space, field.solutions, cells, harmonic=field.harmonic
    )
    factor = section.cell_factor
    if factor is None:
        factor = section.cells_per_gap * sum(found.energy for found in field.potentials)
    response = _response(section, field, factor)
    warmth = temperature = flows = table = through = None
    slips: tuple[SlipFlow, ...] = ()
    if section.whole:
        heat = _liquid_heat(section, thermal_conductivity)
        theta = heat.solve(field.square)
        temperature = Piecewise.of(heat.functions, theta[None], Cells.of(section.mesh))
        warmth = _warmth(field, heat, temperature, theta)
        pair = FlowSpace.on(mesh, FLOW_DEGREE, ORDER, section.joined)
        forms = _forms(section, response)
        moved, driven = _flows(section, pair, _forces(field, heat.slopes(theta)), forms)
        # velocities in 1/m per unit of force: the length makes them plain numbers
        flows = Piecewise.of(pair.velocity, np.concatenate(moved) * section.length, cells)
        through = _through(section, pair, cells)
        if section.plan is None and section.imposed is None:
            table = sample_lines(section, potential, temperature, flows)
            slips = tuple(
                SlipFlow.of(
                    form,
                    Piecewise.of(pair.velocity, np.concatenate(part), cells),
                    table,
                    odd=kind > 0,
                )
                for kind, (form, part) in enumerate(zip(forms, driven, strict=True))
            )
    return ChipPatterns(
        chip=chip,
        thermal_conductivity=thermal_conductivity,
        cell_factor=factor,
        length=section.length,
        height=section.height,
        warmth=warmth,
        response=response,
        slips=slips,
        wall_factors={
            name: section.cells_per_gap * wall_energy(section, field.potentials, name)
            for name in ("floor", "lid")
            if name in section.wall_conductivities
        },
        fold=section.fold,
        rests=section.rests,
        potential=potential,
        heat=temperature,
        flows=flows,
        table=table,
        through=through,
        remarks=section.remarks,
    )


@dataclass(frozen=True, eq=False)
class _Field:
    """φ of each component, and Ê at the quadrature points of `functions`, (component, 2, …)."""

    potentials: tuple[Potential, ...]
    functions: Space
    harmonic: bool

    @property
    def solutions(self) -> Real:
        """Coefficients of φ, (n_component, n_unknown)."""
        return np.stack([potential.solution for potential in self.potentials])

    @cached_property
    def fields(self) -> Real:
        """Ê, (n_component, 2, n_cell, n_point), 1/m."""
        return np.stack([-self.functions.gradients(solution) for solution in self.solutions])

    @cached_property
    def square(self) -> Real:
        """|Ê|², (n_cell, n_point)."""
        return np.asarray(np.einsum("fckq,fckq->kq", self.fields, self.fields))


def _solve_field(section: Section, mesh: Mesh) -> _Field:
    """Solve for the potentials, or take those that are given."""
    given = section.imposed
    if given is not None:
        return _Field(given.potentials, given.functions, given.harmonic)
    functions = space(mesh, FIELD_DEGREE, 2 * FIELD_DEGREE, section.joined)
    potentials = tuple(solve_potential(functions, held) for held in section.potentials)
    return _Field(potentials, space(mesh, FIELD_DEGREE, ORDER, section.joined), True)


def _warmth(field: _Field, heat: LiquidHeat, temperature: Piecewise, theta: Real) -> Warmth:
    """Highest and mean Θ, and how they drive themselves on."""
    parts = field.functions, field.potentials, field.fields
    return Warmth(
        float(temperature.highest(heat.liquid)[0]),
        heat.mean(theta),
        solve_feedback(*parts, heat, temperature, theta),
    )


def _forms(section: Section, response: ElectrodeResponse) -> list[SlipForms]:
    """Forms of slip of each kind; none in plan, or where an electrode stands up from x."""
    if section.plan is not None or response.components[0].trace.weights.size == 0:
        return []
    return [SlipForms.of(response, kind) for kind in range(len(response.components))]


def _forces(field: _Field, slopes: Real) -> list[list[Real]]:
    """Forces of U₁ and U₂ and, of two components, of the odd U₃, from the field and ∇Θ."""
    fields = field.fields
    along = np.einsum("ckq,fckq->fkq", slopes, fields)
    even = [np.einsum("fkq,fckq->ckq", along, fields), field.square * slopes]
    if len(fields) == 1:
        return [even]
    return [even, [along[1] * fields[0] - along[0] * fields[1]]]


def _flows(
    section: Section, pair: FlowSpace, forces: list[list[Real]], forms: list[SlipForms]
) -> tuple[list[Real], list[list[Real]]]:
    """Flows of all forces, and those of the forms of slip of each kind, even and odd."""
    flows, driven = [], []
    for kind, own in enumerate(forces):
        slips: Sequence[Real] = ()
        if forms:
            slips = list(forms[kind].velocities(pair.velocity, section.electrodes, section.mirrors))
        sides, crossed = ({}, section.mirrors) if kind else (section.mirrors, {})
        found = solve_flow(
            pair, own, sides, slips=slips, friction=section.friction, crossed=crossed
        )
        flows += found[: len(own)]
        driven.append(found[len(own) :])
    return flows, driven[: len(forms)]


def _response(section: Section, field: _Field, factor: float) -> ElectrodeResponse:
    """What an interface does: by modes of the electrodes, or of two that are loaded evenly."""
    if section.double_layer_width is not None:
        return ElectrodeResponse.of((even_mode(section.double_layer_width, factor),))
    return ElectrodeResponse.of(
        tuple(
            combined(electrode_modes(potential, held, section.electrodes))
            for potential, held in zip(field.potentials, section.potentials, strict=True)
        )
    )


def _through(section: Section, pair: FlowSpace, cells: Cells) -> Piecewise | None:
    """Flow through a plan: its mean over the depth for a flow rate of 1, 1/m².

    A uniform push stands for the pressure that falls from end to end. The same liquid passes
    every x, so that the mean of the velocity over the piece gives the rate.
    """
    if section.plan is None:
        return None
    ends = section.plan.ends
    beside = {name: axis for name, axis in section.mirrors.items() if name not in ends}
    push = np.zeros((2, *pair.velocity.weights.shape))
    push[0] = 1.0
    (flow,) = solve_flow(pair, [push], beside, crossed=ends, friction=section.friction)
    sums = load(pair.velocity, np.ones_like(push[0]))
    sides = 1 if section.fold.upright is None else 2
    rate = sides * section.height * float(flow[0] @ sums) / float(np.ptp(section.mesh.p[0]))
    return Piecewise.of(pair.velocity, flow / rate, cells)


def _liquid_heat(section: Section, thermal_conductivity: float) -> LiquidHeat:
    """Conduction in the whole section, of heat from the liquid."""
    mesh = section.mesh
    conductivity = np.full(mesh.nelements, thermal_conductivity)
    for name, value in section.wall_conductivities.items():
        conductivity[mesh.subdomains[name]] = value
    functions = space(mesh, HEAT_DEGREE, ORDER, section.joined)
    sink = section.sink(thermal_conductivity)
    found = conduction(functions, conductivity, Cooling(section.outsides), sink)
    return LiquidHeat(found, mesh.subdomains["liquid"], thermal_conductivity)
