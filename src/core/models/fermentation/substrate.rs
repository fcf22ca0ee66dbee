//! What ferments, the most ethanol it can give, and the water it takes up before it does.

/// Molar mass of glucose, g/mol.
pub(super) const HEXOSE: f64 = 180.15588;
/// Molar mass of xylose, g/mol.
pub(super) const PENTOSE: f64 = 150.12990;

/// A substance that ferments, or that gives sugars which do.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Substrate {
    /// Glucose or fructose.
    Glucose,
    /// Sucrose or maltose.
    Sucrose,
    /// Starch, as anhydroglucose.
    Starch,
    /// Cellulose (glucan), as anhydroglucose.
    Cellulose,
    /// Xylose.
    Xylose,
    /// Xylan, as anhydroxylose.
    Xylan,
}

/// How a substrate becomes sugar that ferments.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Route {
    /// It is sugar, or yeast splits it.
    Sugar,
    /// Enzymes turn starch into glucose.
    Starch,
    /// Pretreatment and enzymes turn cellulose and xylan into sugars.
    Hydrolysis,
}

impl Substrate {
    /// Every substrate with its word in documents.
    pub const WORDS: [(&'static str, Substrate); 6] = [
        ("glucose", Substrate::Glucose),
        ("sucrose", Substrate::Sucrose),
        ("starch", Substrate::Starch),
        ("cellulose", Substrate::Cellulose),
        ("xylose", Substrate::Xylose),
        ("xylan", Substrate::Xylan),
    ];

    /// The word in documents.
    pub fn name(self) -> &'static str {
        let word = Substrate::WORDS.iter().find(|(_, substrate)| *substrate == self);
        word.map_or("", |(name, _)| name)
    }

    /// The most ethanol it can give, kg/kg dry, as published tables print it.
    pub fn most(self) -> f64 {
        match self {
            Substrate::Glucose | Substrate::Xylose => 0.51143,
            Substrate::Sucrose => 0.53835,
            Substrate::Starch | Substrate::Cellulose => 0.56825,
            Substrate::Xylan => 0.58117,
        }
    }

    /// How it is worked out, for the workings.
    pub(super) fn equation(self) -> &'static str {
        match self {
            Substrate::Glucose => "2 x 46.06844 / 180.15588",
            Substrate::Sucrose => "4 x 46.06844 / 342.29648",
            Substrate::Starch | Substrate::Cellulose => "2 x 46.06844 / 162.14060",
            Substrate::Xylose => "5/3 x 46.06844 / 150.12990",
            Substrate::Xylan => "5/3 x 46.06844 / 132.11462",
        }
    }

    /// Sugar that ferments (hexose or pentose) from a kg of it, kg/kg: water of hydrolysis is taken up.
    pub fn gain(self) -> f64 {
        match self {
            Substrate::Glucose | Substrate::Xylose => 1.0,
            Substrate::Sucrose => 2.0 * HEXOSE / 342.29648,
            Substrate::Starch | Substrate::Cellulose => HEXOSE / 162.14060,
            Substrate::Xylan => PENTOSE / 132.11462,
        }
    }

    /// How it becomes sugar.
    pub fn route(self) -> Route {
        match self {
            Substrate::Glucose | Substrate::Sucrose | Substrate::Xylose => Route::Sugar,
            Substrate::Starch => Route::Starch,
            Substrate::Cellulose | Substrate::Xylan => Route::Hydrolysis,
        }
    }
}
