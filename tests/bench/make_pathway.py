#!/usr/bin/env python3
"""Writes an invented pathway of N inputs over six stages to standard output: make_pathway.py N [--seed S].

Plain factors only, so that a short numpy program can do the same sums. Amounts shrink as N grows: the result stays near
that of a plausible grain ethanol whatever N is. The same N and seed give the same bytes.
"""

import argparse
import json
import random
import sys

ELEC = "eu-2022-996/elec_eu27_2019_mv"
GAS = ["eu-2022-996/fuel_natural_gas", "eu-2022-996/comb_ng_boiler"]
DIESEL = ["eu-2022-996/fuel_diesel", "eu-2022-996/mach_diesel_agriculture"]
PROTECTION = {"gases": {"co2e_unsplit": 10.4}, "per": "kg", "citation": "invented for a measurement"}
ANTIFOAM = {"gases": {"co2_fossil": 2.9, "ch4_fossil": 0.005, "n2o": 0.0001}, "per": "t", "citation": "invented for a measurement"}

# Per stage: share of the N inputs, and what they are in turn: (label, whole amount per recipe, unit, factor, more fields).
KINDS = {
    "field": (0.45, [
        ("Ammonium nitrate", 165, "kg N", "eu-2022-996/fert_n_an", {}),
        ("Triple superphosphate", 30, "kg P2O5", "eu-2022-996/fert_p_tsp", {}),
        ("Potassium chloride", 28, "kg K2O", "eu-2022-996/fert_k_mop", {}),
        ("Seed", 0.18, "t", "eu-2022-996/seed_wheat", {}),
        ("Field diesel, litres", 60, "L", DIESEL, {}),
        ("Field diesel, energy", 1.1, "GJ", DIESEL, {}),
        ("Plant protection", 2.1, "kg", PROTECTION, {}),
        ("Soil acidity", 165, "kg N", "eu-2022-996/soil_acid_nitrate", {}),
        ("Drying, propane", 35, "kg", "eu-2022-996/fuel_lpg", {}),
    ]),
    "haul-in": (0.10, [
        ("Truck diesel", 36, "MJ", "eu-2022-996/fuel_diesel", {}),
        ("Weighbridge power", 0.2, "kWh", ELEC, {}),
    ]),
    "works": (0.30, [
        ("Gas, net", 1800, "GJ", GAS, {}),
        ("Gas, billed gross", 550, "MWh gross", GAS, {"net_per_gross": 0.901}),
        ("Power", 90, "MWh", ELEC, {}),
        ("Alpha-amylase", 260, "kg", "eu-2022-996/conv_alpha_amylase", {}),
        ("Glucoamylase", 580, "kg", "eu-2022-996/conv_gluco_amylase", {}),
        ("Sulphuric acid", 2.1, "t", "eu-2022-996/conv_h2so4", {}),
        ("Caustic soda", 1.7, "t", "eu-2022-996/conv_naoh", {}),
        ("Antifoam", 90, "kg", ANTIFOAM, {}),
    ]),
    "rail": (0.07, [("Traction power", 20, "kWh", "eu-2022-996/elec_germany_2019_mv", {}), ("Shunting diesel", 12, "MJ", "eu-2022-996/fuel_diesel", {})]),
    "depot": (0.08, [("Depot power", 5, "kWh", ELEC, {}), ("Filling station power", 20, "kWh", "eu-2022-996/elec_eu27_2019_lv", {}),
                     ("Tank truck diesel", 110, "MJ", "eu-2022-996/fuel_diesel", {})]),
}


def ethanol(amount, unit, **more):
    return {"material": "ethanol", "amount": amount, "unit": unit, "strength_percent_mass": 99.7, **more}


def stages():
    grain = {"amount": 1, "unit": "t", "moisture_percent": 14.0}
    tonne = {"amount": 1000, "unit": "kg", "strength_percent_mass": 99.7}
    return [
        {"key": "field", "kind": "cultivation", "name": "Growers",
         "output": {"material": "wheat", "amount": 8.1, "unit": "t", "moisture_percent": 14.5, "carbon_percent_dry": 45.1}},
        {"key": "haul-in", "kind": "feedstock_transport", "name": "Truck to works",
         "output": {"material": "wheat", **grain}, "intakes": [{"from": "field", **grain}]},
        {"key": "works", "kind": "processing", "name": "Works",
         "output": ethanol(300, "t"),
         "intakes": [{"from": "haul-in", "amount": 1000, "unit": "t", "moisture_percent": 14.0}],
         "co_products": [{"key": "grains", "name": "Dried distillers grains", "material": "ddgs_wheat", "amount": 360,
                          "unit": "t", "moisture_percent": 10.0, "carbon_percent_dry": 47.2, "role": "co_product"}]},
        {"key": "rail", "kind": "fuel_transport", "name": "Rail to depot",
         "output": ethanol(999.5, "kg"), "intakes": [{"from": "works", **tonne}]},
        {"key": "depot", "kind": "fuel_transport", "name": "Depot and filling stations",
         "output": ethanol(999.2, "kg"), "intakes": [{"from": "rail", **tonne}]},
        {"key": "car", "kind": "combustion", "name": "Passenger cars",
         "output": {"material": "ethanol", "amount": 1, "unit": "MJ"}, "intakes": [{"from": "depot"}],
         "inputs": [{"key": "use", "label": "Methane of use", "gases": {"ch4_biogenic": 1.8e-5}, "origin": "default"}]},
    ]


def counts(n):
    """How many inputs each stage gets: largest remainders of its share of n - 1 (one is the car's)."""
    left = n - 1
    exact = {key: share * left for key, (share, _) in KINDS.items()}
    got = {key: int(x) for key, x in exact.items()}
    for key in sorted(exact, key=lambda k: got[k] - exact[k])[: left - sum(got.values())]:
        got[key] += 1
    return got


def pathway(n, seed=7):
    draw = random.Random(seed)
    number = counts(n)
    chain = stages()
    for stage in chain[:-1]:
        _, choices = KINDS[stage["key"]]
        many = number[stage["key"]]
        stage["inputs"] = []
        for i in range(many):
            label, whole, unit, factor, more = choices[i % len(choices)]
            times = len(range(i % len(choices), many, len(choices)))
            amount = round(whole / times * draw.uniform(0.8, 1.25), 9)
            stage["inputs"].append({"key": f"i{i + 1}", "label": f"{label} {i // len(choices) + 1}", "amount": amount,
                                    "unit": unit, "factor": factor, "origin": "estimated", "note": "invented", **more})
    return {
        "format": "wheelwort.pathway/1", "name": f"Measurement, {n} inputs", "example": True,
        "note": "Invented for a measurement: no real company, site, person or reading.", "feedstock": "wheat",
        "period": {"from": "2026-10-01", "to": "2027-09-30"}, "rule_set": "eu-2018-2001", "plant_started": "2019-03-01",
        "stages": chain,
    }


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("inputs", type=int)
    parser.add_argument("--seed", type=int, default=7)
    options = parser.parse_args()
    if options.inputs < 1:
        parser.error("at least 1 input")
    json.dump(pathway(options.inputs, options.seed), sys.stdout, indent=1)
    print()


if __name__ == "__main__":
    main()
