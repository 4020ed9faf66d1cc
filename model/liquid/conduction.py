"""Conductivity of ions that are dissolved together."""

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import Boltzmann, elementary_charge, gas_constant

from model.arrays import Real
from model.liquid.species import FARADAY


def conductivity(
    charges: Real,
    diffusivities: Real,
    sizes: Real,
    concentrations: Real,
    temperature: float,
    permittivity: ArrayLike,
    viscosity: ArrayLike,
) -> Real:
    """σ = (F²/RT) Σ z²cD − (relaxation + electrophoresis)/(1 + κa), S/m, of the shape behind c.

    The limiting law of any mixture: each ion is held back by its own atmosphere, which lags behind
    (relaxation), and by the liquid that the atmosphere drags along, κ³εkT/(6πη) in all. The lag of
    the field at ion i is (e²κ/12πεkT)·[(1 + √A)⁻¹ s]ᵢ with A_ij = δ_ij Σ_k μ_kD_k/(D_i + D_k) −
    (z_iD_i/z_j)·μ_j/(D_i + D_j), s_i = z_i Σ_j μ_j(z_jD_j − z_iD_i)/(D_i + D_j), and μ the share of
    each ion in the ionic strength; A is used in its symmetric form. Ions of a finite size a damp
    both by 1 + κa; a is the mean over μ.

    Parameters
    ----------
    charges
        Charge numbers, none of them 0, (n_ion,).
    diffusivities
        At infinite dilution, m²/s, (n_ion,) or (n_ion, …).
    sizes
        Distances of closest approach, m, (n_ion,).
    concentrations
        mol/m³, (n_ion, …), neutral as a whole.
    temperature
        K.
    permittivity, viscosity
        Of what the ions are dissolved in, F/m and Pa s, () or of the shape behind the ions.

    Notes
    -----
    With a = 0.4 nm within 0.4 % of the handbook's potassium and sodium chloride up to 0.1 mol/L and
    3 % at 1 mol/L; ions that pair, as those of magnesium sulfate, conduct less. Carbon dioxide that
    water takes up from the air adds some 0.1 mS/m (1 µS/cm), which is not counted.

    Source: L. Onsager and R. M. Fuoss 1932 *J. Phys. Chem.* 36:2689 for the limiting law, derived
    anew here; R. A. Robinson and R. H. Stokes 1954 *J. Am. Chem. Soc.* 76:1991 for the size.
    """
    ions = np.moveaxis(np.asarray(concentrations, dtype=float), 0, -1)
    each = np.moveaxis(np.asarray(diffusivities, dtype=float), 0, -1)
    strength = charges**2 * ions
    total = np.maximum(strength.sum(axis=-1), np.finfo(float).tiny)
    share = strength / total[..., None]
    thermal = np.asarray(permittivity) * Boltzmann * temperature  # εkT
    inverse = np.sqrt(total * FARADAY * elementary_charge / thermal)  # κ
    scale = FARADAY**2 / (gas_constant * temperature)
    free = scale * (strength * each).sum(axis=-1)
    lag = elementary_charge**2 * inverse / (12.0 * np.pi * thermal)
    relaxation = -scale * total * lag * _lagging(charges, each, share)
    dragged = inverse**3 * thermal / (6.0 * np.pi * np.asarray(viscosity))
    return np.asarray(free - (relaxation + dragged) / (1.0 + inverse * (share @ sizes)))


def _lagging(charges: Real, each: Real, share: Real) -> Real:
    """Σ μ_i D_i [(1 + √A)⁻¹ s]ᵢ, negative, m²/s; ions last."""
    pairs = each[..., :, None] + each[..., None, :]
    weights = share[..., None, :] / pairs
    driven = charges * each
    pull = (weights * driven[..., None, :]).sum(axis=-1) - driven * weights.sum(axis=-1)
    root = np.sqrt(share * each)
    matrix = -root[..., :, None] * root[..., None, :] / pairs
    index = np.arange(len(charges))
    matrix[..., index, index] += (weights * each[..., None, :]).sum(axis=-1)
    values, vectors = np.linalg.eigh(matrix)
    modes = np.swapaxes(vectors, -1, -2)
    left = (modes @ (root * driven)[..., None])[..., 0]
    right = (modes @ (root * pull / each)[..., None])[..., 0]
    # every eigenvalue lies between 0 and 1; rounding may leave it just outside
    found = left * right / (1.0 + np.sqrt(np.clip(values, 0.0, 1.0)))
    return np.asarray(found.sum(axis=-1))
