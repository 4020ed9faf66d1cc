"""Chips solved again from their own lengths by NGSolve, a general finite-element library.

Nothing of ``model/fields`` is used: whole periods instead of pieces between mirror planes, graded
triangles instead of layers of quadrilaterals, walls at their full thickness, another assembly and
other solvers. What is solved, and how the patterns are scaled, stands in
:class:`model.fields.patterns.ChipPatterns`. Source of the library: J. Schöberl, *C++11
implementation of finite elements in NGSolve*, ASC report 30/2014, TU Wien.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property, reduce
from operator import add

import ngsolve as ng
import numpy as np
from netgen.geom2d import SplineGeometry

#: Unit of length of the meshes, m.
UNIT = 1e-6
#: Share by which the liquid yields to pressure, whose constant would else be left open; the flow
#: changes by about as much.
YIELD = 1e-9
#: Sides of a plan where the flow through the channel enters and leaves.
ENDS = ("inlet", "outlet")
Place = tuple[float, float]


@dataclass(frozen=True)
class Side:
    """A stretch of boundary along `path`, straight from its first place to its last.

    Three places make the arc of a conic that leaves and arrives along the lines to the middle one:
    of a circle, if both are as long. `left` and `right` are the materials seen when walking along
    it, empty outside. `twin` is the number of the side that this one repeats.
    """

    path: tuple[Place, ...]
    name: str
    left: str = ""
    right: str = ""
    twin: int | None = None


@dataclass(frozen=True)
class Problem:
    """A whole period of a chip, or all of it in plan, lengths in µm.

    Parameters
    ----------
    sides
        All boundaries.
    singular
        Places where metal ends, and the shortest length beside each.
    near
        Places where the boundary bends, and the longest cell there.
    longest
        Longest cell of each material.
    potentials
        Phasors of the electrodes, V per volt between opposite phases.
    conductors
        Thermal conductivity of each material over that of the liquid.
    outsides
        Heat-transfer coefficient of each side over the liquid's thermal conductivity, 1/µm; None
        holds it at 0.
    length
        What scales the flow patterns: the pitch.
    shares
        How many gaps or pitches of the chip's cell factor it holds.
    start, period
        Where the piece begins along x, and its length; None if it does not repeat.
    sink, friction
        In plan, heat that leaves through floor and lid over the liquid's thermal conductivity, and
        12/h² for the drag of both, 1/µm².
    depth
        In plan, of the liquid.
    """

    sides: tuple[Side, ...]
    singular: Mapping[Place, float]
    longest: Mapping[str, float]
    potentials: Mapping[str, complex]
    conductors: Mapping[str, float]
    outsides: Mapping[str, float | None]
    length: float
    shares: int
    start: float = 0.0
    period: float | None = None
    sink: float = 0.0
    friction: float = 0.0
    depth: float | None = None
    near: Mapping[Place, float] = field(default_factory=dict)


@dataclass(frozen=True)
class Fineness:
    """Layers of cells toward each singular place, and degree of φ and Θ; of flows it is less."""

    layers: int
    degree: int


COARSE = Fineness(5, 7)
FINE = Fineness(11, 8)
#: Cell at a singular place before the layers, over the shortest length beside it; size of one
#: layer over that of the layer around it; growth of the cells away from there.
CELL, SHRINKING, GRADING = 0.04, 0.2, 0.25


def mesh_of(problem: Problem, fineness: Fineness) -> ng.Mesh:
    """Triangles, curved where the boundary is, in layers about the singular places."""
    geometry = SplineGeometry()
    materials = list(problem.longest)
    numbers = {name: number for number, name in enumerate(("", *materials))}
    points: dict[Place, int] = {}

    def point(place: Place) -> int:
        if place not in points:
            marks = {}
            if place in problem.singular:
                marks = {"maxh": CELL * problem.singular[place], "hpref": 1}
            elif place in problem.near:
                marks = {"maxh": problem.near[place]}
            points[place] = geometry.AppendPoint(*place, **marks)
        return points[place]

    for side in problem.sides:
        kind = {2: "line", 3: "spline3"}[len(side.path)]
        twin = {} if side.twin is None else {"copy": side.twin}
        geometry.Append(
            [kind, *(point(place) for place in side.path)],
            bc=side.name,
            leftdomain=numbers[side.left],
            rightdomain=numbers[side.right],
            **twin,
        )
    for name in materials:
        geometry.SetMaterial(numbers[name], name)
        geometry.SetDomainMaxH(numbers[name], problem.longest[name])
    mesh = ng.Mesh(geometry.GenerateMesh(maxh=max(problem.longest.values()), grading=GRADING))
    mesh.RefineHP(fineness.layers, SHRINKING)
    if any(len(side.path) == 3 for side in problem.sides):
        mesh.Curve(fineness.degree)
    return mesh


class Solution:
    """The three solves of a problem; places in m, patterns named as those of `ChipPatterns`."""

    def __init__(self, problem: Problem, fineness: Fineness) -> None:
        self.problem, self.degree = problem, fineness.degree
        self.mesh = mesh_of(problem, fineness)
        phasors = problem.potentials
        components = [{name: phasor.real for name, phasor in phasors.items()}]
        if any(phasor.imag for phasor in phasors.values()):
            components.append({name: phasor.imag for name, phasor in phasors.items()})
        self._potentials = [self._solve_potential(levels) for levels in components]
        fields = [-ng.grad(potential) for potential in self._potentials]
        self._square = reduce(add, [one * one for one in fields])
        self._heat = self._solve_heat(self._square)
        rise = ng.grad(self._heat)
        forces = [reduce(add, [(rise * one) * one for one in fields]), self._square * rise]
        if len(fields) == 2:
            forces.append((rise * fields[1]) * fields[0] - (rise * fields[0]) * fields[1])
        self._flows = self._solve_flows(forces, self._walls)

    @property
    def components(self) -> int:
        """Components of the drive: one, or two if its phases are not all opposite."""
        return len(self._potentials)

    @property
    def cell_factor(self) -> float:
        """∫|Ê|² of one gap or pitch."""
        return ng.Integrate(self._square, self.mesh, order=2 * self.degree) / self.problem.shares

    def electric_field(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """Ê, (2, …), 1/m; complex of two components."""
        parts = [-self._at(ng.grad(part), x, y) / UNIT for part in self._potentials]
        return parts[0] if len(parts) == 1 else parts[0] + 1j * parts[1]

    def gradient_e2(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """∇|Ê|² = 2 Re (Ê*·∂ᵢÊ), (2, …), 1/m³."""
        here, rise = self.electric_field(x, y), self._rise(x, y)
        return 2 * np.einsum("i...,ij...->j...", here.conj(), rise).real

    def travelling(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """2(Ê₀·∂ᵢÊ₁ − Ê₁·∂ᵢÊ₀) = 2 Im (Ê*·∂ᵢÊ), (2, …), 1/m³."""
        here, rise = self.electric_field(x, y), self._rise(x, y)
        return 2 * np.einsum("i...,ij...->j...", here.conj(), rise).imag

    def temperature(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """Θ, the shape of the places."""
        return self._at(self._heat, x, y)[0]

    def electrothermal(self, x: np.ndarray, y: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """U₁ and U₂, each (2, …)."""
        first, second = (self._at(flow, x, y) * self.problem.length for flow in self._flows[:2])
        return first, second

    def electrothermal_travelling(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """U₃, (2, …)."""
        return self._at(self._flows[2], x, y) * self.problem.length

    def flow_through(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """Mean velocity over the depth in plan for a flow rate of 1, (2, …), 1/m²."""
        return self._at(self._through, x, y) / UNIT**2

    @cached_property
    def _through(self) -> ng.CoefficientFunction:
        """Pushed by a pressure that falls evenly, straight across both ends, 1/µm²."""
        beside = "|".join(set(self._walls.split("|")) - set(ENDS))
        push = ng.CoefficientFunction((1.0, 0.0))
        (flow,) = self._solve_flows([push], beside, across="|".join(ENDS))
        rate = ng.Integrate(flow[0] * ng.ds(ENDS[0]), self.mesh) * self.problem.depth
        return flow / rate

    def _rise(self, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """∂Êᵢ/∂xⱼ, (2, 2, …), 1/m²."""
        parts = [-self._at(part.Operator("hesse"), x, y) / UNIT**2 for part in self._potentials]
        whole = parts[0] if len(parts) == 1 else parts[0] + 1j * parts[1]
        return whole.reshape(2, 2, *np.shape(x))

    def _at(self, function: ng.CoefficientFunction, x: np.ndarray, y: np.ndarray) -> np.ndarray:
        """Values at places of one shape, components first."""
        start, period = self.problem.start, self.problem.period
        place = np.ravel(x) / UNIT
        if period is not None:
            place = start + (place - start) % period
        values = np.array(function(self.mesh(place, np.ravel(y) / UNIT)))
        return values.reshape(np.size(x), -1).T.reshape(-1, *np.shape(x))

    def _solve_potential(self, levels: Mapping[str, float]) -> ng.GridFunction:
        """∇²φ = 0 in the liquid, φ held on the electrodes."""
        metal = "|".join(levels)
        space = self._joined(
            ng.H1(self.mesh, order=self.degree, definedon="liquid", dirichlet=metal)
        )
        held = ng.GridFunction(space)
        held.Set(self.mesh.BoundaryCF(dict(levels)), definedon=self.mesh.Boundaries(metal))
        u, v = space.TnT()
        form = ng.BilinearForm(ng.grad(u) * ng.grad(v) * ng.dx("liquid"), condense=True)
        return _solved(form, [ng.LinearForm(space)], held)[0]

    def _solve_heat(self, density: ng.CoefficientFunction) -> ng.GridFunction:
        """−∇·(k/k_liquid·∇Θ) = |Ê|² in the liquid, films outside."""
        outsides = self.problem.outsides
        held = "|".join(name for name, film in outsides.items() if film is None)
        space = self._joined(ng.H1(self.mesh, order=self.degree, dirichlet=held))
        u, v = space.TnT()
        conductor = self.mesh.MaterialCF(dict(self.problem.conductors))
        form = ng.BilinearForm(conductor * ng.grad(u) * ng.grad(v) * ng.dx, condense=True)
        form += self.problem.sink * u * v * ng.dx
        for name, film in outsides.items():
            if film:
                form += film * u * v * ng.ds(name)
        load = ng.LinearForm(density * v * ng.dx("liquid", bonus_intorder=self.degree))
        return _solved(form, [load])[0]

    def _solve_flows(
        self, forces: list[ng.CoefficientFunction], walls: str, across: str = ""
    ) -> list[ng.GridFunction]:
        """−∇²w + g·w + ∇p = f, ∇·w = 0; Taylor–Hood elements.

        At rest on `walls`; straight across the sides `across`, which stand along y, where p = 0.
        """
        degree, where = self.degree - 1, {"definedon": "liquid"}
        held = {"dirichlet": walls}
        if across:
            held = {"dirichletx": walls, "dirichlety": f"{walls}|{across}"}
        velocity = ng.VectorH1(self.mesh, order=degree, **held, **where)
        pressure = ng.H1(self.mesh, order=degree - 1, **where)
        space = self._joined(velocity) * self._joined(pressure)
        (u, p), (v, q) = space.TnT()
        viscous = ng.InnerProduct(ng.Grad(u), ng.Grad(v)) + self.problem.friction * u * v
        sources = ng.div(u) * q + ng.div(v) * p + YIELD * p * q
        form = ng.BilinearForm((viscous - sources) * ng.dx("liquid"), condense=True)
        loads = [
            ng.LinearForm(force * v * ng.dx("liquid", bonus_intorder=2 * degree))
            for force in forces
        ]
        return [found.components[0] for found in _solved(form, loads)]

    def _joined(self, space: ng.FESpace) -> ng.FESpace:
        """The space with sides that repeat one another made one."""
        return space if self.problem.period is None else ng.Periodic(space)

    @property
    def _walls(self) -> str:
        """Sides of the liquid but for those that repeat one another."""
        sides = self.problem.sides
        repeating = {side.twin for side in sides}
        return "|".join(
            {
                side.name
                for number, side in enumerate(sides)
                if "liquid" in (side.left, side.right)
                and side.twin is None
                and number not in repeating
            }
        )


def _solved(
    form: ng.BilinearForm,
    loads: list[ng.LinearForm],
    held: ng.GridFunction | None = None,
) -> list[ng.GridFunction]:
    """Solution for each load, with the boundary values that `held` has."""
    form.Assemble()
    space = form.space
    inverse = form.mat.Inverse(space.FreeDofs(coupling=True), inverse="sparsecholesky")
    solutions = []
    for load in loads:
        solution = ng.GridFunction(space)
        if held is not None:
            solution.vec.data = held.vec
        rest = load.Assemble().vec
        rest.data += form.harmonic_extension_trans * rest
        rest.data -= form.mat * solution.vec
        solution.vec.data += inverse * rest
        solution.vec.data += form.harmonic_extension * solution.vec
        solution.vec.data += form.inner_solve * load.vec
        solutions.append(solution)
    return solutions
