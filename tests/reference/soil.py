"""Models of the field: soil nitrous oxide by three methods, acidity and lime, urea (models.md 1 to 3)."""

from math import exp

import published as tab
from gases import gases
from measures import measure, plain
from problems import Refused, Unsupported

GRAIN = {"wheat", "winter_wheat", "spring_wheat", "barley", "oats", "rye", "triticale", "maize", "sorghum", "millet",
         "rice", "other_grain"}


def soil_n2o(model, stage, where):
    method, crop = model["method"], model["crop"]

    def kg(name, default=0.0):
        return plain(model, name, "kg", where, default)

    area = plain(model, "area_ha", "ha", where)
    synthetic, organic = kg("synthetic_n_kg"), kg("organic_n_kg")
    removed = plain(model, "residues_removed_percent", "kg", where, 0.0) / 100
    burnt = plain(model, "residues_burnt_percent", "kg", where, 0.0) / 100
    by_type = {k: measure(v["value"], v["unit"]).value if isinstance(v, dict) else float(v)
               for k, v in model.get("synthetic_n_by_type_kg", {}).items()}
    if by_type and abs(sum(by_type.values()) - synthetic) > 1e-3 * synthetic:
        raise Refused(where, "nitrogen by type does not add up")
    residues = kg("residue_n_kg", None)
    if residues is None:
        residues = residue_nitrogen(model, stage, crop, method, area, removed, burnt, where)
    wetness = model.get("climate")
    peat = plain(model, "organic_soil_ha", "ha", where, 0.0)
    peat_n = 0.0
    if peat:
        peat_n = peat * {"temperate": 8.0, "tropical": 16.0}[model["organic_soil_climate"]]

    if method == "eu-2022-996":
        site = site_factor(model, crop, (synthetic + organic) / area, where)
        share = peat / area
        direct = (synthetic + organic) * (site * (1 - share) + 0.01 * share) + 0.01 * residues + peat_n
        gas = (0.1 * synthetic + 0.2 * organic) * 0.01
        leach = 0.0 if wetness == "dry" else 0.30
        washed = (synthetic + organic + residues) * leach * 0.0075
    else:
        lost = plain(model, "soc_loss_t_c", "t", where, 0.0)
        carbon_n = lost * 1000 / {"land_use_change": 15.0, "management": 10.0}[model["soc_cause"]] if lost else 0.0
        if method == "ipcc-2006":
            direct = (synthetic + organic + residues + carbon_n) * 0.01
            gas = (0.10 * synthetic + 0.20 * organic) * 0.010
            leach, ef5 = (0.0 if wetness == "dry" else 0.30), 0.0075
        elif method == "ipcc-2019":
            ef_synthetic, ef_other, ef4, leach = {
                None: (0.010, 0.010, 0.010, 0.24), "wet": (0.016, 0.006, 0.014, 0.24), "dry": (0.005, 0.005, 0.005, 0.0),
            }[wetness]
            direct = synthetic * ef_synthetic + (organic + residues + carbon_n) * ef_other
            volatile = 0.11 * synthetic
            if by_type and wetness is not None:
                volatile = sum(n * tab.FRAC_GASF_2019[kind] for kind, n in by_type.items())
            gas = (volatile + 0.21 * organic) * ef4
            ef5 = 0.011
        else:
            raise Refused(where, f"no method {method!r}")
        direct += peat_n
        washed = (synthetic + organic + residues + carbon_n) * leach * ef5
    return gases(n2o=(direct + gas + washed) * 44 / 28)


def site_factor(model, crop, rate, where):
    """EF1ij of Annex VII point 1.5.2; 0 where no nitrogen is spread."""
    if rate == 0:
        return 0.0
    vegetation = model.get("vegetation")
    if vegetation is None:
        if crop not in GRAIN and crop not in ("sugar_beet", "sugar_cane"):
            raise Unsupported(f"{where}: vegetation of {crop} left out")
        vegetation = "cereals" if crop in GRAIN else "other"
    total = tab.EFFECT_CONSTANT + tab.EFFECT_ONE_YEAR + tab.EFFECT["vegetation"][vegetation]
    for driver in ("soil_organic_carbon", "soil_ph_class", "soil_texture", "climate_class"):
        if driver not in model:
            raise Refused(where, f"{driver} is wanted")
        total += tab.EFFECT[driver][model[driver]]
    return (exp(total + tab.EFFECT_PER_KG_N * rate) - exp(total)) / rate


def residue_nitrogen(model, stage, crop, method, area, removed, burnt, where):
    """F_CR, kg N."""
    table = {"eu-2022-996": tab.EU_RESIDUE, "ipcc-2006": tab.IPCC_2006, "ipcc-2019": tab.IPCC_2019}[method]
    root = tab.EU_RESIDUE_ROOT.get(crop) if method == "eu-2022-996" else None
    row = root or table.get(crop)
    if row is None or None in row:
        raise Refused(where, f"no residue row for {crop} in {method}: residue_n_kg is wanted")
    output = stage["output"]
    tonnes = plain(model, "yield_t", "t", where)
    if tonnes is None:
        tonnes = measure(output["amount"], output["unit"]).value / 1000
    moisture = plain(model, "moisture_percent", "kg", where, output.get("moisture_percent"))
    wet = 1 - row[0] if moisture is None else moisture / 100
    crop_kg = tonnes * 1000 * (1 - wet)
    burning = 0.90 if "wheat" in crop else 0.80
    if root:
        _, n_above, ratio, burning, returned = root
        return crop_kg * (1 - burnt * burning) * ratio * n_above * (1 - removed) + returned * tonnes * 1000
    if method == "ipcc-2019":
        _, ratio, n_above, shoot, n_below = row
        above = crop_kg * ratio
        return above * n_above * (1 - removed - burnt * burning) + (crop_kg + above) * shoot * n_below
    if method == "eu-2022-996":
        _, n_above, slope, intercept, below, n_below, burning = row
    else:
        _, slope, intercept, n_above, below, n_below = row
    above = (crop_kg / 1000 * slope + intercept * area) * 1000
    return above * n_above * (1 - burnt * burning) * (1 - removed) + below * (above + crop_kg) * n_below


def lime(model, where):
    if model["method"] == "ipcc-2006":
        limestone = plain(model, "limestone_kg", "kg", where, 0.0)
        dolomite = plain(model, "dolomite_kg", "kg", where, 0.0)
        return gases(co2_fossil=(0.12 * limestone + 0.13 * dolomite) * 44 / 12)
    acid = 0.806 * plain(model, "nitrate_n_kg", "kg", where, 0.0) + 0.783 * plain(model, "urea_n_kg", "kg", where, 0.0)
    spread = (0.44 if model["soil_ph"] < 6.4 else 0.079) * plain(model, "caco3_equivalent_kg", "kg", where)
    if model.get("lime_is", "actual") == "actual":
        spread = max(0.0, spread - acid)
    return gases(co2_fossil=acid + spread)


def urea(model, where):
    kg = plain(model, "urea_kg", "kg", where)
    if kg is None:
        kg = plain(model, "urea_n_kg", "kg", where) * 60.056 / 28.014
    return gases(co2_fossil=kg * 0.20 * 44 / 12)
