"""Coated spheroids in a uniform field, solved by NGSolve, a general finite-element library.

Nothing of ``model`` is used: the potential is found on a mesh of curved triangles in the half
plane ρ ≥ 0, as φ(ρ, z) for a field along the axis and φ(ρ, z)·cos ϕ across it. On a far sphere it
is that of the field and a dipole, φ = −E₀r cos θ + p cos θ/r², so that ∂φ/∂r + 2φ/r = −3E₀ cos θ;
the next multipole that a spheroid has is some (size/distance)⁷ of it. Source of the library: J.
Schöberl, *C++11 implementation of finite elements in NGSolve*, ASC report 30/2014, TU Wien.
"""

from dataclasses import dataclass

import ngsolve as ng
import numpy as np
from netgen.occ import Axes, Glue, OCCGeometry, WorkPlane, X, Y, Z

#: Radius of the far sphere over the longest semi-axis, and the order of the elements.
FAR, ORDER = 8.0, 10


@dataclass(frozen=True)
class Spheroid:
    """Semi-axes along the axis of revolution and across it, of outline and core."""

    outer: tuple[float, float]
    core: tuple[float, float]

    def solved(self, permittivities, across=False):
        """Polarisation factor, and the voltage across the coat at the pole over field and length.

        `permittivities` complex: core, coat, medium. The factor is p over E₀ times the product of
        the semi-axes.
        """
        radius = FAR * max(self.outer)
        mesh = self._mesh(radius)
        rho, z = ng.x, ng.y
        space = ng.H1(mesh, order=ORDER, complex=True, dirichlet="axis" if across else "")
        u, v = space.TnT()
        core, coat, medium = (complex(one / permittivities[2]) for one in permittivities)
        value = mesh.MaterialCF({"core": core, "coat": coat, "medium": medium})
        along = rho if across else z
        form = ng.BilinearForm(space, symmetric=True)
        form += value * ng.grad(u) * ng.grad(v) * rho * ng.dx
        if across:
            form += value * u * v / rho * ng.dx
        form += 2.0 / radius * u * v * rho * ng.ds("far")
        load = ng.LinearForm(space)
        load += -3.0 / radius * along * v * rho * ng.ds("far")
        form.Assemble()
        load.Assemble()
        potential = ng.GridFunction(space)
        inverse = form.mat.Inverse(space.FreeDofs(), inverse="umfpack")
        potential.vec.data = inverse * load.vec
        share = along / radius
        far = mesh.Boundaries("far")
        above, below = (
            ng.Integrate(part * share * rho, mesh, ng.BND, order=2 * ORDER, definedon=far)
            for part in (potential, share)
        )
        dipole = radius**2 * (above / below + radius)
        pole = 1 if across else 0
        voltage = self._at(potential, mesh, self.outer[pole], across) - self._at(
            potential, mesh, self.core[pole], across
        )
        return dipole / (self.outer[0] * self.outer[1] ** 2), voltage

    @staticmethod
    def _at(potential, mesh, distance, across):
        """Potential at a pole, from within by a hair."""
        inner = distance * (1.0 - 1e-12)
        return complex(potential(mesh(inner, 0.0)) if across else potential(mesh(0.0, inner)))

    def _mesh(self, radius):
        far, outer, core = (_half(*axes) for axes in ((radius, radius), self.outer, self.core))
        far.edges.name = "far"
        parts = {"medium": far - outer, "coat": outer - core, "core": core}
        for name, part in parts.items():
            part.faces.name = name
        whole = Glue(list(parts.values()))
        for edge in whole.edges:
            if abs(edge.center.x) < 1e-9:
                edge.name = "axis"
        shortest = min(np.subtract(self.outer, self.core))
        mesh = ng.Mesh(
            OCCGeometry(whole, dim=2).GenerateMesh(
                maxh=radius / 3.0, grading=0.4, segmentsperedge=4, minh=0.1 * shortest
            )
        )
        mesh.Curve(ORDER)
        return mesh


def _half(along, across):
    """Half plane of one spheroid, ρ along X and the axis along Y."""
    wide = across >= along
    plane = WorkPlane(Axes((0, 0, 0), n=Z, h=X if wide else Y))
    longest = 3.0 * max(along, across)
    right = WorkPlane(Axes((0, -longest, 0), n=Z, h=X)).Rectangle(longest, 2 * longest).Face()
    return plane.Ellipse(max(along, across), min(along, across)).Face() * right
