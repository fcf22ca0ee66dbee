#!/usr/bin/env python3
"""Recomputes every case `{document, expected}` of a folder and compares with its expected figures (1e-6 relative).

    check_cases.py [--library DIR] FOLDER

Cases with features outside this check are named and counted apart. Exit 1 when a figure differs.
"""

import argparse
import json
import sys
from pathlib import Path

from book import Book
from problems import Refused, Unsupported
from recompute import LIBRARY, recompute

TOLERANCE = 1e-6


def differs(got, want):
    if got is None or want is None:
        return got is not want
    return abs(got - want) > TOLERANCE * (abs(want) or 1.0)


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("folder", type=Path)
    parser.add_argument("--library", type=Path, default=LIBRARY)
    options = parser.parse_args()
    book = Book(options.library)
    passed = failed = outside = 0
    for path in sorted(options.folder.glob("*.json")):
        case = json.loads(path.read_text(encoding="utf-8"))
        want = case["expected"]
        try:
            got = recompute(case["document"], book)
        except Unsupported as problem:
            outside += 1
            print(f"{path.name}: not covered: {problem}")
            continue
        except Refused as problem:
            good = "refused" in want and want["refused"] in (None, problem.where)
            passed, failed = passed + good, failed + (not good)
            if not good:
                print(f"{path.name}: refused: {problem}; expected {want}")
            continue
        if "refused" in want:
            failed += 1
            print(f"{path.name}: computed here, refused in the case")
            continue
        pairs = {"net": (got["net"]["g_co2e_per_mj"], want["net"]), "saving": (got["saving_percent"], want["saving"])}
        pairs.update({f"terms.{t}": (got["terms_g_co2e_per_mj"][t], v) for t, v in want["terms"].items()})
        shares = {s["key"]: s["share"] for s in got["stages"] if s["kind"] != "default"}
        pairs.update({f"shares.{k}": (shares.get(k), v) for k, v in want["shares"].items()})
        wrong = [(name, *pair) for name, pair in pairs.items() if differs(*pair)]
        for name, mine, theirs in wrong:
            print(f"{path.name}: {name}: {mine} here, {theirs} expected")
        passed, failed = passed + (not wrong), failed + bool(wrong)
    print(f"{passed} passed, {failed} failed, {outside} not covered")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
