#!/usr/bin/env python3
"""Checks the recomputation itself on published and hand-worked figures, so that it is not wrong in silence.

Each case names its source. Prints what differs; one closing line; exit 1 when any does.
"""

import sys

import alcohol
import models
import soil
from flows import Flow, ratio
from gases import NAMES
from measures import measure

N2O = NAMES.index("n2o")
STAGE = {"output": {"material": "wheat", "amount": 1, "unit": "t"}}
SITE = {"soil_organic_carbon": "1_to_3_percent", "soil_ph_class": "5.5_to_7.3", "soil_texture": "medium",
        "climate_class": "temperate_oceanic"}


def n2o(**model):
    return soil.soil_n2o({"crop": "maize", "area_ha": 1, **model}, STAGE, "case")[N2O]


def residue(method):
    model = {"yield_t": 10, "moisture_percent": 13}
    return soil.residue_nitrogen(model, STAGE, "maize", method, 1.0, 0.0, 0.0, "case")


def lime(**model):
    return soil.lime({"method": "eu-2022-996", "soil_ph": 5.9, "caco3_equivalent_kg": 100, **model}, "case")[0]


class FlatFuel:
    """Stands in for the tables: 20 g of unsplit CO2e per MJ of any fuel."""

    def factor(self, ref, where):
        from book import Factor
        from gases import gases
        return Factor(gases(co2e_unsplit=0.02), "MJ")


def chp(**used):
    gj = {"unit": "MJ"}
    model = {"fuel": "any", "fuel_used": {"value": 1, **gj}, "heat_made": {"value": 0.5, **gj}, "power_made": {"value": 0.3, **gj},
             "heat_temperature_c": 120, "building_heat": True, **{k: {"value": v, **gj} for k, v in used.items()}}
    return models.chp(model, FlatFuel(), "case").vector.sum() * 1e3


def wheat(**entry):
    return Flow({"unit": "t", **entry}, "wheat", "case")


CASES = [
    # (what, computed, expected, relative tolerance, source)
    ("EF1ij at 150 kg N/ha", soil.site_factor(SITE, "wheat", 150.0, "case"), 0.00711071, 1e-5, "IR (EU) 2022/996 Annex VII 1.5.2, worked"),
    ("N2O of 100 kg N, 2006", n2o(method="ipcc-2006", synthetic_n_kg=100, residue_n_kg=0), 2.08214, 1e-5, "Eq. 11.1, 11.9, 11.10, worked"),
    ("N2O of 100 kg N, 2019 aggregated", n2o(method="ipcc-2019", synthetic_n_kg=100, residue_n_kg=0), 2.15914, 1e-5, "2019 Refinement, worked"),
    ("N2O of 100 kg N, 2019 wet", n2o(method="ipcc-2019", climate="wet", synthetic_n_kg=100, residue_n_kg=0), 3.17114, 1e-5, "2019 Refinement, worked"),
    ("N2O of 100 kg N, 2019 dry", n2o(method="ipcc-2019", climate="dry", synthetic_n_kg=100, residue_n_kg=0), 0.872143, 1e-5, "2019 Refinement, worked"),
    ("N2O of 100 kg N as urea, 2019 wet",
     n2o(method="ipcc-2019", climate="wet", synthetic_n_kg=100, synthetic_n_by_type_kg={"urea": 100}, residue_n_kg=0),
     2.074 * 44 / 28, 1e-9, "2019 Refinement, worked"),
    ("maize residue N, 2006", residue("ipcc-2006"), 85.5633, 1e-5, "Eq. 11.7A with Table 11.2, worked"),
    ("maize residue N, 2019", residue("ipcc-2019"), 8700 * 0.006 + 17400 * 0.22 * 0.007, 1e-12, "2019 Refinement Table 11.1A, worked"),
    ("lime below its acidity", lime(nitrate_n_kg=60), 48.36, 1e-9, "IR (EU) 2022/996 Annex VII 1.4.2(3), worked"),
    ("lime, recommended", lime(nitrate_n_kg=60, lime_is="recommended"), 92.36, 1e-9, "same point: no subtraction"),
    ("limestone, 1 t", soil.lime({"method": "ipcc-2006", "limestone_kg": 1000}, "case")[0], 440.0, 1e-9, "Eq. 11.12"),
    ("dolomite, 1 t", soil.lime({"method": "ipcc-2006", "dolomite_kg": 1000}, "case")[0], 476.667, 1e-5, "Eq. 11.12"),
    ("urea of 100 kg N", soil.urea({"urea_n_kg": 100}, "case")[0], 157.211, 1e-5, "Eq. 11.13, worked"),
    ("CHP burden per MJ power", chp(heat_used=0.0) / 0.3, 41.9024, 1e-5, "Directive (EU) 2018/2001 Annex V C 1(b), worked"),
    ("CHP burden per MJ heat", chp(power_used=0.0) / 0.5, 14.8586, 1e-5, "same point"),
    ("CHP, all taken", chp(), 20.0, 1e-12, "the parts make the whole"),
    ("pure ethanol at 20 degC", alcohol.density(1.0, 20.0), 789.2391, 1e-6, "OIML R 22"),
    ("pure ethanol at 15 degC", alcohol.density(1.0, 15.0), 793.5057, 1e-6, "OIML R 22"),
    ("12 % vol in mass %", 100 * alcohol.mass_fraction(0.12), 9.6410, 1e-5, "OIML R 22 tables"),
    ("96 % vol in mass %", 100 * alcohol.mass_fraction(0.96), 93.8384, 1e-6, "OIML R 22 tables"),
    ("96 % vol at 20 degC", alcohol.density(alcohol.mass_fraction(0.96), 20.0), 807.42, 1e-5, "OIML R 22 tables"),
    ("dry matching", ratio(wheat(amount=1, moisture_percent=13.0), wheat(amount=1, moisture_percent=14.0)), 0.87 / 0.86, 1e-12, "Annex V C 2"),
    ("wet where one moisture is missing", ratio(wheat(amount=1), wheat(amount=1, moisture_percent=14.0)), 1.0, 1e-12, "the intake's rule"),
    ("maize bushel", measure(1, "bushel of maize").value, 25.40117272, 1e-9, "56 lb"),
]


def main():
    failed = 0
    for what, got, want, tolerance, source in CASES:
        if not abs(got - want) <= tolerance * abs(want):
            failed += 1
            print(f"{what}: {got}, expected {want} ({source})")
    print(f"{len(CASES) - failed} passed, {failed} failed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
