"""The liquid of a design in words and as plain data: what it is, and what to mix for it."""

from typing import Any

from scipy.constants import epsilon_0

from model.liquid.liquid import Liquid
from model.liquid.mixed import Mixed, Portion, mixed
from model.quantity import format_quantity, format_si

_ROLES = {
    "salt": "to the conductivity",
    "sugar": "to the osmolality",
    "fixed": "fixed",
    "ph": "to the pH",
}


def portion_cells(portion: Portion) -> tuple[str, ...]:
    """Name, amount, mass to weigh, stock to pour instead, and why; all per litre.

    >>> portion_cells(Portion("HEPES", "fixed", 10.0))
    ('HEPES, free acid', '10 mmol', '2.383 g', '10 mL of 1 M', 'fixed')
    """
    found, share = portion.made_of, portion.stock_share
    if found.kind == "saline":
        amount = f"{format_quantity(1e-3 * portion.concentration, '', 4)}×"
    else:
        amount = format_quantity(portion.concentration, "mmol/L", 4).removesuffix("/L")
    poured = "" if share is None or found.stock is None else _millilitres(share, found.stock.label)
    weighed = "" if found.weighed.lower() == found.name.lower() else f", {found.weighed}"
    return (
        f"{found.name}{weighed}",
        amount,
        f"{format_quantity(portion.mass, 'g/L', 4).removesuffix('/L')}",
        poured,
        _ROLES[portion.role],
    )


def _millilitres(share: float, label: str) -> str:
    return f"{format_quantity(1e3 * share, '', 4)} mL of {label}"


def mixed_words(found: Mixed) -> str:
    """What the mixed liquid is, in one line."""
    ph = "" if found.ph is None else f", pH {format_quantity(found.ph, '', 4)}"
    return (
        f"{format_quantity(found.osmolality, 'mOsm/kg', 3)}{ph}, "
        f"{format_si(found.conductivity_25, 'S/m')} at 25 °C; "
        f"{format_quantity(found.viscosity, 'mPa s', 3)}, "
        f"{format_quantity(found.density, 'kg/m^3', 4)}, relative permittivity "
        f"{format_quantity(found.relative_permittivity, '', 3)}, Debye length "
        f"{format_quantity(found.debye_length, 'nm', 3)} at "
        f"{format_quantity(found.temperature, 'degC', 3)}"
    )


def liquid_object(liquid: Liquid) -> dict[str, Any]:
    """The liquid as plain data: properties at the stage temperature, and what goes into a litre."""
    state, ions, found = liquid.state, liquid.ions, mixed(liquid)
    data: dict[str, Any] = {
        "temperature_C": liquid.temperature - 273.15,
        "conductivity_mS_m": liquid.conductivity * 1e3,
        "conductivity_rise_percent_per_K": state.conductivity_slope * 1e2,
        "viscosity_mPa_s": state.viscosity * 1e3,
        "density_kg_m3": state.density,
        "relative_permittivity": state.permittivity / epsilon_0,
        "ionic_strength_mmol_L": float(ions.ionic_strength),
        "debye_length_nm": float(ions.debye_length(state.permittivity)) * 1e9,
    }
    if found is None:
        return {**data, "recipe": None, "recipe_reason": "the design has none"}
    ph = {"pH": found.ph} if found.ph is not None else {"pH": None, "pH_reason": "no buffer in it"}
    return {
        **data,
        "recipe": {
            "conductivity_25C_mS_m": found.conductivity_25 * 1e3,
            "osmolality_mOsm_kg": found.osmolality * 1e3,
            **ph,
            "per_litre": [_portion_object(portion) for portion in found.portions],
            "notes": list(found.notes),
            "caution": found.caution,
        },
    }


def _portion_object(portion: Portion) -> dict[str, Any]:
    found, share = portion.made_of, portion.stock_share
    data = {
        "solute": portion.solute,
        "weighed": found.weighed,
        "role": portion.role,
        "mmol": portion.concentration,
        "g": portion.mass,
    }
    if share is None or found.stock is None:
        return {**data, "stock_mL": None, "stock_mL_reason": "no usual stock solution"}
    return {**data, "stock": found.stock.label, "stock_mL": share * 1e3}
