#!/usr/bin/env python3
"""One assessment of a pathway of plain factors in numpy: the rate to beat, as one line of JSON.

    numpy_pathway.py [--inputs 60] [--seconds 1.0] [--library DIR] [--check]

`resolved_per_second`: units and factors resolved once into arrays, then the sums: shares, demand, gases and CO2e of every
input, stage and term, net, saving, carbon balance. `json_to_json_per_second`: from the document's text to the text of
those figures; the published tables are read once, before. Both are the median of seven timed stretches.
`--check` compares with tests/reference first.
"""

import argparse
import csv
import json
import sys
from pathlib import Path
from statistics import median
from time import perf_counter

import numpy as np

from make_pathway import pathway

HERE = Path(__file__).resolve().parent
LIBRARY = HERE.parents[1] / "src" / "library"
GASES = ("co2_fossil", "co2_biogenic", "co2_land", "ch4_fossil", "ch4_biogenic", "n2o", "co2e_unsplit")
WEIGHT = np.array([1.0, 0.0, 1.0, 25.0, 25.0, 298.0, 1.0])
LHV, CO2_FUEL, CO2_PER_C, CO2_FERMENT = 26.81, 1.91061, 44.0095 / 12.011, 44.0095 / 46.06844
TERMS = {"cultivation": "e_ec", "feedstock_transport": "e_td", "processing": "e_p", "fuel_transport": "e_td", "combustion": "e_u"}
TERM_NAMES = ("e_ec", "e_p", "e_td", "e_u")
UNIT = {"kg": 1.0, "t": 1e3, "kg N": 1.0, "kg P2O5": 1.0, "kg K2O": 1.0, "L": 1e-3, "MJ": 1.0, "GJ": 1e3, "kWh": 3.6,
        "MWh": 3600.0, "MWh gross": 3600.0}
MASS, VOLUME = {"kg", "t"}, {"L"}


def tables(folder):
    """factor id -> (gases per base unit, per energy?, heating value, density); heating values per dry mass by material."""
    def read(*places):
        path = next(p for p in (Path(folder) / place for place in places) if p.exists())
        with open(path, newline="", encoding="utf-8") as file:
            return list(csv.DictReader(file))

    factors = {}
    for row in read("editions/eu-2022-996/emission_factors.csv", "eu/emission_factors.csv"):
        co2, ch4, n2o, total, lhv, density = (float(row[c]) if row[c] else None for c in (
            "co2_g", "ch4_g", "n2o_g", "co2e_g_printed", "lhv_mj_per_kg_dry", "density_kg_per_m3"))
        gas = np.zeros(7)
        if co2 is None and ch4 is None and n2o is None:
            gas[6] = (total or 0.0) / 1e3
        else:
            gas[[0, 3, 5]] = (co2 or 0.0) / 1e3, (ch4 or 0.0) / 1e3, (n2o or 0.0) / 1e3
        per = row["per_unit"]
        factors["eu-2022-996/" + row["factor_id"]] = (gas / (3.6 if per == "kWh" else 1.0), per.startswith(("MJ", "kWh")), lhv, density)
    for row in read("editions/eu-2022-996/electricity_2019.csv", "eu/electricity_2019.csv"):
        for level in ("hv", "mv", "lv"):
            gas = np.zeros(7)
            gas[6] = float(row[f"used_{level}_gco2e_per_kwh"]) / 3600
            name = f"eu-2022-996/elec_{row['country'].lower().replace(' ', '_')}_2019_{level}"
            factors.setdefault(name, (gas, True, None, None))
    heat = {r["material_id"]: float(r["value"]) for r in read("materials/materials.csv") if r["property"] == "lhv_dry"}
    return factors, heat


def size(flow):
    """Pure ethanol or dry matter of a flow, kg."""
    amount = flow["amount"] * UNIT[flow["unit"]]
    if flow["unit"] == "MJ":
        return amount / LHV
    return amount * flow.get("strength_percent_mass", 100.0) / 100 * (1 - flow.get("moisture_percent", 0.0) / 100)


def resolve(document, factors, heat):
    """The plan of a straight chain, last stage first to be demanded: arrays only."""
    stages = document["stages"]
    amounts, rates, owner = [], [], []
    ratio, shared, main = np.ones(len(stages)), np.zeros(len(stages)), np.ones(len(stages))
    carbon_in = carbon_out = 0.0
    sizes = [size(s["output"]) for s in stages]
    for j, stage in enumerate(stages):
        for entry in stage.get("inputs", ()):
            owner.append(j)
            if "gases" in entry:
                amounts.append(1.0)
                rates.append(np.array([entry["gases"].get(g, 0.0) for g in GASES]))
                continue
            refs = entry["factor"] if isinstance(entry["factor"], list) else [entry["factor"]]
            unit = entry["unit"]
            value = entry["amount"] * UNIT[unit]
            if isinstance(refs[0], dict):
                rate = np.array([refs[0]["gases"].get(g, 0.0) for g in GASES]) / UNIT[refs[0]["per"]]
            else:
                found = [factors[r] for r in refs]
                rate = sum(f[0] for f in found)
                if found[0][1] and (unit in MASS or unit in VOLUME):
                    _, _, lhv, density = next(f for f in found if f[2] is not None)
                    value *= lhv * (density if unit in VOLUME else 1.0)
                if unit.endswith("gross"):
                    value *= entry["net_per_gross"]
            amounts.append(value)
            rates.append(rate)
        for intake in stage.get("intakes", ()):
            ratio[j] = (size(intake) if "amount" in intake else sizes[j]) / sizes[j - 1]
            if stage["kind"] == "processing":
                content = intake.get("carbon_percent_dry", stages[0]["output"].get("carbon_percent_dry"))
                carbon_in = size(intake) * content / 100 * CO2_PER_C
                works = j
        for co in stage.get("co_products", ()):
            wet = co.get("moisture_percent", 0.0) / 100
            mass = co["amount"] * UNIT[co["unit"]]
            shared[j] += max(0.0, heat[co["material"]] * (1 - wet) - 2.44 * wet) * mass
            main[j] = sizes[j] * LHV
            carbon_out += mass * (1 - wet) * co["carbon_percent_dry"] / 100 * CO2_PER_C
    term = np.array([TERM_NAMES.index(TERMS[s["kind"]]) for s in stages])
    owner = np.array(owner)
    return {"amounts": np.array(amounts), "rates": np.array(rates), "owner": owner, "ratio": ratio, "main": main, "shared": shared,
            "first": 1 / LHV / sizes[-1], "counted": (term != TERM_NAMES.index("e_u")).astype(float), "term": term,
            "works": works, "carbon": np.array([carbon_in, carbon_out]), "ethanol": sizes[works], "stages": len(stages),
            "by_stage": (owner == np.arange(len(stages))[:, None]).astype(float),
            "by_term": (term == np.arange(len(TERM_NAMES))[:, None]).astype(float), "outputs": np.array([s["output"]["amount"] for s in stages])}


def assess(plan):
    """All sums of one assessment, g per MJ."""
    share = plan["main"] / (plan["main"] + plan["shared"])
    steps = np.append(plan["ratio"][1:], 1.0)[::-1]
    count = (plan["first"] * np.cumprod(steps))[::-1]
    carried = np.cumprod(share[::-1])[::-1]
    scale = count * carried
    recipe = plan["amounts"][:, None] * plan["rates"]
    inputs = recipe * (scale * plan["counted"])[plan["owner"], None] * 1e3
    stages = plan["by_stage"] @ inputs
    terms = plan["by_term"] @ (stages @ WEIGHT)
    memo = (recipe @ WEIGHT * (scale * (1 - plan["counted"]))[plan["owner"]]).sum() * 1e3
    whole = plan["by_stage"] @ (recipe @ WEIGHT) * count * plan["counted"] * 1e3
    gases = stages.sum(axis=0)
    net = terms.sum()
    feed, grains = plan["carbon"] * count[plan["works"]] * 1e3
    fuel = CO2_FUEL / LHV * 1e3
    ferment = plan["ethanol"] * count[plan["works"]] * CO2_FERMENT * 1e3
    return {"net": net, "gases": gases, "terms": terms, "memo": memo, "stages": stages @ WEIGHT, "stage_gases": stages, "whole": whole,
            "inputs": inputs, "input_co2e": inputs @ WEIGHT, "share": share, "carried": carried, "demand": scale / share * plan["outputs"],
            "saving": 100 * (94 - net) / 94,
            "carbon": (feed, fuel, ferment, grains, 100 * (fuel + ferment + grains) / feed, -(fuel + ferment))}


def to_json(document, result):
    """The figures with their names; the numpy arrays turned into lists at once, which is the quick way."""
    inputs, gases = result["input_co2e"].tolist(), result["inputs"].tolist()
    columns = [result[k].tolist() for k in ("share", "carried", "demand", "stages", "whole", "stage_gases")]
    stages, k = [], 0
    for stage, share, carried, demand, own, whole, vector in zip(document["stages"], *columns):
        rows = []
        for entry in stage.get("inputs", ()):
            rows.append({"key": entry["key"], "g_co2e_per_mj": inputs[k], "gases_g_per_mj": dict(zip(GASES, gases[k]))})
            k += 1
        stages.append({"key": stage["key"], "kind": stage["kind"], "share": share, "carried_share": carried,
                       "demand": {"amount": demand, "unit": stage["output"]["unit"]}, "g_co2e_per_mj": own,
                       "unallocated_g_co2e_per_mj": whole, "gases_g_per_mj": dict(zip(GASES, vector)), "inputs": rows})
    names = ("feedstock", "fuel", "fermentation", "co_products", "closure", "uptake")
    return json.dumps({
        "net": {"g_co2e_per_mj": float(result["net"]), "gases_g_per_mj": dict(zip(GASES, result["gases"].tolist()))},
        "saving_percent": float(result["saving"]), "terms_g_co2e_per_mj": dict(zip(TERM_NAMES, result["terms"].tolist())),
        "memo": float(result["memo"]), "stages": stages, "carbon": dict(zip(names, map(float, result["carbon"]))),
    })


def rate(work, seconds):
    """Runs per second: median of seven stretches, each long enough for the clock."""
    work()
    many = 1
    while True:
        start = perf_counter()
        for _ in range(many):
            work()
        if perf_counter() - start > seconds / 20:
            break
        many *= 2
    found = []
    for _ in range(7):
        start = perf_counter()
        for _ in range(max(1, many * 2)):
            work()
        found.append(max(1, many * 2) / (perf_counter() - start))
    return median(found)


def check(document, result, library):
    """The same figures as the independent recomputation, to 1e-9."""
    sys.path.insert(0, str(HERE.parent / "reference"))
    from recompute import recompute
    want = recompute(document, library)
    pairs = [(result["net"], want["net"]["g_co2e_per_mj"]), (result["saving"], want["saving_percent"]),
             (result["memo"], want["memo"]["e_u_not_counted_g_co2e_per_mj"]), (result["carbon"][4], want["carbon"]["closure_percent"])]
    pairs += list(zip(result["terms"], (want["terms_g_co2e_per_mj"][t] for t in TERM_NAMES)))
    for name, mine in (("g_co2e_per_mj", "stages"), ("share", "share"), ("carried_share", "carried"), ("unallocated_g_co2e_per_mj", "whole")):
        pairs += list(zip(result[mine], (s[name] for s in want["stages"])))
    pairs += list(zip(result["demand"], (s["demand"]["amount"] for s in want["stages"])))
    pairs += list(zip(result["input_co2e"], (r["g_co2e_per_mj"] for s in want["stages"] for r in s["inputs"])))
    for mine, theirs in pairs:
        if abs(mine - theirs) > 1e-9 * max(abs(mine), abs(theirs)) + 1e-12:
            sys.exit(f"differs from tests/reference: {mine} here, {theirs} there")


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--inputs", type=int, default=60)
    parser.add_argument("--seconds", type=float, default=1.0)
    parser.add_argument("--library", type=Path, default=LIBRARY)
    parser.add_argument("--check", action="store_true")
    options = parser.parse_args()
    factors, heat = tables(options.library)
    document = pathway(options.inputs)
    text = json.dumps(document)
    plan = resolve(document, factors, heat)
    if options.check:
        check(document, assess(plan), options.library)

    def whole():
        read = json.loads(text)
        return to_json(read, assess(resolve(read, factors, heat)))

    print(json.dumps({"inputs": options.inputs, "resolved_per_second": round(rate(lambda: assess(plan), options.seconds), 1),
                      "json_to_json_per_second": round(rate(whole, options.seconds), 1)}))


if __name__ == "__main__":
    main()
