"""Conduction along a charged surface by the ions of its diffuse layer."""

import numpy as np
from scipy.constants import Avogadro, Boltzmann, elementary_charge

from model.arrays import Real
from model.liquid.electrolyte import Electrolyte

# Places and weights of Gauss and Legendre on 0 to 1; 48 give ten digits up to 200 mV.
_PLACES, _WEIGHTS = (0.5 * part for part in np.polynomial.legendre.leggauss(48))
_PLACES = _PLACES + 0.5


def diffuse_conductance(
    zeta: float, electrolyte: Electrolyte, permittivity: float, viscosity: float
) -> Real:
    """Surface conductance of a flat diffuse layer with electro-osmosis, S, the ions' shape.

    K = ∫₀^ζ [Σ zᵢ²e²Dᵢ/(kT)·nᵢ(e^(−zᵢeψ/kT) − 1)/|ψ′| + (ε²/η)|ψ′|] dψ, the first term the ions
    that the layer has beyond the liquid, the second the charge that the liquid carries as it slips
    along. ψ′² = (2kT/ε) Σ nᵢ(e^(−zᵢeψ/kT) − 1), Gouy and Chapman's layer for any mixture of ions.
    For a salt of two equal ions it is Bikerman's 4F²cz²D(1 + 3m/z²)/(RTκ)·[cosh(zFζ/2RT) − 1],
    m = (RT/F)²·2ε/(3ηD).

    Source: J. J. Bikerman 1940 Trans. Faraday Soc. 36:154, as quoted by M. P. Hughes and N. G.
    Green 2002 J. Colloid Interface Sci. 250:266.

    Parameters
    ----------
    zeta
        Potential at the plane of shear, V; only up to some 200 mV a diffuse layer is Boltzmann's.
    electrolyte
        Ions of the liquid.
    permittivity, viscosity
        Of the liquid, F/m and Pa s.
    """
    shape = electrolyte.concentrations.shape[1:]
    if zeta == 0.0:
        return np.zeros(shape)
    energy = Boltzmann * electrolyte.temperature
    drawn = np.expm1(
        np.multiply.outer(-electrolyte.valences * (elementary_charge / energy), zeta * _PLACES)
    )
    ions = np.moveaxis(Avogadro * electrolyte.concentrations, 0, -1)
    slope = np.sqrt(2.0 * energy / permittivity * (ions @ drawn))
    mobile = (electrolyte.valences * elementary_charge) ** 2 * electrolyte.diffusivities / energy
    carried = (ions * mobile) @ drawn / slope + permittivity**2 / viscosity * slope
    return np.asarray(abs(zeta) * (carried @ _WEIGHTS))
