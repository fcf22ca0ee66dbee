"""Models that stand in for a factor: haul, boiler, chp, fermentation, combustion, capture, soil carbon (models.md)."""

import published as tab
import soil
from book import fuel_rate
from flows import ETHANOL_LHV
from gases import BIOGENIC, gases
from measures import amount, plain
from problems import Refused, Unsupported

CO2_PER_ETHANOL = 44.0095 / 46.06844  # one mole per mole
ETHANOL_PER_SUGAR = {"glucose": 0.51143, "sucrose": 0.53835, "starch": 0.56825, "xylose": 0.51143, "xylan": 0.58117}


class Result:
    """Gases per recipe that count, and what the carbon balance needs beside them."""

    def __init__(self, vector, biogenic=None, fermentation=None, memo=None):
        self.vector = vector
        self.biogenic = vector[BIOGENIC] if biogenic is None else biogenic
        self.fermentation = fermentation
        self.memo = memo


def evaluate(model, stage, intakes, output, book, where):
    """One model, or a list of one kind whose gases add."""
    if isinstance(model, list):
        kinds = {m["kind"] for m in model}
        if len(kinds) != 1:
            raise Refused(where, "a list of models is of one kind")
        parts = [evaluate(m, stage, intakes, output, book, f"{where}/{i}") for i, m in enumerate(model)]
        ferment = [p.fermentation for p in parts if p.fermentation is not None]
        return Result(sum(p.vector for p in parts), sum(p.biogenic for p in parts), sum(ferment) if ferment else None)
    kind = model["kind"]
    if kind == "soil_n2o":
        return Result(soil.soil_n2o(model, stage, where))
    if kind == "lime":
        return Result(soil.lime(model, where))
    if kind == "urea":
        return Result(soil.urea(model, where))
    if kind == "haul":
        return Result(haul(model, intakes, book, where))
    if kind == "boiler":
        return Result(heat_from(amount(model["heat"], "energy", where, True), model, book, where))
    if kind == "chp":
        return chp(model, book, where)
    if kind == "fermentation_co2":
        return fermentation(model, output, where)
    if kind == "combustion":
        return Result(combustion(model, output, where))
    if kind == "capture":
        return Result(capture(model, book, where))
    raise Unsupported(f"{where}: model {kind!r}")


def fuel_mix(model, book, where):
    """Gases per MJ of fuel, stack included."""
    if "fuels" in model:
        shares = [f["share_percent"] for f in model["fuels"]]
        if abs(sum(shares) - 100) > 1e-9:
            raise Refused(where, "fuel shares must sum to 100")
        parts = [(f, s / 100) for f, s in zip(model["fuels"], shares)]
    else:
        parts = [({"factor": model["fuel"], "stack": model.get("stack")}, 1.0)]
    total = gases()
    for part, share in parts:
        for name in ("factor", "stack"):
            if part.get(name) is not None:
                total = total + share * fuel_rate(book.factor(part[name], where), where)
    return total


def heat_from(heat, source, book, where):
    if "efficiency_percent" not in source:
        return heat * fuel_rate(book.factor(source["factor"], where), where, "heat")
    return heat / (source["efficiency_percent"] / 100) * fuel_mix(source, book, where)


def haul(model, intakes, book, where):
    vehicle = model["vehicle"]
    extra = 0.0
    km = amount(model["distance"], "length", where) / 1000
    if isinstance(vehicle, dict):
        unit = vehicle["energy"]["unit"].replace("(t km)", "t/km").replace("t km", "t/km")
        scale = {"MJ/t/km": 1.0, "kWh/t/km": 3.6, "kJ/t/km": 1e-3}.get(unit)
        if scale is None:
            raise Unsupported(f"{where}: unit {vehicle['energy']['unit']!r}")
        energy, exhaust, fuel = vehicle["energy"]["value"] * scale, gases(where, **vehicle.get("gases", {})), vehicle["fuel"]
        back = model.get("empty_return", "none")
        if back != "none":
            extra = amount(back, "length", where) / 1000 / km * model.get("empty_energy_percent", 70) / 100
    else:
        energy, exhaust, fuel = book.vehicle(vehicle, where)
    fuel = model.get("fuel", fuel)
    tonnes = (amount(model["mass"], "mass", where) if "mass" in model
              else sum(f.mixture_kg() for f in intakes if f.material not in ("heat", "power"))) / 1000
    total = exhaust
    if energy:
        if fuel is None:
            raise Refused(where, "name the grid in `fuel`")
        factor = book.factor(fuel, where)
        total = total + energy * fuel_rate(factor, where, "power" if factor.per.tag == "power" else "net")
    return tonnes * km * (1 + extra) * total


def chp(model, book, where):
    def energy(name):
        return None if name not in model else amount(model[name], "energy", where, True)

    if "fuel_used" in model:
        fuel, heat, power = energy("fuel_used"), energy("heat_made"), energy("power_made")
        n_heat, n_power = heat / fuel, power / fuel
    else:
        n_heat, n_power = model["efficiency_heat_percent"] / 100, model["efficiency_power_percent"] / 100
        heat = energy("heat_used")
        fuel = heat / n_heat
        power = fuel * n_power
    if n_heat + n_power > 1:
        raise Refused(where, "more heat and power than fuel")
    celsius = model["heat_temperature_c"]
    carnot = 0.3546 if model.get("building_heat") else celsius / (celsius + 273.15)
    used_heat, used_power = energy("heat_used"), energy("power_used")
    u_heat = 1.0 if used_heat is None else used_heat / heat
    u_power = 1.0 if used_power is None else used_power / power
    whole = n_power + carnot * n_heat
    carried = u_heat * carnot * n_heat / whole + u_power * n_power / whole
    made = fuel * fuel_mix(model, book, where)
    # The whole fuel's carbon leaves the works, whoever takes the power.
    return Result(made * carried, biogenic=made[BIOGENIC])


def fermentation(model, output, where):
    ethanol = amount(model["ethanol"], "mass", where) if "ethanol" in model else output.pure_kg()
    sugar = amount(model["sugar_used"], "mass", where)
    spare = sugar - ethanol / ETHANOL_PER_SUGAR[model["sugar"]]
    if spare < 0:
        raise Refused(where, "more ethanol than the sugar gives")
    made = ethanol * CO2_PER_ETHANOL + model.get("respired_percent", 0) / 100 * spare * 6 * 44.0095 / 180.15588
    if "measured_co2" in model:
        counted = amount(model["measured_co2"], "mass", where)
    else:
        counted = made
    return Result(gases(co2_biogenic=made), biogenic=0.0, fermentation=counted)


def combustion(model, output, where):
    if "vehicle" in model:
        edition, _, row = model["vehicle"].partition("/")
        if edition != "ipcc-2006" or row not in tab.VEHICLES:
            raise Unsupported(f"{where}: vehicle {model['vehicle']}")
        methane, nitrous = tab.VEHICLES[row]
    else:
        methane, nitrous = model.get("ch4_kg_per_tj"), model.get("n2o_kg_per_tj")
    energy = output.pure_kg() * ETHANOL_LHV / 1e6
    return gases(ch4_biogenic=energy * (methane or 0.0), n2o=energy * (nitrous or 0.0))


def capture(model, book, where):
    captured = amount(model["co2_captured"], "mass", where)
    credit = amount(model["co2_delivered"], "mass", where) if "co2_delivered" in model else captured
    gas = {"replace_fossil": "co2_fossil", "store": "co2e_unsplit"}[model["use"]]
    total = gases(**{gas: -credit})
    if "power_per_co2" in model:
        unit = model["power_per_co2"]["unit"]
        if unit != "kWh/t":
            raise Unsupported(f"{where}: unit {unit!r}")
        used = captured / 1000 * model["power_per_co2"]["value"] * 3.6
        total = total + used * fuel_rate(book.factor(model["power_factor"], where), where, "power")
    return total


def soil_carbon(model, fuel_mj_per_recipe, where):
    """e_sca per recipe; the cap is per MJ of fuel of the chain with all shares 1."""
    def stock(name):
        top, _, bottom = model[name]["unit"].partition("/")
        if (top, bottom) != ("t", "ha"):
            raise Unsupported(f"{where}: unit {model[name]['unit']!r}")
        return model[name]["value"]

    area = plain(model, "area_ha", "ha", where)
    gain = (stock("carbon_after") - stock("carbon_before")) * 1000 * 3.664 / model["years"] * area
    if "extra_emissions" in model:
        gain -= amount(model["extra_emissions"], "mass", where)
    cap = 45e-3 if model["practice"] == "biochar" else 25e-3
    claim = min(gain, cap * fuel_mj_per_recipe)
    return Result(gases(co2_land=claim if model.get("broken") else -claim))


