//! What a ladder is made of: plain numbers and words, already weighted and allocated by the caller.

/// A field-to-wheel ladder. All greenhouse-gas figures are in g CO2e per MJ of fuel, those of the crop in g CO2 per MJ.
#[derive(Clone, Debug, PartialEq)]
pub struct Ladder {
    /// Name of the picture, such as "Field-to-wheel ladder of ...".
    pub title: String,
    /// Start of the ids of title and description: letters, digits and hyphens, unique in the page.
    pub id: String,
    /// Head of the counted side; "Counted" if there is none.
    pub heading: Option<String>,
    /// What the fuel is compared with.
    pub baseline: Baseline,
    /// The saving a rule asks for, if any.
    pub required: Option<Required>,
    /// The stages, field first.
    pub stages: Vec<Rung>,
    /// In a comparison, the ends of the counted side over all its ladders (see [`common_scale`]), so that a gram is
    /// equally long in all of them. The narrow form then leaves out the strip of the crop's carbon, which has a length
    /// of its own.
    pub scale: Option<(f64, f64)>,
}

/// The fuel that the pathway is measured against.
#[derive(Clone, Debug, PartialEq)]
pub struct Baseline {
    /// One word for it, such as "petrol".
    pub word: String,
    /// Its emissions, g CO2e/MJ; above zero.
    pub g: f64,
}

/// The saving a rule asks for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Required {
    /// Saving in percent of the baseline.
    pub percent: f64,
    /// The most that it allows, g CO2e/MJ.
    pub g: f64,
}

/// One stage of the pathway.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Rung {
    /// Its name as shown.
    pub name: String,
    /// What it adds to the counted sum.
    pub counted: Counted,
    /// Crop CO2 it takes up (negative) or gives back (positive), g CO2/MJ, after allocation to the fuel.
    pub crop: Option<f64>,
    /// True for the uptake by the crop, which counts nothing and has no row in the narrow form.
    pub uptake: bool,
    /// True in comparisons for a stage that only other pathways have; it carries no figures.
    pub absent: bool,
}

/// Counted emissions of a stage by gas, g CO2e/MJ, signed; credits are negative.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Counted {
    /// Fossil CO2.
    pub co2_fossil: f64,
    /// Nitrous oxide.
    pub n2o: f64,
    /// Methane, fossil and biogenic.
    pub ch4: f64,
    /// CO2 of land: change of use, soil carbon.
    pub co2_land: f64,
    /// Published sums that are not split by gas.
    pub co2e_unsplit: f64,
    /// The crop's own CO2, g CO2/MJ. Zero except where [`in_line`] puts it.
    pub co2_biogenic: f64,
}

impl Counted {
    /// The parts in drawing order, from the zero line outwards.
    pub(super) fn parts(&self) -> [(Part, f64); 6] {
        let Counted {
            co2_fossil,
            n2o,
            ch4,
            co2_land,
            co2e_unsplit,
            co2_biogenic,
        } = *self;
        [
            (Part::Fossil, co2_fossil),
            (Part::N2o, n2o),
            (Part::Ch4, ch4),
            (Part::Land, co2_land),
            (Part::Unsplit, co2e_unsplit),
            (Part::Biogenic, co2_biogenic),
        ]
    }

    /// Sum of all parts.
    pub fn sum(&self) -> f64 {
        self.parts().iter().map(|&(_, g)| g).sum()
    }

    /// Sum of the positive parts.
    pub(super) fn positive(&self) -> f64 {
        self.parts().iter().map(|&(_, g)| g.max(0.0)).sum()
    }

    /// Sum of the negative parts.
    pub(super) fn negative(&self) -> f64 {
        self.parts().iter().map(|&(_, g)| g.min(0.0)).sum()
    }
}

/// A kind of counted emission that has its own look.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Part {
    Fossil,
    N2o,
    Ch4,
    Land,
    Unsplit,
    Biogenic,
}

/// Below this a figure is floating-point noise, not an emission (g/MJ).
pub(super) const NOTHING: f64 = 1e-9;

impl Ladder {
    /// Sums of the crop's carbon: taken up and given back, both positive, g CO2/MJ.
    pub(super) fn crop_sums(&self) -> (f64, f64) {
        let of = |sign: f64| {
            let flows = self.stages.iter().filter_map(|s| s.crop);
            flows.map(|g| (g * sign).max(0.0)).sum()
        };
        (of(-1.0), of(1.0))
    }

    /// Running sums of what is counted, field first.
    pub(super) fn running(&self) -> Vec<f64> {
        let sums = self.stages.iter().map(|s| s.counted.sum());
        sums.scan(0.0, |run, g| {
            *run += g;
            Some(*run)
        })
        .collect()
    }

    /// Lowest and highest counted figure the picture has to hold, zero and the two verticals included.
    pub(super) fn reach(&self) -> (f64, f64) {
        let mut all = vec![0.0, self.baseline.g];
        all.extend(self.required.map(|r| r.g));
        all.extend(self.running());
        for stage in &self.stages {
            all.extend([stage.counted.negative(), stage.counted.positive()]);
        }
        let lowest = all.iter().copied().fold(0.0, f64::min);
        (lowest, all.into_iter().fold(0.0, f64::max))
    }
}

/// Ends of the counted side that hold every one of `ladders`: the `scale` of a comparison. None without ladders.
pub fn common_scale<'a>(ladders: impl IntoIterator<Item = &'a Ladder>) -> Option<(f64, f64)> {
    ladders
        .into_iter()
        .map(Ladder::reach)
        .reduce(|a, b| (a.0.min(b.0), a.1.max(b.1)))
}

/// The other presentation: the crop's carbon joins the running total, so the part left of the names empties and the
/// counted side begins at the uptake. The net differs from that of `ladder` by what the crop's carbon leaves open.
pub fn in_line(ladder: &Ladder) -> Ladder {
    let stages = ladder.stages.iter().map(|stage| Rung {
        counted: Counted {
            co2_biogenic: stage.counted.co2_biogenic + stage.crop.unwrap_or(0.0),
            ..stage.counted
        },
        crop: None,
        uptake: false,
        ..stage.clone()
    });
    Ladder {
        title: format!("{}, crop carbon in line", ladder.title),
        heading: Some("Counted, and the crop\u{2019}s carbon in line".to_owned()),
        stages: stages.collect(),
        ..ladder.clone()
    }
}
