"""The carbon balance of a recomputed chain: the crop's carbon followed physically, all shares 1 (domain.md 6)."""

from flows import ETHANOL_LHV
from models import CO2_PER_ETHANOL
from problems import Unsupported

CO2_PER_C = 44.0095 / 12.011
CO2_PER_FUEL = 1.91061  # kg CO2 per kg pure ethanol
BEFORE = ("land", "cultivation", "feedstock_transport")


def stated_content(flow, stage, chain):
    """% C of dry matter: the flow's own, else that of the flow before it of the same material, else None."""
    own = flow.entry.get("carbon_percent_dry")
    if own is not None or stage is None:
        return own
    # What stands before an intake is its source's product; before a product, the same stage's intake.
    for source, product, intake in stage.intakes:
        if intake is flow:
            return stated_content(source.products[product], source, chain)
    for source, product, intake in stage.intakes:
        if intake.material == flow.material:
            found = stated_content(intake, stage, chain)
            if found is not None:
                return found
    return None


class Carried:
    """CO2 (kg per MJ) of one flow of the balance; `side` where a library value may serve only if the flow is small."""

    def __init__(self, kg, side):
        self.kg, self.side = kg, side


def carried(flow, stage, recipes, chain):
    """The carbon of `recipes` recipes' worth of a flow, as CO2; None where its content is unknown."""
    if flow.material in ("heat", "power"):
        return Carried(0.0, False)
    if flow.ethanol:
        return Carried(recipes * flow.pure_kg() * CO2_PER_FUEL, False)
    content, side = stated_content(flow, stage, chain), False
    if content is None:
        content, grade = chain.materials.carbon(flow.material)
        side = grade == "side"
    if content is None:
        return None
    try:
        dry = flow.dry_kg()
    except Unsupported:
        return None
    return Carried(recipes * dry * content / 100 * CO2_PER_C, side)


def total(parts, feed):
    """Sum in kg, or None where a part is unknown or a `side` content carries a quarter of the carbon or more."""
    if any(p is None for p in parts):
        return None
    if any(p.side and (feed is None or p.kg >= 0.25 * feed) for p in parts):
        return None
    return sum(p.kg for p in parts)


def balance(chain, net):
    entering, leaving, remaining = [], [], []
    fermentation = inputs_beyond = inputs_all = 0.0
    for stage in chain.stages:
        beyond = stage.kind not in BEFORE
        for source, _, flow in stage.intakes:
            if beyond and source.kind in BEFORE and not (flow.ethanol or flow.material in ("heat", "power")):
                entering.append(carried(flow, stage, stage.count, chain))
        rows = chain.inputs[stage.key]
        released = sum(r["result"].biogenic for r in rows) * stage.count
        inputs_all += released
        measured = [r["result"].fermentation for r in rows if r["result"].fermentation is not None]
        if measured:
            fermentation += sum(measured) * stage.count
        elif stage.output.ethanol and not any(f.ethanol for _, _, f in stage.intakes) and stage.kind != "combustion":
            fermentation += stage.output.pure_kg() * stage.count * CO2_PER_ETHANOL
        if not beyond:
            continue
        inputs_beyond += released
        if stage is chain.last:
            products = {p: f for p, f in stage.products.items() if p is not None}
        else:
            products = stage.products
        for product, flow in products.items():
            left = stage.count - stage.physical[product]
            if left <= 1e-12 * stage.count:
                continue
            kept = leaving if stage.roles[product] in ("main", "co_product") else remaining
            kept.append(carried(flow, stage, left, chain))
    known = [p for p in entering if p is not None]
    gross = sum(p.kg for p in known) if len(known) == len(entering) else None
    feed = total(entering, gross)
    products = total(leaving, gross)
    rest = total(remaining, gross)
    fuel = CO2_PER_FUEL / ETHANOL_LHV
    out = None if products is None or rest is None else fuel + fermentation + products + rest + inputs_beyond
    uptake = -(fuel + fermentation + inputs_all)

    def grams(kg):
        return None if kg is None else kg * 1e3

    return {
        "feedstock_g_co2_per_mj": grams(feed), "fuel_g_co2_per_mj": grams(fuel),
        "fermentation_g_co2_per_mj": grams(fermentation), "co_products_g_co2_per_mj": grams(products),
        "other_g_co2_per_mj": None if rest is None else grams(rest + inputs_beyond),
        "closure_percent": None if out is None or not feed else 100 * out / feed,
        "uptake_g_co2_per_mj": grams(uptake), "combustion_g_co2_per_mj": grams(fuel),
        "net_in_line_g_co2e_per_mj": net + grams(uptake + fermentation + fuel + inputs_all),
    }
