"""The gas vector (kg) and its CO2e under Directive (EU) 2018/2001 Annex V Part C point 4."""

import numpy as np

from problems import Refused

NAMES = ("co2_fossil", "co2_biogenic", "co2_land", "ch4_fossil", "ch4_biogenic", "n2o", "co2e_unsplit")
# CO2 1, CH4 25 (fossil and biogenic alike), N2O 298; biogenic CO2 weighs nothing.
EU_WEIGHTS = np.array([1.0, 0.0, 1.0, 25.0, 25.0, 298.0, 1.0])
BIOGENIC = NAMES.index("co2_biogenic")


def gases(where="gases", **parts):
    vector = np.zeros(len(NAMES))
    for name, kg in parts.items():
        if name not in NAMES:
            raise Refused(where, f"no gas {name!r}")
        vector[NAMES.index(name)] += float(kg)
    return vector


def co2e(vector):
    return float(vector @ EU_WEIGHTS)


def named(vector, scale=1.0):
    return {name: float(v) * scale for name, v in zip(NAMES, vector)}
