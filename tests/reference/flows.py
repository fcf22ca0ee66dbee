"""Outputs, intakes and co-products: what an amount is in pure ethanol, dry matter and energy, and how two match."""

import alcohol
from measures import heating_value, measure
from problems import Refused, Unsupported

ETHANOL_LHV = 26.81  # MJ/kg, Implementing Regulation (EU) 2022/996 Annex IX
LATENT = 2.44  # MJ/kg of water that leaves with a co-product


class Flow:
    """One flow of a stage. `size` is its amount in base units, or None where a combustion intake leaves it out."""

    def __init__(self, entry, material, where):
        self.where = where
        self.entry = entry
        self.material = material
        self.ethanol = material == "ethanol"
        moisture = entry.get("moisture_percent")
        self.moisture = None if moisture is None else moisture / 100
        self.unit = entry.get("unit")
        self.amount = entry.get("amount")
        self.size = None
        self.dimension = None
        if self.amount is None:
            return
        got = measure(self.amount, self.unit)
        allowed = {"heat": {"", "heat"}, "power": {"", "power"}}.get(material, {"", "net"})
        if got.tag not in allowed:
            raise Refused(where, f"{self.unit} for {material}")
        self.size, self.dimension = got.value, got.dimension
        if self.size < 0 or (self.size == 0 and entry.get("from") is None):
            raise Refused(where, "amount must be above zero")

    # Ethanol

    def strength(self):
        """Ethanol mass fraction; 1 where nothing is stated (K-04)."""
        by_mass, by_volume = self.entry.get("strength_percent_mass"), self.entry.get("strength_percent_vol")
        if by_mass is not None and by_volume is not None:
            raise Refused(self.where, "strength by mass and by volume")
        if by_mass is not None:
            return by_mass / 100
        return 1.0 if by_volume is None else alcohol.mass_fraction(by_volume / 100)

    def mixture_kg(self):
        """kg of the flow as it stands, water included."""
        if self.dimension == "mass":
            return self.size
        if self.ethanol and self.dimension == "volume":
            if self.entry.get("temperature_c") is None:
                raise Refused(self.where, "a volume of ethanol needs its temperature")
            return self.size * alcohol.density(self.strength(), self.entry["temperature_c"])
        if self.ethanol and self.dimension == "energy":
            return self.size / ETHANOL_LHV / self.strength()
        raise Unsupported(f"{self.where}: mass of {self.unit} of {self.material}")

    def pure_kg(self):
        return self.mixture_kg() * self.strength()

    # Solids

    def dry_kg(self):
        return self.mixture_kg() * (1 - (self.moisture or 0.0))

    def energy(self, materials, main):
        """MJ that shares a burden: ethanol pure, an intermediate by its dry matter, a co-product as it leaves."""
        if self.ethanol:
            return self.pure_kg() * ETHANOL_LHV
        if self.material in ("heat", "power"):
            return self.size
        given = self.entry.get("lhv")
        if given is not None:
            value, per = heating_value(given, self.where)
            if per != self.dimension:
                raise Refused(self.where, f"heating value per {per} for {self.unit}")
            return max(0.0, value) * self.size
        dry = materials.lhv_dry(self.material, self.where)
        if main:
            return dry * self.dry_kg()
        wet = self.moisture or 0.0
        return max(0.0, dry * (1 - wet) - LATENT * wet) * self.mixture_kg()

    def exergy(self):
        if self.material == "power":
            return self.size
        celsius = self.entry.get("temperature_c")
        if celsius is None:
            raise Refused(self.where, "heat that is shared needs its temperature")
        return self.size * celsius / (celsius + 273.15)


def ratio(intake, product):
    """Recipes of the source that one recipe of the taker uses up: intake / amount on the basis both ends have."""
    if intake.ethanol:
        return intake.pure_kg() / product.pure_kg()
    if intake.dimension != product.dimension:
        raise Refused(intake.where, f"{intake.unit} of a product in {product.unit}")
    if intake.dimension == "mass" and intake.moisture is not None and product.moisture is not None:
        return intake.dry_kg() / product.dry_kg()
    return intake.size / product.size
