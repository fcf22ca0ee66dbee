#!/usr/bin/env python3
"""Checks a statement file with nothing but the file: content hash, signature, and the net worked out again.

    statement.py FILE...

Canonical JSON by the library rfc8785, Ed25519 by the library cryptography; the sums are those of `chain.py`, fed with
the factors that the file carries. Exit 0: all hold. 1: something does not. 3: a model of a file is not covered, named.
"""

import hashlib
import json
import sys
from pathlib import Path

import rfc8785
from cryptography.exceptions import InvalidSignature
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PublicKey

from book import Book, Factor
from carbon import balance
from chain import Chain
from compare import compare, same
from gases import gases
from problems import Refused, Unsupported
from shape import check


class StatementBook(Book):
    """The data of a statement in place of the published tables."""

    def __init__(self, data):
        self.by_id = {}
        for factor in data["factors"]:
            for name in [factor["id"], *factor.get("also", [])]:
                self.by_id[name] = factor
        self.default_rows = {row["id"]: row for row in data["default_values"]}
        self.materials = {
            material["id"]: {name: str(found["value"]) for name, found in material["properties"].items()}
            for material in data["materials"]
        }
        self.carbon_class = {material["id"]: material["carbon_class"] for material in data["materials"]}

    def published(self, ref, where):
        factor = self.by_id.get(ref)
        if factor is None or factor["usage"]["kind"] != "amount":
            raise Refused(where, f"the file carries no factor {ref}")
        tag = {"power": "kWh power"}.get(factor["counts"])
        per = tag if tag and factor["unit"] == "kWh" else factor["unit"]
        return Factor(gases(**factor["gases"]), per, factor.get("lhv_mj_per_kg"), factor.get("density_kg_per_m3"))

    def vehicle(self, ref, where):
        factor = self.by_id.get(ref)
        if factor is None or factor["usage"]["kind"] != "haul":
            raise Refused(where, f"the file carries no vehicle {ref}")
        usage = factor["usage"]
        return usage["energy_mj_per_tkm"], gases(**usage["exhaust"]), usage.get("fuel")

    def default(self, ref, column, feedstock, where):
        row = self.default_rows.get(ref)
        if row is None or feedstock not in row["feedstock_materials"]:
            raise Refused(where, f"the file carries no default {ref} for {feedstock}")
        name = {"eec": "e_ec", "ep": "e_p", "etd": "e_td", "eec_soil_n2o": "e_ec_soil_n2o",
                "etd_final_fuel": "e_td_final_fuel"}[column.removesuffix("_default")]
        return row["default"][name]


def sealed(document):
    """What is wrong with hash and signature, a line each."""
    rest = {name: part for name, part in document.items() if name not in ("hash", "signature")}
    signed = rfc8785.dumps(rest)
    wrong = []
    found = "sha256:" + hashlib.sha256(signed).hexdigest()
    if found != document["hash"]:
        wrong.append(f"hash: {document['hash']} in the file, {found} of its content")
    signature = document["signature"]
    public = bytes.fromhex(signature["public_key"])
    if hashlib.sha256(public).hexdigest()[:16] != signature["key_id"]:
        wrong.append("key_id: not that of the key")
    try:
        Ed25519PublicKey.from_public_bytes(public).verify(bytes.fromhex(signature["value"]), signed)
    except InvalidSignature:
        wrong.append("signature: not of this key over this content")
    for name in ("pathway", "assessment"):
        part = document[name]
        found = "sha256:" + hashlib.sha256(rfc8785.dumps(part["document"])).hexdigest()
        if found != part["hash"]:
            wrong.append(f"{name}: hash {part['hash']} in the file, {found} of the document")
    return wrong


def recomputed(document):
    """What does not follow from the file, a line each."""
    pathway = document["pathway"]["document"]
    check(pathway)
    chain = Chain(pathway, StatementBook(document["data"]))
    mine = chain.result()
    mine["carbon"] = balance(chain, mine["net"]["g_co2e_per_mj"])
    report = compare(document["assessment"]["document"], mine)
    wrong = [f"{report.differing} of {report.seen} figures differ"] if report.differing else []
    net, figures = mine["net"]["g_co2e_per_mj"], document["figures"]
    rules = document["data"]["rule_set"]
    wanted = {
        "net_g_co2e_per_mj": net,
        "comparator_g_co2e_per_mj": rules["comparator"]["value"],
        "saving_percent": 100 * (1 - net / rules["comparator"]["value"]),
    }
    facts = document["facts"]
    if facts.get("quantity_unit") == "m3":
        energy = facts["quantity"] * 1000 * rules["consignment_lhv_volume"]["value"]
        if not same(figures["energy"]["energy_mj"], energy):
            wrong.append(f"energy_mj: {figures['energy']['energy_mj']} in the file, {energy} worked out")
        tonnes = net * energy / 1e6
        if not same(figures["derived"]["consignment_t_co2e"], tonnes):
            wrong.append(f"consignment_t_co2e: {figures['derived']['consignment_t_co2e']} in the file, {tonnes} worked out")
    for name, value in wanted.items():
        if not same(figures.get(name), value):
            wrong.append(f"{name}: {figures.get(name)} in the file, {value} worked out")
    return wrong


def main(names):
    passed = failed = 0
    uncovered = False
    for name in names:
        document = json.loads(Path(name).read_text(encoding="utf-8"))
        wrong = sealed(document)
        try:
            wrong += recomputed(document)
        except Unsupported as problem:
            print(f"{name}: not covered by this check: {problem}")
            uncovered = True
        except (Refused, KeyError) as problem:
            wrong.append(f"refused by this check: {problem!r}")
        for line in wrong:
            print(f"{name}: {line}")
        # A check that cannot fail is none: the same file with one digit changed must be found out.
        document["facts"]["quantity"] = 1 + (document["facts"].get("quantity") or 0)
        if not sealed(document):
            wrong.append("a changed file passes")
            print(f"{name}: {wrong[-1]}")
        failed, passed = failed + bool(wrong), passed + (not wrong)
    print(f"{passed} passed, {failed} failed")
    return 1 if failed else 3 if uncovered else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
