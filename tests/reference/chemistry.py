#!/usr/bin/env python3
"""Confirms the constants and unit factors of the accounting with general-purpose libraries (chemicals, CoolProp, pint).

    chemistry.py            every constant and the unit table below
    chemistry.py --units    also a JSON list on standard input: [{"unit": "lb", "base": "kg", "factor": 0.45359237}, ...]

Each line: what, our figure, the library's, the relative difference. Exit 1 when one is farther off than its tolerance.
"""

import json
import sys

import pint
from chemicals import Hfg, Hfl, search_chemical
from chemicals.elements import mass_fractions, molecular_weight
from CoolProp.CoolProp import PropsSI

ETHANOL, CO2, WATER = "64-17-5", "124-38-9", "7732-18-5"
XYLAN_UNIT = {"C": 5, "H": 8, "O": 4}
STARCH_UNIT = {"C": 6, "H": 10, "O": 5}


def molar(name):
    return search_chemical(name).MW


def combustion(water_method):
    """kJ/mol of C2H5OH(l) + 3 O2 -> 2 CO2 + 3 H2O, from formation heats of one source (CRC)."""
    water = (Hfl if water_method == "liquid" else Hfg)(WATER, "CRC")
    return -(2 * Hfg(CO2, "CRC") + 3 * water - Hfl(ETHANOL, "CRC")) / 1e3


def constants():
    """(what, our figure, the library's, relative tolerance). Ours are those of the design and the published rules."""
    ethanol, co2 = molar("ethanol"), molar("carbon dioxide")
    latent = (PropsSI("H", "T", 298.15, "Q", 1, "Water") - PropsSI("H", "T", 298.15, "Q", 0, "Water")) / 1e6
    yield Check("molar mass of ethanol, g/mol", 46.06844, ethanol, 1e-7)
    yield Check("molar mass of carbon dioxide, g/mol", 44.0095, co2, 1e-7)
    yield Check("molar mass of glucose, g/mol", 180.15588, molar("D-glucose"), 1e-7)
    yield Check("molar mass of sucrose, g/mol", 342.29648, molar("sucrose"), 1e-7)
    # 12.011 and 60.056 come from a rounder table of atomic masses than the library's 12.0107 and 60.05526.
    yield Check("molar mass of carbon, g/mol", 12.011, molar("carbon"), 3e-5)
    yield Check("molar mass of urea, g/mol", 60.056, molar("urea"), 2e-5)
    yield Check("molar mass of nitrogen, g/mol", 28.014, molar("nitrogen"), 3e-5)
    yield Check("higher heat of combustion of ethanol, kJ/mol", 1367.0, combustion("liquid"), 5e-4)
    yield Check("higher heating value of ethanol, MJ/kg", 29.67, combustion("liquid") / ethanol, 5e-4)
    yield Check("lower heating value of ethanol, MJ/kg", 26.81, combustion("vapour") / ethanol, 5e-4)
    yield Check("carbon in ethanol, %", 52.14, 100 * mass_fractions({"C": 2, "H": 6, "O": 1})["C"], 1e-4)
    yield Check("CO2 of the fuel, kg/kg", 1.91061, 2 * co2 / ethanol, 1e-5)
    yield Check("CO2 of fermentation, kg/kg ethanol", 44.0095 / 46.06844, co2 / ethanol, 1e-9)
    yield Check("CO2 of respired hexose, kg/kg", 1.4657, 6 * co2 / molar("D-glucose"), 5e-5)
    yield Check("CO2 per carbon, kg/kg", 44.0095 / 12.011, co2 / molar("carbon"), 3e-5)
    yield Check("CO2 per carbon as the EU formulas print it", 3.664, co2 / molar("carbon"), 2e-4)
    yield Check("ethanol of glucose, kg/kg", 0.51143, 2 * ethanol / molar("D-glucose"), 2e-5)
    yield Check("ethanol of sucrose, kg/kg", 0.53835, 4 * ethanol / molar("sucrose"), 2e-5)
    yield Check("ethanol of starch, kg/kg", 0.56825, 2 * ethanol / molecular_weight(STARCH_UNIT), 2e-5)
    yield Check("ethanol of xylose, kg/kg", 0.51143, 5 / 3 * ethanol / molar("xylose"), 2e-5)
    yield Check("ethanol of xylan, kg/kg", 0.58117, 5 / 3 * ethanol / molecular_weight(XYLAN_UNIT), 2e-5)
    yield Check("latent heat of water at 25 degC, MJ/kg", 2.44, latent, 1e-3)
    yield Check("density of ethanol at 20 degC, kg/m3", 789.24, PropsSI("D", "T", 293.15, "P", 101325, "Ethanol"), 3e-4)


# Our name, base unit, factor, the same in pint's words.
# pint's own acre is the US survey acre and its therm the European one of 1.055 056e8 J; ours is the international
# acre (4840 square yards) and 100 000 Btu of the International Table.
UNITS = [
    ("lb", "kg", 0.45359237, "pound"),
    ("short ton", "kg", 907.18474, "short_ton"),
    ("long ton", "kg", 1016.0469088, "long_ton"),
    ("ha", "m2", 1e4, "hectare"),
    ("acre", "m2", 4046.8564224, "4840 * yard ** 2"),
    ("mi", "m", 1609.344, "mile"),
    ("nmi", "m", 1852.0, "nautical_mile"),
    ("US gal", "m3", 3.785411784e-3, "gallon"),
    ("imperial gal", "m3", 4.54609e-3, "imperial_gallon"),
    ("imp gal", "m3", 4.54609e-3, "imperial_gallon"),
    ("bbl", "m3", 0.158987294928, "oil_barrel"),
    ("hL", "m3", 0.1, "hectoliter"),
    ("Wh", "MJ", 3.6e-3, "watt_hour"),
    ("MWh", "MJ", 3600.0, "megawatt_hour"),
    ("Btu", "MJ", 1.05505585262e-3, "Btu_it"),
    ("MMBtu", "MJ", 1055.05585262, "1e6 * Btu_it"),
    ("therm", "MJ", 105.505585262, "1e5 * Btu_it"),
    ("bushel maize", "kg", 25.40117272, "56 * pound"),
    ("bushel wheat", "kg", 27.2155422, "60 * pound"),
    ("bushel of maize", "kg", 25.40117272, "56 * pound"),
    ("bushel of wheat", "kg", 27.2155422, "60 * pound"),
    ("lb/acre", "kg/ha", 1.1208511561944561, "pound / (4840 * yard ** 2)"),
]
UNIT_TOLERANCE = 1e-12


class Check:
    def __init__(self, what, ours, library, tolerance):
        self.what, self.ours, self.library, self.tolerance = what, ours, library, tolerance
        self.off = abs(ours - library) / abs(library)
        self.good = self.off <= tolerance

    def __str__(self):
        mark = "ok    " if self.good else "DIFFER"
        return f"{mark} {self.what}: {self.ours:.10g}, library {self.library:.10g}, off {self.off:.1e}"


def unit_checks(rows, registry):
    words = {name: expression for name, _, _, expression in UNITS}
    for name, base, factor in rows:
        text = words.get(name, name.replace(" ", "_"))
        try:
            got = registry.parse_expression(text)
            quantity = got if hasattr(got, "to") else registry.Quantity(got)
            library = quantity.to(base.replace("m2", "m**2").replace("m3", "m**3")).magnitude
        except (pint.errors.PintError, AttributeError) as problem:
            print(f"skip   {name}: the library has no such unit ({type(problem).__name__})")
            continue
        yield Check(f"1 {name} in {base}", factor, library, UNIT_TOLERANCE)


def main():
    registry = pint.UnitRegistry()
    checks = list(constants())
    checks += unit_checks([row[:3] for row in UNITS], registry)
    if "--units" in sys.argv[1:]:
        checks += unit_checks([(r["unit"], r["base"], r["factor"]) for r in json.load(sys.stdin)], registry)
    for check in checks:
        print(check)
    failed = sum(not check.good for check in checks)
    print(f"{len(checks) - failed} passed, {failed} failed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
