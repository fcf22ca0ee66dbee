"""The field names a pathway document may use, level by level: an unknown one is refused with its JSON pointer."""

from problems import Refused

FLOW = {"amount", "unit", "moisture_percent", "carbon_percent_dry", "lhv", "temperature_c", "price",
        "strength_percent_mass", "strength_percent_vol", "note", "uncertainty", "origin", "evidence"}
FIELDS = {
    "pathway": {"format", "name", "example", "note", "feedstock", "period", "rule_set", "plant_started", "materials",
                "stages", "defaults", "not_covered", "audits"},
    "stage": {"key", "kind", "name", "note", "grown", "output", "intakes", "inputs", "co_products", "allocation", "stated",
              "meters", "earlier_periods"},
    "output": FLOW | {"material"},
    "intakes": FLOW | {"from", "product"},
    "co_products": FLOW | {"material", "key", "name", "role", "displaces"},
    "inputs": {"key", "label", "amount", "unit", "factor", "gases", "model", "origin", "estimated_percent", "evidence",
               "uncertainty", "note", "net_per_gross", "meter"},
}


def only(entry, level, where):
    for name in entry:
        if name not in FIELDS[level]:
            raise Refused(f"{where}/{name}", "unknown field")


def check(document):
    only(document, "pathway", "")
    for i, stage in enumerate(document["stages"]):
        where = f"/stages/{i}"
        only(stage, "stage", where)
        only(stage["output"], "output", f"{where}/output")
        for level in ("intakes", "inputs", "co_products"):
            for k, entry in enumerate(stage.get(level, [])):
                only(entry, level, f"{where}/{level}/{k}")
                if level == "inputs" and sum(name in entry for name in ("factor", "gases", "model")) != 1:
                    raise Refused(f"{where}/{level}/{k}", "exactly one of factor, gases, model")
