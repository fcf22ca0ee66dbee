//! Dimensions in words, for messages that a person reads.

use super::dimension::{Base, Dimension, Substance};

/// One side of a fraction: how it is named, with which article when it stands alone, and a unit of it.
struct Part {
    article: &'static str,
    noun: String,
    unit: String,
    power: i8,
}

impl Dimension {
    /// Words a person understands: "a mass", "a mass of nitrogen (kg N)", "energy", "energy per mass".
    pub fn describe(self) -> String {
        if self == Self::NONE {
            return "a plain number or share".to_owned();
        }
        let (above, below) = self.parts();
        let mut words = match above.as_slice() {
            [] => "a number".to_owned(),
            [only] if below.is_empty() => format!("{}{}", only.article, only.words()),
            _ => join(&above, " times ", Part::words),
        };
        if !below.is_empty() {
            words.push_str(" per ");
            words.push_str(&join(&below, " and per ", Part::words));
        }
        words
    }

    /// Units that would do, for the remedy in a message: "kg, t or lb".
    pub fn examples(self) -> String {
        let fixed = match self {
            Self::NONE => "percent or as a plain number",
            Self::MASS => "kg, t or lb",
            Self::LENGTH => "km, m or mi",
            Self::AREA => "ha, m2 or acre",
            Self::VOLUME => "m3, L or US gal",
            Self::TIME => "h, d or a",
            Self::TEMPERATURE => "degC or K",
            Self::ENERGY => "MJ, GJ, TJ or MWh",
            Self::ENERGY_GROSS => "MJ gross, TJ gross or MWh gross",
            Self::ENERGY_NET => "MJ net, TJ net or MWh net",
            Self::HEAT => "MJ heat, GJ heat or MWh heat",
            Self::POWER => "kWh power, MWh power or MJ power",
            _ => "",
        };
        if !fixed.is_empty() {
            return fixed.to_owned();
        }
        match self.as_substance().map(Substance::symbol) {
            Some(s) => format!("kg {s}, t {s} or lb {s}"),
            None => self.symbol(),
        }
    }

    /// One everyday unit of the dimension, such as `MJ/kg`, for when nobody entered one.
    pub(super) fn symbol(self) -> String {
        let (above, below) = self.parts();
        let mut text = match above.as_slice() {
            [] => "1".to_owned(),
            parts => join(parts, " ", Part::symbol),
        };
        for part in &below {
            text.push('/');
            text.push_str(&part.symbol());
        }
        text
    }

    /// The parts above and below the line.
    fn parts(self) -> (Vec<Part>, Vec<Part>) {
        let (mut above, mut below) = (Vec::new(), Vec::new());
        let mass = self.exponent(Base::Mass);
        let carried = mass.abs() == 1 && self.exponent(Base::Length) == mass;
        for base in Base::all() {
            let exponent = self.exponent(base);
            let part = match base {
                _ if exponent == 0 => continue,
                Base::Length if carried => continue,
                Base::Mass if carried => carriage(exponent < 0),
                _ => part(base, exponent.saturating_abs()),
            };
            if exponent > 0 {
                above.push(part);
            } else {
                below.push(part);
            }
        }
        (above, below)
    }
}

impl Part {
    fn words(&self) -> String {
        match self.power {
            1 => self.noun.clone(),
            2 => format!("{} squared", self.noun),
            3 => format!("{} cubed", self.noun),
            n => format!("{} to the power {n}", self.noun),
        }
    }

    fn symbol(&self) -> String {
        match self.power {
            1 => self.unit.clone(),
            n => format!("{}^{n}", self.unit),
        }
    }
}

fn join(parts: &[Part], between: &str, each: impl Fn(&Part) -> String) -> String {
    let all: Vec<String> = parts.iter().map(each).collect();
    all.join(between)
}

fn carriage(below: bool) -> Part {
    Part {
        article: "a ",
        noun: "mass carried over a distance (t km)".to_owned(),
        // Below the line two quotients, because `MJ/t km` could be read two ways.
        unit: if below { "t/km" } else { "t km" }.to_owned(),
        power: 1,
    }
}

fn part(base: Base, power: i8) -> Part {
    let plain = |article, noun: &str, unit: &str| Part {
        article,
        noun: noun.to_owned(),
        unit: unit.to_owned(),
        power,
    };
    match base {
        Base::Mass => plain("a ", "mass", "kg"),
        Base::Length if power == 2 => Part {
            power: 1,
            ..plain("an ", "area", "ha")
        },
        Base::Length if power == 3 => Part {
            power: 1,
            ..plain("a ", "volume", "m3")
        },
        Base::Length => plain("a ", "length", "km"),
        Base::Time => plain("a ", "time", "h"),
        Base::Temperature => plain("a ", "temperature", "K"),
        Base::Energy => plain("", "energy", "MJ"),
        Base::EnergyGross => plain("", "gross energy (MJ gross)", "MJ gross"),
        Base::EnergyNet => plain("", "net energy (MJ net)", "MJ net"),
        Base::Heat => plain("", "heat", "MJ heat"),
        Base::Power => plain("", "power (electrical energy)", "kWh power"),
        Base::Substance(s) => {
            let unit = format!("kg {}", s.symbol());
            plain("a ", &format!("mass of {} ({unit})", s.name()), &unit)
        }
        Base::Currency(c) => plain("an ", &format!("amount of money ({})", c.symbol()), c.symbol()),
    }
}
