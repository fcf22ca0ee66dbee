"""Small published tables of the soil, acidity and vehicle models, typed a second time so that two copies can disagree."""

# Implementing Regulation (EU) 2022/996 Annex VII Table 2 (status: read).
EFFECT_CONSTANT = -1.516
EFFECT_ONE_YEAR = 1.991
EFFECT_PER_KG_N = 0.0038
EFFECT = {
    "soil_organic_carbon": {"below_1_percent": 0.0, "1_to_3_percent": 0.0526, "above_3_percent": 0.6334},
    "soil_ph_class": {"below_5.5": 0.0, "5.5_to_7.3": -0.0693, "above_7.3": -0.4836},
    "soil_texture": {"coarse": 0.0, "medium": -0.1528, "fine": 0.4312},
    "climate_class": {"subtropical": 0.6117, "temperate_continental": 0.0, "temperate_oceanic": 0.0226,
                      "tropical": -0.3022},
    "vegetation": {"cereals": 0.0, "grass": -0.3502, "legume": 0.3783, "none": 0.587, "other": 0.442,
                   "wetland_rice": -0.885},
}

# (dry fraction, N above ground, slope, intercept t/ha, R_BG-BIO, N below ground, C_f)
# Implementing Regulation (EU) 2022/996 Annex VII Table 1 (status: read).
EU_RESIDUE = {
    "barley": (0.865, 0.007, 0.98, 0.59, 0.22, 0.014, 0.8),
    "cassava": (0.302, 0.019, 0.10, 1.06, 0.20, 0.014, 0.8),
    "maize": (0.86, 0.006, 1.03, 0.61, 0.22, 0.007, 0.8),
    "rapeseed": (0.91, 0.011, 1.5, 0.0, 0.19, 0.017, 0.8),
    "rye": (0.86, 0.005, 1.09, 0.88, 0.22, 0.011, 0.8),
    "sorghum": (0.89, 0.007, 0.88, 1.33, 0.22, 0.006, 0.8),
    "soya": (0.87, 0.008, 0.93, 1.35, 0.19, 0.087, 0.8),
    "sunflower": (0.9, 0.007, 2.1, 0.0, 0.22, 0.007, 0.8),
    "triticale": (0.86, 0.006, 1.09, 0.88, 0.22, 0.009, 0.8),
    "wheat": (0.84, 0.006, 1.51, 0.52, 0.24, 0.009, 0.9),
}
# Beet and cane: (dry fraction, N above ground, R_AG, C_f, kg N returned per kg fresh crop); same table and point 1.5.
EU_RESIDUE_ROOT = {
    "sugar_beet": (0.25, 0.004, 0.5, 0.8, 0.0),
    "sugar_cane": (0.275, 0.004, 0.43, 0.8, 0.000508),
}

# 2006 IPCC Guidelines Vol. 4 Ch. 11 Table 11.2: (DRY, slope, intercept t/ha, N_AG, R_BG-BIO, N_BG); None where NA.
IPCC_2006 = {
    "other_grain": (0.88, 1.09, 0.88, 0.006, 0.22, 0.009),
    "maize": (0.87, 1.03, 0.61, 0.006, 0.22, 0.007),
    "wheat": (0.89, 1.51, 0.52, 0.006, 0.24, 0.009),
    "winter_wheat": (0.89, 1.61, 0.40, 0.006, 0.23, 0.009),
    "spring_wheat": (0.89, 1.29, 0.75, 0.006, 0.28, 0.009),
    "barley": (0.89, 0.98, 0.59, 0.007, 0.22, 0.014),
    "oats": (0.89, 0.91, 0.89, 0.007, 0.25, 0.008),
    "rye": (0.88, 1.09, 0.88, 0.005, None, 0.011),
    "sorghum": (0.89, 0.88, 1.33, 0.007, None, 0.006),
    "millet": (0.90, 1.43, 0.14, 0.007, None, None),
    "rice": (0.89, 0.95, 2.46, 0.007, 0.16, None),
    "soya": (0.91, 0.93, 1.35, 0.008, 0.19, 0.008),
    "potato": (0.22, 0.10, 1.06, 0.019, 0.20, 0.014),
}
# 2019 Refinement Vol. 4 Ch. 11 Table 11.1A: (DRY, R_AG, N_AG, RS, N_BG).
IPCC_2019 = {
    "other_grain": (0.88, 1.3, 0.006, 0.22, 0.009),
    "wheat": (0.89, 1.3, 0.006, 0.23, 0.009),
    "winter_wheat": (0.89, 1.3, 0.006, 0.23, 0.009),
    "spring_wheat": (0.89, 1.3, 0.006, 0.28, 0.009),
    "barley": (0.89, 1.2, 0.007, 0.22, 0.014),
    "oats": (0.89, 1.3, 0.007, 0.25, 0.008),
    "maize": (0.87, 1.0, 0.006, 0.22, 0.007),
    "rye": (0.88, 1.6, 0.005, None, 0.011),
    "rice": (0.89, 1.4, 0.007, 0.16, None),
    "millet": (0.90, 1.4, 0.007, None, None),
    "sorghum": (0.89, 1.4, 0.007, None, 0.006),
    "soya": (0.91, 2.1, 0.008, 0.19, 0.008),
    "potato": (0.22, 0.4, 0.019, 0.20, 0.014),
}
# 2019 Refinement Vol. 4 Ch. 11 Table 11.3, Frac_GASF; the classes of the types are recalled trade knowledge.
FRAC_GASF_2019 = {
    "urea": 0.15, "ammonium_sulphate": 0.08, "monoammonium_phosphate": 0.08, "diammonium_phosphate": 0.08,
    "calcium_nitrate": 0.01, "ammonium_nitrate": 0.05, "calcium_ammonium_nitrate": 0.05,
    "urea_ammonium_nitrate": 0.11, "anhydrous_ammonia": 0.11, "npk": 0.11, "other": 0.11,
}

# 2006 IPCC Guidelines Vol. 2 Ch. 3 Table 3.2.2: kg/TJ of CH4 and N2O; None where nothing is published.
VEHICLES = {
    "road_ethanol_truck_us": (260.0, 41.0),
    "road_ethanol_car_br": (18.0, None),
    "road_petrol_unc": (33.0, 3.2),
    "road_petrol_oxcat": (25.0, 8.0),
    "road_petrol_ldv95": (3.8, 5.7),
}
