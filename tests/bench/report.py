#!/usr/bin/env python3
"""Sets the figures of one run against each other and prints ratios beside the goals.

    report.py FOLDER PAGE_BYTES      FOLDER holds what tests/bench/run measured
"""

import json
import sys
from pathlib import Path
from statistics import median


def lines(path):
    return {row["name"]: row for row in map(json.loads, path.read_text().splitlines())}


def main(folder, page_bytes):
    engine, store, mixed = (lines(folder / f"{name}.jsonl") for name in ("engine", "store", "mixed"))
    numpy = json.loads((folder / "numpy.json").read_text())
    http = {}
    for row in (folder / "http.txt").read_text().split("\n"):
        if row:
            name, rate = row.split()
            http.setdefault(name, []).append(float(rate))
    rate = {name: median(values) for name, values in http.items()}
    value = lambda rows, name: rows[name]["median"]

    def show(what, ratio, goal, detail):
        print(f"{what:<62} {ratio:>9.3g}  goal {goal:<12} {detail}")

    def spread(row):
        return f"{row['median']:.0f}/s (least {row['least']:.0f}, most {row['most']:.0f})"

    print("ratio of this run, medians; spreads in brackets")
    show("60 inputs resolved once / numpy", value(engine, "resolved_60") / numpy["resolved_per_second"], "-",
         f"{spread(engine['resolved_60'])} against {numpy['resolved_per_second']:.0f}/s")
    show("60 inputs, the net alone / numpy", value(engine, "net_60") / numpy["resolved_per_second"], "-",
         spread(engine["net_60"]))
    show("60 inputs JSON to JSON / numpy", value(engine, "json_60") / numpy["json_to_json_per_second"], "-",
         f"{spread(engine['json_60'])} against {numpy['json_to_json_per_second']:.0f}/s")
    show("60 inputs JSON to JSON with workings / numpy without",
         value(engine, "json_with_workings_60") / numpy["json_to_json_per_second"], "-", spread(engine["json_with_workings_60"]))
    for kind in ("net", "resolved", "json", "json_with_workings"):
        slope = value(engine, f"{kind}_10") / value(engine, f"{kind}_1000") / 100
        show(f"cost of 1 000 inputs / 100 x cost of 10 ({kind})", slope, "at most 1", "1 is linear")
    show("net of one plan / its document read from the store",
         value(store, "net_of_one_plan_seconds") / value(store, "read_one_document_seconds"), "0.02",
         f"{1e6 * value(store, 'net_of_one_plan_seconds'):.2f} us against {1e6 * value(store, 'read_one_document_seconds'):.0f} us")
    again = store["reassess_all_seconds"]
    show(f"{again['count']} stored pathways re-assessed / read as rows",
         again["median"] / value(store, "read_as_rows_seconds"), "0.3",
         f"{again['median']:.2f} s against {value(store, 'read_as_rows_seconds'):.2f} s ({store['read_as_rows_seconds']['count']} rows)")
    show("stored assessment as JSON / static handler", rate["data"] / rate["static_data"], "0.5",
         f"{rate['data']:.0f}/s against {rate['static_data']:.0f}/s, rounds {[round(r) for r in http['data']]}")
    show("stored assessment, 304 on its tag / static handler", rate["data_304"] / rate["static_data"], "0.5", f"{rate['data_304']:.0f}/s")
    show("pathway page with its query / static handler", rate["page"] / rate["static_page"], "0.25",
         f"{rate['page']:.0f}/s against {rate['static_page']:.0f}/s, rounds {[round(r) for r in http['page']]}")
    show("pathway page compressed, kB", page_bytes / 1000, "below 60", "fonts apart, no script")
    show("durable writes grouped / single, the database's own library",
         value(store, "grouped_writes_per_second") / value(store, "single_writes_per_second"), "3",
         f"{value(store, 'grouped_writes_per_second'):.0f}/s against {value(store, 'single_writes_per_second'):.0f}/s")
    without, with_trail = value(mixed, "writes_without_trail_per_second"), value(mixed, "writes_with_trail_per_second")
    line = 1 / with_trail - 1 / without
    show("durable writes with a line of the audit trail / without", with_trail / without, "-",
         f"{spread(mixed['writes_with_trail_per_second'])} against {spread(mixed['writes_without_trail_per_second'])}")
    show("cost of a line / cost of saving a pathway with its line", line * value(store, "pathways_saved_per_second"), "-",
         f"{1e6 * line:.0f} us a line")
    for what in ("reads", "writes"):
        ours, plain = mixed[f"mixed_{what}_per_second"], mixed[f"plain_mixed_{what}_per_second"]
        show(f"readers and writers at once, {what} / the database's own library", ours["median"] / plain["median"], "-",
             f"{spread(ours)} against {spread(plain)}")
    print(f"pathways of 60 inputs saved: {value(store, 'pathways_saved_per_second'):.0f}/s")


main(Path(sys.argv[1]), float(sys.argv[2]))
