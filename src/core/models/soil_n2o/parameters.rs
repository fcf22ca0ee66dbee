//! The parameters of `soil_n2o`, one row each.

use crate::core::models::parameter::{Parameter, Span, Takes};

/// Crops of the residue tables.
pub const CROPS: &[&str] = &[
    "wheat",
    "winter_wheat",
    "spring_wheat",
    "barley",
    "oats",
    "rye",
    "triticale",
    "maize",
    "sorghum",
    "millet",
    "rice",
    "rapeseed",
    "sunflower",
    "soya",
    "potato",
    "cassava",
    "sugar_beet",
    "sugar_cane",
    "other_grain",
];

/// Fertilisers by the form of their nitrogen.
pub const FERTILISERS: &[&str] = &[
    "ammonium_nitrate",
    "calcium_ammonium_nitrate",
    "calcium_nitrate",
    "ammonium_sulphate",
    "urea",
    "urea_ammonium_nitrate",
    "monoammonium_phosphate",
    "diammonium_phosphate",
    "anhydrous_ammonia",
    "npk",
    "other",
];

/// Every parameter, in the order forms show them.
pub const ALL: &[Parameter] = &[
    Parameter::required(
        "method",
        Takes::Word(&["eu-2022-996", "ipcc-2006", "ipcc-2019"]),
        "the edition that all constants come from, never mixed.",
    ),
    Parameter::required("crop", Takes::Word(CROPS), "picks the crop-residue figures."),
    Parameter::required("area_ha", Takes::Number("ha"), "the area grown on, A.").hard(Span::positive()),
    Parameter::optional(
        "yield_t",
        Takes::Number("t"),
        "the stage's output, wet",
        "the harvest of the area, wet; usual is 0.5 to 20 t/ha, beet and cane 20 to 130.",
    )
    .hard(Span::not_negative()),
    Parameter::optional(
        "moisture_percent",
        Takes::Number("percent"),
        "the stage output's, else 1 - DRY of the residue table",
        "water in the harvest, % of wet.",
    )
    .hard(Span::of(0.0, 95.0)),
    Parameter::optional(
        "synthetic_n_kg",
        Takes::Number("kg N"),
        "0",
        "nitrogen of synthetic fertiliser, F_SN: at most 1000 kg/ha, usual is up to 350.",
    )
    .hard(Span::not_negative()),
    Parameter::optional(
        "synthetic_n_by_type_kg",
        Takes::NitrogenByType(FERTILISERS),
        "one figure for every fertiliser",
        "the same by fertiliser; with ipcc-2019 and a climate each has its own Frac_GASF.",
    ),
    Parameter::optional(
        "organic_n_kg",
        Takes::Number("kg N"),
        "0",
        "nitrogen of manure, compost, digestate or vinasse, F_ON: usual is up to 250 kg/ha.",
    )
    .hard(Span::not_negative()),
    Parameter::optional(
        "residues_removed_percent",
        Takes::Number("percent"),
        "0",
        "above-ground residue taken off the field, Frac_Remove.",
    )
    .hard(Span::of(0.0, 100.0))
    .usual(Span::of(0.0, 80.0)),
    Parameter::optional(
        "residues_burnt_percent",
        Takes::Number("percent"),
        "0",
        "share of the area burnt, Frac_Burnt; gases of the fire are not in this model.",
    )
    .hard(Span::of(0.0, 100.0))
    .usual(Span::of(0.0, 0.0)),
    Parameter::optional(
        "residue_n_kg",
        Takes::Number("kg N"),
        "computed from yield and residue table",
        "nitrogen of crop residues left on and in the soil, F_CR.",
    )
    .hard(Span::not_negative()),
    Parameter::optional(
        "soc_loss_t_c",
        Takes::Number("t"),
        "0",
        "carbon lost from mineral soil, t C: its nitrogen is F_SOM. IPCC methods only.",
    )
    .hard(Span::not_negative()),
    Parameter::optional(
        "soc_cause",
        Takes::Word(&["land_use_change", "management"]),
        "none; needed with soc_loss_t_c",
        "why the carbon was lost: picks its C to N ratio.",
    ),
    Parameter::optional(
        "organic_soil_ha",
        Takes::Number("ha"),
        "0",
        "drained organic soil in the area, at most all of it.",
    )
    .hard(Span::not_negative())
    .usual(Span::of(0.0, 0.0)),
    Parameter::optional(
        "organic_soil_climate",
        Takes::Word(&["temperate", "tropical"]),
        "none; needed with organic_soil_ha",
        "picks EF2 of drained organic soil.",
    ),
    Parameter::optional(
        "climate",
        Takes::Word(&["wet", "dry"]),
        "wet; ipcc-2019: the factors without a climate",
        "whether nitrogen leaches; with ipcc-2019 also the emission factors.",
    ),
    Parameter::optional(
        "soil_organic_carbon",
        Takes::Word(&["below_1_percent", "1_to_3_percent", "above_3_percent"]),
        "none; needed with eu-2022-996",
        "class of the site factor.",
    ),
    Parameter::optional(
        "soil_ph_class",
        Takes::Word(&["below_5.5", "5.5_to_7.3", "above_7.3"]),
        "none; needed with eu-2022-996",
        "class of the site factor.",
    ),
    Parameter::optional(
        "soil_texture",
        Takes::Word(&["coarse", "medium", "fine"]),
        "none; needed with eu-2022-996",
        "class of the site factor.",
    ),
    Parameter::optional(
        "climate_class",
        Takes::Word(&[
            "subtropical",
            "temperate_continental",
            "temperate_oceanic",
            "tropical",
        ]),
        "none; needed with eu-2022-996",
        "class of the site factor.",
    ),
    Parameter::optional(
        "vegetation",
        Takes::Word(&["cereals", "grass", "legume", "none", "other", "wetland_rice"]),
        "cereals for grain, other for beet and cane; needed for other crops with eu-2022-996",
        "class of the site factor.",
    ),
];
