#!/usr/bin/env python3
"""Recomputes a pathway document from the published tables alone and prints the figures of its assessment as JSON.

    recompute.py [--library DIR] DOCUMENT.json

Exit 0: printed. 2: the document is wrong. 3: it uses something this check does not cover (named on standard error).
"""

import argparse
import json
import sys
from pathlib import Path

from book import Book
from carbon import balance
from chain import Chain
from problems import Refused, Unsupported
from shape import check

LIBRARY = Path(__file__).resolve().parents[2] / "src" / "library"


def recompute(document, library=LIBRARY):
    check(document)
    chain = Chain(document, library if isinstance(library, Book) else Book(library))
    result = chain.result()
    result["carbon"] = balance(chain, result["net"]["g_co2e_per_mj"])
    return result


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("document", type=Path)
    parser.add_argument("--library", type=Path, default=LIBRARY)
    options = parser.parse_args()
    try:
        json.dump(recompute(json.loads(options.document.read_text(encoding="utf-8")), options.library), sys.stdout, indent=1)
    except Unsupported as problem:
        print(f"not covered by this check: {problem}", file=sys.stderr)
        return 3
    except (Refused, KeyError) as problem:
        print(f"refused: {problem}", file=sys.stderr)
        return 2
    print()
    return 0


if __name__ == "__main__":
    sys.exit(main())
