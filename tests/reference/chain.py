"""The accounting of a pathway: graph, shares, demand backwards from 1 MJ at the wheel, terms, saving (domain.md 3, 4)."""

import models
from book import Materials, priced
from flows import ETHANOL_LHV, Flow, ratio
from gases import co2e, gases, named
from measures import heating_value
from problems import Refused, Unsupported

TERMS = ("e_ec", "e_l", "e_p", "e_td", "e_u", "e_sca", "e_ccs", "e_ccr")
TERM_OF_KIND = {
    "land": "e_l", "cultivation": "e_ec", "feedstock_transport": "e_td", "preparation": "e_p", "fermentation": "e_p",
    "distillation": "e_p", "dehydration": "e_p", "co_product_handling": "e_p", "processing": "e_p", "capture": None,
    "fuel_transport": "e_td", "utility": "e_p", "bought": None, "combustion": "e_u",
}
TERM_OF_MODEL = {"land_use_change": "e_l", "soil_carbon": "e_sca", "combustion": "e_u"}
DEFAULT_COLUMN = {
    "e_ec": ("eec_default", "e_ec"), "e_p": ("ep_default", "e_p"), "e_td": ("etd_default", "e_td"),
    "e_td_final_fuel": ("etd_final_fuel_default", "e_td"), "e_ec_soil_n2o": ("eec_soil_n2o_default", "e_ec"),
}
COMPARATOR = 94.0


def residue_by_law(material):
    return material in ("agricultural_residue_bales", "wheat_straw") or material.startswith(("bagasse", "straw"))


def kind_of(model):
    return (model[0] if isinstance(model, list) else model)["kind"]


class Stage:
    def __init__(self, entry, index, materials):
        self.entry, self.key, self.kind = entry, entry["key"], entry["kind"]
        self.where = f"/stages/{index}"
        if self.kind not in TERM_OF_KIND:
            raise Refused(f"{self.where}/kind", f"no kind {self.kind!r}")
        self.output = Flow(entry["output"], entry["output"]["material"], f"{self.where}/output")
        self.products = {None: self.output}
        self.roles = {None: "main"}
        for i, co in enumerate(entry.get("co_products", [])):
            where = f"{self.where}/co_products/{i}"
            if co["material"] == "co2":
                raise Refused(where, "CO2 is never a co-product: use a capture model")
            self.products[co["key"]] = Flow(co, co["material"], where)
            lawful = residue_by_law(co["material"]) and co["material"] not in materials.own
            self.roles[co["key"]] = "residue" if lawful else co["role"]
        for flow in self.products.values():
            if not materials.known(flow.material):
                raise Refused(flow.where, f"no material {flow.material!r}")
        self.shares = self.share_out(materials)
        self.intakes = []  # (source stage, product key, Flow)
        self.taken = []  # (taker stage, product key, Flow)

    def share_out(self, materials):
        """Share of each product under the EU rule set; residues and wastes take nothing."""
        sharing = [p for p, role in self.roles.items() if role in ("main", "co_product")]
        shares = dict.fromkeys(self.products, 0.0)
        method = self.entry.get("allocation")
        if method not in (None, "energy", "exergy"):
            raise Refused(f"{self.where}/allocation", f"{method} is not allowed by this rule set")
        if len(sharing) == 1:
            shares[None] = 1.0
            return shares
        powers = [self.products[p].material in ("heat", "power") for p in sharing]
        if all(powers):
            weight = {p: self.products[p].exergy() for p in sharing}
        elif any(powers):
            raise Refused(f"{self.where}/co_products", "heat or power beside another product: use a utility or a chp")
        else:
            weight = {p: self.products[p].energy(materials, p is None) for p in sharing}
        total = sum(weight.values())
        for p, w in weight.items():
            shares[p] = w / total
        return shares


class Chain:
    def __init__(self, document, book):
        if document["rule_set"] != "eu-2018-2001":
            raise Unsupported(f"rule set {document['rule_set']!r}")
        self.document, self.book = document, book
        self.materials = Materials(document, book)
        self.stages = [Stage(s, i, self.materials) for i, s in enumerate(document["stages"])]
        self.by_key = {s.key: s for s in self.stages}
        if len(self.by_key) != len(self.stages):
            raise Refused("/stages", "stage keys are unique")
        for stage in self.stages:
            self.connect(stage)
        self.last = self.find_last()
        self.order = self.sort()
        self.run_backwards()
        self.inputs = {s.key: self.evaluate_inputs(s) for s in self.stages}
        self.defaults = self.apply_defaults()

    # Graph

    def connect(self, stage):
        for i, entry in enumerate(stage.entry.get("intakes", [])):
            where = f"{stage.where}/intakes/{i}"
            source = self.by_key.get(entry["from"])
            product = entry.get("product")
            if source is None or product not in source.products:
                raise Refused(where, f"no product {product!r} of {entry['from']!r}")
            flow = Flow(entry, source.products[product].material, where)
            if flow.size is None:
                if stage.kind != "combustion" or len(stage.entry["intakes"]) != 1:
                    raise Refused(where, "amount is wanted")
                flow = Flow({**stage.entry["output"], "from": source.key}, "ethanol", where)
            stage.intakes.append((source, product, flow))
            source.taken.append((stage, product, flow))

    def find_last(self):
        """The stage whose ethanol nothing takes: the fuel at the end of the chain."""
        for stage in self.stages:
            if not stage.taken and not stage.output.ethanol and stage.kind != "co_product_handling":
                raise Refused(stage.where, "nothing takes from this stage")
        last = [s for s in self.stages if s.output.ethanol and not any(p is None for _, p, _ in s.taken)]
        if self.stages and len(last) != 1:
            raise Refused("/stages", f"{len(last)} stages end in ethanol")
        return last[0] if last else None

    def sort(self):
        """Takers before sources."""
        waiting = {s.key: len(s.taken) for s in self.stages}
        ready = [s for s in self.stages if waiting[s.key] == 0]
        order = []
        while ready:
            stage = ready.pop()
            order.append(stage)
            for source, _, _ in stage.intakes:
                waiting[source.key] -= 1
                if waiting[source.key] == 0:
                    ready.append(source)
        if len(order) != len(self.stages):
            raise Refused("/stages", "stages form a cycle")
        return order

    # Demand

    def run_backwards(self):
        for stage in self.stages:
            stage.wanted = dict.fromkeys(stage.products, 0.0)  # recipes, with shares
            stage.physical = dict.fromkeys(stage.products, 0.0)  # recipes, all shares 1
        if self.last is not None:
            one_mj = 1 / ETHANOL_LHV / self.last.output.pure_kg()
            self.last.wanted[None] = self.last.physical[None] = one_mj
        for stage in self.order:
            stage.scale = sum(n * stage.shares[p] for p, n in stage.wanted.items())
            stage.count = max(stage.physical.values())
            for source, product, flow in stage.intakes:
                part = ratio(flow, source.products[product])
                source.wanted[product] += stage.scale * part
                source.physical[product] += stage.count * part

    # Inputs

    def evaluate_inputs(self, stage):
        """Rows {key, term, result}: gases per recipe, before any default replaces them."""
        if stage.kind == "bought":
            return self.stated(stage)
        intakes = [flow for _, _, flow in stage.intakes]
        entries = stage.entry.get("inputs", [])
        uses = {m["use"] for e in entries if "model" in e
                for m in (e["model"] if isinstance(e["model"], list) else [e["model"]]) if m["kind"] == "capture"}
        if stage.kind == "capture" and len(uses) != 1:
            raise Refused(stage.where, "one use per capture stage")
        if stage.kind != "capture" and uses:
            raise Refused(stage.where, "a capture model belongs in a capture stage")
        captured = {"replace_fossil": "e_ccr", "store": "e_ccs"}[uses.pop()] if uses else None
        rows = []
        for i, entry in enumerate(entries):
            where = f"{stage.where}/inputs/{i}"
            term = captured or TERM_OF_KIND[stage.kind]
            model = entry.get("model")
            if model is not None:
                kind = kind_of(model)
                term = TERM_OF_MODEL.get(kind, term)
                if kind == "soil_carbon":
                    result = models.soil_carbon(model, 1 / stage.count if stage.count else 0.0, where)
                else:
                    result = models.evaluate(model, stage.entry, intakes, stage.output, self.book, where)
            elif "gases" in entry:
                result = models.Result(gases(where, **entry["gases"]))
            else:
                factors = self.book.factors(entry["factor"], where)
                result = models.Result(
                    priced(entry["amount"], entry["unit"], factors, f"{where}/unit", entry.get("net_per_gross")))
            rows.append({"key": entry["key"], "term": term, "result": result, "counts": True,
                         "soil": model is not None and kind_of(model) == "soil_n2o"})
        return rows

    def stated(self, stage):
        stated = stage.entry["stated"]
        if stated["rule_set"] != self.document["rule_set"]:
            raise Refused(stage.where, "another rule set")
        lhv = ETHANOL_LHV
        if "lhv" in stated:
            lhv, per = heating_value(stated["lhv"], stage.where)
            if per != "mass":
                raise Unsupported(f"{stage.where}: a proof's heating value per volume")
        energy = stage.output.pure_kg() * lhv
        rows = []
        for term, figure in stated["terms"].items():
            grams = figure["g_co2e_per_mj"]
            if term in ("e_ccs", "e_ccr") and grams > 0:
                raise Refused(stage.where, f"{term} is negative here")
            vector = gases(co2e_unsplit=grams / 1e3 * energy)
            rows.append({"key": f"stated:{term}", "term": term, "result": models.Result(vector), "counts": True,
                         "soil": False})
        return rows

    # Defaults

    def downstream(self, stage):
        seen, todo = [], [stage]
        while todo:
            for taker, _, _ in todo.pop().taken:
                if taker not in seen:
                    seen.append(taker)
                    todo.append(taker)
        return seen

    def apply_defaults(self):
        asked = self.document.get("defaults", {})
        if {"e_ec", "e_ec_soil_n2o"} <= set(asked) or {"e_td", "e_td_final_fuel"} <= set(asked):
            raise Refused("/defaults", "a term and its part together")
        values = {}
        for name, ref in asked.items():
            column, term = DEFAULT_COLUMN[name]
            values[name] = (term, self.book.default(ref, column, self.document["feedstock"], f"/defaults/{name}"))
            for stage in self.stages:
                works_follow = any(s.kind == "capture" or TERM_OF_KIND[s.kind] == "e_p" for s in self.downstream(stage))
                for row in self.inputs[stage.key]:
                    replaced = row["term"] == term
                    if name == "e_td_final_fuel":
                        replaced = replaced and stage.kind == "fuel_transport" and not works_follow
                    elif name == "e_ec_soil_n2o":
                        replaced = row["soil"]
                    row["counts"] = row["counts"] and not replaced
        return values

    # Results

    def saving(self, net):
        kinds = {s.kind for s in self.stages}
        asked = self.document.get("defaults", {})
        if self.document.get("not_covered") or not (kinds & {"cultivation", "bought"} or "e_ec" in asked):
            return None
        delivered = (self.last is not None and self.last.kind in ("combustion", "fuel_transport")
                     or "e_td" in asked or "e_td_final_fuel" in asked)
        return 100 * (COMPARATOR - net) / COMPARATOR if delivered else None

    def result(self):
        terms, memo, total = dict.fromkeys(TERMS, 0.0), 0.0, gases()
        stages = []
        for stage in self.stages:
            rows, own, per_recipe = [], 0.0, 0.0
            for row in self.inputs[stage.key]:
                recipe = co2e(row["result"].vector) * 1e3
                if row["term"] == "e_u":
                    # Annex V Part C point 13: e_u is zero; what use emits is shown beside the total.
                    memo += recipe * stage.scale if row["counts"] else 0.0
                    recipe = 0.0
                elif row["counts"]:
                    total = total + row["result"].vector * stage.scale
                recipe = recipe if row["counts"] else 0.0
                terms[row["term"]] += recipe * stage.scale
                own += recipe * stage.scale
                per_recipe += recipe
                rows.append({"key": row["key"], "term": row["term"], "g_co2e_per_mj": recipe * stage.scale})
            stages.append({
                "key": stage.key, "kind": stage.kind, "share": stage.shares[None],
                "carried_share": stage.scale / stage.count if stage.count else 0.0,
                "demand": {"amount": stage.wanted[None] * stage.output.amount, "unit": stage.output.unit},
                "g_co2e_per_mj": own, "unallocated_g_co2e_per_mj": per_recipe * stage.count, "inputs": rows,
            })
        for name, (term, grams) in self.defaults.items():
            terms[term] += grams
            total = total + gases(co2e_unsplit=grams / 1e3)
            stages.append({"key": f"default:{name}", "kind": "default", "share": 1.0, "carried_share": 1.0,
                           "g_co2e_per_mj": grams, "unallocated_g_co2e_per_mj": grams, "inputs": []})
        net = sum(terms.values())
        return {
            "net": {"g_co2e_per_mj": net, "gases_g_per_mj": named(total, 1e3)},
            "comparator_g_co2e_per_mj": COMPARATOR, "saving_percent": self.saving(net),
            "terms_g_co2e_per_mj": terms, "memo": {"e_u_not_counted_g_co2e_per_mj": memo}, "stages": stages,
        }
