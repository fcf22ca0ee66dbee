#!/usr/bin/env python3
"""Recomputes a document and compares an assessment of it, figure by figure, to 1e-9 relative.

    compare.py [--library DIR] ASSESSMENT.json DOCUMENT.json

Prints every figure that differs. Exit 0: none. 1: some. 2: this check refuses the document. 3: not covered, named.
"""

import argparse
import json
import sys
from pathlib import Path

from problems import Refused, Unsupported
from recompute import LIBRARY, recompute

RELATIVE = 1e-9
# A figure that is zero on one side may be rounding dust on the other.
DUST = 1e-12
# How an assessment lists the biogenic CO2 of the sugar split in its gas vectors is its own affair: it weighs nothing.
NOT_COMPARED = {"co2_biogenic"}
STAGE_FIGURES = ("share", "carried_share", "g_co2e_per_mj", "unallocated_g_co2e_per_mj")


def same(a, b):
    if a is None or b is None:
        return a is b
    return abs(a - b) <= RELATIVE * max(abs(a), abs(b)) + DUST


class Report:
    def __init__(self):
        self.seen = self.differing = 0

    def figure(self, name, theirs, mine):
        self.seen += 1
        if not same(theirs, mine):
            self.differing += 1
            print(f"{name}: {theirs} in the assessment, {mine} recomputed")

    def block(self, name, theirs, mine):
        """Every figure of mine must be in theirs."""
        for key, value in mine.items():
            if key in NOT_COMPARED:
                continue
            if key not in theirs:
                # A gas that is zero need not be listed.
                self.figure(f"{name}.{key}", 0.0 if "gases" in name else None, value)
                continue
            self.figure(f"{name}.{key}", theirs[key], value)


def inputs(report, name, theirs, mine):
    listed = {row["key"]: row for row in theirs}
    for row in mine:
        other = listed.get(row["key"], {})
        report.figure(f"{name}.{row['key']}", other.get("g_co2e_per_mj"), row["g_co2e_per_mj"])
        if other.get("term") not in (None, row["term"]):
            report.differing += 1
            print(f"{name}.{row['key']}.term: {other['term']} in the assessment, {row['term']} recomputed")


def compare(theirs, mine):
    report = Report()
    report.figure("net", theirs["net"]["g_co2e_per_mj"], mine["net"]["g_co2e_per_mj"])
    report.block("net.gases", theirs["net"].get("gases_g_per_mj", {}), mine["net"]["gases_g_per_mj"])
    for name in ("comparator_g_co2e_per_mj", "saving_percent"):
        report.figure(name, theirs.get(name), mine[name])
    report.block("terms", theirs["terms_g_co2e_per_mj"], mine["terms_g_co2e_per_mj"])
    report.block("memo", theirs.get("memo", {}), mine["memo"])
    report.block("carbon", theirs["carbon"], mine["carbon"])
    listed = {s["key"]: s for s in theirs["stages"]}
    for key in sorted(listed.keys() ^ {s["key"] for s in mine["stages"]}):
        report.differing += 1
        print(f"stages.{key}: listed on one side only")
    for stage in mine["stages"]:
        other = listed.get(stage["key"])
        if other is None:
            continue
        name = f"stages.{stage['key']}"
        report.block(name, other, {f: stage[f] for f in STAGE_FIGURES if stage["kind"] != "default" or "g_co2e" in f})
        if stage["kind"] == "default":
            continue
        inputs(report, f"{name}.inputs", other.get("inputs", []), stage["inputs"])
        demand = other.get("demand") or {}
        if demand.get("unit") == stage["demand"]["unit"]:
            report.figure(f"{name}.demand", demand["amount"], stage["demand"]["amount"])
        else:
            report.figure(f"{name}.demand in {stage['demand']['unit']}", None, stage["demand"]["amount"])
    return report


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("assessment", type=Path)
    parser.add_argument("document", type=Path)
    parser.add_argument("--library", type=Path, default=LIBRARY)
    options = parser.parse_args()
    try:
        mine = recompute(json.loads(options.document.read_text(encoding="utf-8")), options.library)
    except Unsupported as problem:
        print(f"not covered by this check: {problem}")
        return 3
    except (Refused, KeyError) as problem:
        print(f"refused by this check: {problem}")
        return 2
    report = compare(json.loads(options.assessment.read_text(encoding="utf-8")), mine)
    print(f"{report.seen} figures compared, {report.differing} differ")
    return 1 if report.differing else 0


if __name__ == "__main__":
    sys.exit(main())
