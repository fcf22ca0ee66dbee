"""Amounts with a unit: reads "165 kg N" or "448.5 TJ gross" into a number in base units, a dimension and a tag.

Base units: kg, m3, MJ, m2, m, t km, g/MJ-free ratios of these. Exact definitions only (international pound,
inch, thermochemistry as printed for the Btu of the International Table).
"""

from dataclasses import dataclass

from problems import Refused, Unsupported

LB = 0.45359237
FOOT = 0.3048
US_GAL = 231 * 0.0254**3
BTU_MJ = 1055.05585262e-6

SIMPLE = {
    # mass, kg
    "kg": ("mass", 1.0), "g": ("mass", 1e-3), "mg": ("mass", 1e-6), "t": ("mass", 1e3), "kt": ("mass", 1e6), "Mt": ("mass", 1e9),
    "lb": ("mass", LB), "short ton": ("mass", 2000 * LB), "long ton": ("mass", 2240 * LB),
    "bushel maize": ("mass", 56 * LB), "bushel wheat": ("mass", 60 * LB),
    "bushel of maize": ("mass", 56 * LB), "bushel of wheat": ("mass", 60 * LB),
    # volume, m3
    "m3": ("volume", 1.0), "L": ("volume", 1e-3), "l": ("volume", 1e-3), "hL": ("volume", 0.1), "mL": ("volume", 1e-6),
    "US gal": ("volume", US_GAL), "imperial gal": ("volume", 4.54609e-3), "imp gal": ("volume", 4.54609e-3),
    "bbl": ("volume", 42 * US_GAL),
    # energy, MJ
    "J": ("energy", 1e-6), "kJ": ("energy", 1e-3), "MJ": ("energy", 1.0), "GJ": ("energy", 1e3), "TJ": ("energy", 1e6),
    "PJ": ("energy", 1e9), "Wh": ("energy", 3.6e-3), "kWh": ("energy", 3.6), "MWh": ("energy", 3.6e3),
    "GWh": ("energy", 3.6e6), "Btu": ("energy", BTU_MJ), "MMBtu": ("energy", 1e6 * BTU_MJ),
    "therm": ("energy", 1e5 * BTU_MJ),
    # area, m2; length, m
    "m2": ("area", 1.0), "ha": ("area", 1e4), "acre": ("area", 4840 * (3 * FOOT) ** 2),
    "m": ("length", 1.0), "km": ("length", 1e3), "mi": ("length", 5280 * FOOT),
    # transport work, t km
    "t km": ("work", 1.0), "t.km": ("work", 1.0), "kg km": ("work", 1e-3),
}

# Words after a mass that say nothing about the substance.
PLAIN_WORDS = {"product", "seed"}
ENERGY_TAGS = {"gross", "net", "heat", "power"}


@dataclass(frozen=True)
class Measure:
    value: float
    dimension: str
    tag: str = ""


def split_unit(unit):
    """Unit text -> (dimension, factor to base, tag)."""
    text = unit.strip()
    if text in SIMPLE:
        return (*SIMPLE[text], "")
    for name in sorted(SIMPLE, key=len, reverse=True):
        if not text.startswith(name + " "):
            continue
        dimension, factor = SIMPLE[name]
        tag = text[len(name) + 1:].strip()
        if dimension == "mass":
            tag = "" if tag in PLAIN_WORDS else tag.removesuffix(" equivalent")
            return dimension, factor, tag
        if dimension == "energy":
            # "MJ fuel (LHV)", "MJ diesel", "MJ biogas" of the published rows: all are fuel, net.
            return dimension, factor, tag if tag in ENERGY_TAGS else "net"
    raise Unsupported(f"unit {unit!r}")


def measure(value, unit):
    dimension, factor, tag = split_unit(unit)
    return Measure(float(value) * factor, dimension, tag)


def amount(obj, dimension, where, net_energy=False):
    """A `{value, unit}` object as a number in base units of the dimension asked for."""
    if not isinstance(obj, dict):
        raise Refused(where, "an amount with a unit is wanted")
    got = measure(obj["value"], obj["unit"])
    if got.dimension != dimension:
        raise Refused(where, f"{obj['unit']} is no {dimension}")
    if net_energy and got.tag == "gross":
        raise Refused(where, "energy in a model is net")
    return got.value


def plain(model, name, unit, where, default=None):
    """A parameter whose name ends in its unit: a bare number in that unit, or an amount converted into it."""
    raw = model.get(name, default)
    if raw is None or not isinstance(raw, dict):
        return None if raw is None else float(raw)
    got = measure(raw["value"], raw["unit"])
    dimension, factor, _ = split_unit(unit)
    if got.dimension != dimension:
        raise Refused(f"{where}.{name}", f"{raw['unit']} is no {unit}")
    return got.value / factor


def heating_value(obj, where):
    """`{value, unit}` per mass or volume -> (MJ per kg or m3, "mass" or "volume")."""
    top, _, bottom = obj["unit"].partition("/")
    top_dimension, top_factor, _ = split_unit(top)
    dimension, factor, _ = split_unit(bottom)
    if top_dimension != "energy" or dimension not in ("mass", "volume"):
        raise Refused(where, f"{obj['unit']} is no heating value")
    return obj["value"] * top_factor / factor, dimension
