"""The published tables of a library folder, and the factors and materials a document names."""

import csv
from pathlib import Path

from gases import gases
from measures import heating_value, measure
from problems import Refused, Unsupported

FACTOR_FILES = {
    # name: (place in the library, place in a plain collection of the tables)
    "emission_factors": ("editions/eu-2022-996/emission_factors.csv", "eu/emission_factors.csv"),
    "electricity": ("editions/eu-2022-996/electricity_2019.csv", "eu/electricity_2019.csv"),
    "defaults": ("editions/eu-2018-2001/default_values_ethanol.csv", "eu/default_values_ethanol.csv"),
    "materials": ("materials/materials.csv", "materials/materials.csv"),
    "material_index": ("materials/material_index.csv", "materials/material_index.csv"),
}
BIOMASS_FIRED = ("agricultural_residue", "bagasse", "biogas", "palm_shells", "pkm", "sawdust", "straw_pellet",
                 "wood_")
NO_FACTOR = {"fert_npk_15_15_15"}


def rows(folder, name):
    for place in FACTOR_FILES[name]:
        path = Path(folder) / place
        if path.exists():
            with open(path, newline="", encoding="utf-8") as file:
                return list(csv.DictReader(line for line in file if not line.startswith("#")))
    raise Unsupported(f"table {name} not found under {folder}")


def number(text):
    return float(text) if text not in (None, "") else None


class Factor:
    """Gases (kg) per one `per` unit; `lhv` MJ/kg and `density` kg/m3 where the row prints them."""

    def __init__(self, vector, per, lhv=None, density=None):
        self.vector = vector
        self.per = measure(1.0, per)
        self.lhv = lhv
        self.density = density

    def per_base(self):
        return self.vector / self.per.value


class Book:
    def __init__(self, folder):
        self.folder = folder
        self.rows = {r["factor_id"]: r for r in rows(folder, "emission_factors")}
        self.grids = {r["country"].lower().replace(" ", "_"): r for r in rows(folder, "electricity")}
        self.defaults = {r["pathway_id"]: r for r in rows(folder, "defaults")}
        self.materials = {}
        for r in rows(folder, "materials"):
            self.materials.setdefault(r["material_id"], {})[r["property"]] = r["value"]
        self.carbon_class = {r["material_id"]: r["carbon_default"] for r in rows(folder, "material_index")}

    # Factors

    def published(self, ref, where):
        edition, _, row_id = ref.partition("/")
        if edition != "eu-2022-996":
            raise Unsupported(f"{where}: factor of edition {edition!r}")
        if row_id.startswith("elec_") and row_id not in self.rows:
            country, _, level = row_id.removeprefix("elec_").rpartition("_2019_")
            if country not in self.grids or level not in ("hv", "mv", "lv"):
                raise Refused(where, f"no factor {ref}")
            grams = float(self.grids[country][f"used_{level}_gco2e_per_kwh"])
            return Factor(gases(co2e_unsplit=grams / 1e3), "kWh power")
        row = self.rows.get(row_id)
        if row is None or row_id in NO_FACTOR or row["group"] == "transport":
            raise Refused(where, f"no factor {ref}")
        co2, ch4, n2o = (number(row[c]) for c in ("co2_g", "ch4_g", "n2o_g"))
        if co2 is None and ch4 is None and n2o is None:
            total = number(row["co2e_g_printed"])
            if total is None:
                raise Refused(where, f"{ref} prints no figure")
            vector = gases(co2e_unsplit=total / 1e3)
        else:
            fuel = row_id.removeprefix("comb_")
            living = row_id.startswith("digest_") or (row_id.startswith("comb_") and fuel.startswith(BIOMASS_FIRED))
            methane = "ch4_biogenic" if living else "ch4_fossil"
            vector = gases(co2_fossil=(co2 or 0) / 1e3, n2o=(n2o or 0) / 1e3, **{methane: (ch4 or 0) / 1e3})
        per = "kWh power" if row["per_unit"] == "kWh" else row["per_unit"]
        return Factor(vector, per, number(row["lhv_mj_per_kg_dry"]), number(row["density_kg_per_m3"]))

    def factor(self, ref, where):
        if isinstance(ref, dict):
            return Factor(gases(where, **ref["gases"]), ref["per"])
        return self.published(ref, where)

    def factors(self, ref, where):
        return [self.factor(one, where) for one in (ref if isinstance(ref, list) else [ref])]

    def vehicle(self, ref, where):
        """MJ of fuel per t km, exhaust per t km (kg), and the fuel the vehicle burns (None: name it)."""
        edition, _, row_id = ref.partition("/")
        row = self.rows.get(row_id)
        if edition != "eu-2022-996" or row is None or row["group"] != "transport":
            raise Refused(where, f"no vehicle {ref}")
        exhaust = gases(ch4_fossil=(number(row["ch4_g"]) or 0) / 1e3, n2o=(number(row["n2o_g"]) or 0) / 1e3)
        name = row_id.removeprefix("tr_")
        if name.startswith(("truck_", "inland_", "freight_train_usa")):
            fuel = "eu-2022-996/fuel_diesel"
        elif name.startswith(("handy", "supramax", "chemical_product_tanker")):
            fuel = "eu-2022-996/fuel_heavy_fuel_oil"
        else:
            fuel = None
        return number(row["fuel_mj_per_tkm"]) or 0.0, exhaust, fuel

    def default(self, ref, column, feedstock, where):
        edition, _, row_id = ref.partition("/")
        row = self.defaults.get(row_id) if edition == "eu-2018-2001" else None
        if row is None or number(row[column]) is None:
            raise Refused(where, f"no default {ref}")
        grown = {"sugar beet": ["sugar_beet"], "maize grain": ["maize_grain_only"], "sugar cane": ["sugar_cane"],
                 "wheat straw": ["wheat_straw"], "other cereals (not maize)": ["wheat", "rye", "barley", "triticale"]}
        if feedstock not in grown.get(row["feedstock"], []):
            raise Refused(where, f"{ref} is not for {feedstock}")
        return float(row[column])


def priced(amount, unit, factors, where, net_per_gross=None):
    """Gas vector of an amount against one factor or several that add: the conversions of documents.md, Inputs."""
    have = measure(amount, unit)
    total = gases()
    for factor in factors:
        want = factor.per
        value = have.value
        if want.dimension == "energy":
            if have.dimension in ("mass", "volume"):
                value = energy_of(have, factors, where)
                if want.tag in ("heat", "power"):
                    raise Refused(where, f"{unit} against heat or power")
            elif have.dimension != "energy":
                raise Refused(where, f"{unit} against energy")
            elif have.tag == "gross":
                if net_per_gross is None or want.tag in ("heat", "power"):
                    raise Refused(where, "gross energy without net_per_gross")
                value = have.value * net_per_gross
            elif have.tag and want.tag and have.tag != want.tag:
                raise Refused(where, f"{have.tag} against {want.tag}")
        elif have.dimension != want.dimension or have.tag != want.tag:
            raise Refused(where, f"{unit} against a factor per {want.dimension} {want.tag}".rstrip())
        total = total + factor.per_base() * value
    return total


def energy_of(have, factors, where):
    """MJ of a weighed or measured fuel, by the first row of the list that prints a heating value."""
    if have.tag:
        raise Refused(where, f"{have.tag} against energy")
    for factor in factors:
        if factor.lhv is None:
            continue
        if have.dimension == "mass":
            return have.value * factor.lhv
        if factor.density is not None:
            return have.value * factor.density * factor.lhv
    raise Refused(where, "no row prints the heating value (and density) to turn this into energy")


def fuel_rate(factor, where, tag="net"):
    """Gases per MJ of a factor that a model multiplies with energy of the kind `tag`."""
    if factor.per.dimension != "energy" or (factor.per.tag not in ("", tag)):
        raise Refused(where, f"a factor per MJ of {tag} energy is wanted")
    return factor.per_base()


class Materials:
    """Heating values and carbon contents: the pathway's own materials first, then the library's."""

    def __init__(self, document, book):
        self.own = {m["id"]: m for m in document.get("materials", [])}
        self.book = book
        for name in self.own:
            if name in book.materials or name in ("heat", "power", "ethanol"):
                raise Refused(f"materials.{name}", "is built in")

    def known(self, name):
        return name in self.own or name in self.book.materials or name in ("heat", "power", "ethanol")

    def lhv_dry(self, name, where):
        if name in self.own:
            given = self.own[name].get("lhv_dry")
            if given is None:
                raise Refused(where, f"{name} has no heating value")
            value, per = heating_value(given, where)
            if per != "mass":
                raise Unsupported(f"{where}: heating value per volume of dry matter")
            return value
        row = self.book.materials.get(name, {})
        text = row.get("lhv_dry", row.get("lhv_as_is"))
        if text is None:
            raise Refused(where, f"{name} has no heating value")
        return float(text)

    def carbon(self, name):
        """(percent of dry matter or None, "own" | "exact" | "typical" | "side" | "measure")."""
        if name in self.own:
            return self.own[name].get("carbon_percent_dry"), "own"
        row = self.book.materials.get(name, {})
        grade = self.book.carbon_class.get(name, "measure")
        text = row.get("carbon_percent_dry")
        return (None if text is None or grade == "measure" else float(text)), grade
