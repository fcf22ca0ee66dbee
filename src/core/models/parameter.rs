//! What a model may be told: one table row a parameter. Reading, refusing, forms and the page of models all follow it.

/// A span of allowed or usual figures, both ends inside unless said.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Span {
    /// Lowest figure.
    pub low: f64,
    /// Highest figure; infinity where open.
    pub high: f64,
    /// True if the lowest figure itself is outside.
    pub above: bool,
}

impl Span {
    /// From `low` to `high`, both inside.
    pub const fn of(low: f64, high: f64) -> Option<Span> {
        Some(Span {
            low,
            high,
            above: false,
        })
    }

    /// Above `low`, up to `high`.
    pub const fn above(low: f64, high: f64) -> Option<Span> {
        Some(Span {
            low,
            high,
            above: true,
        })
    }

    /// Not negative.
    pub const fn not_negative() -> Option<Span> {
        Span::of(0.0, f64::INFINITY)
    }

    /// Above zero.
    pub const fn positive() -> Option<Span> {
        Span::above(0.0, f64::INFINITY)
    }

    /// True if the figure lies in the span.
    pub fn holds(&self, figure: f64) -> bool {
        (if self.above {
            figure > self.low
        } else {
            figure >= self.low
        }) && figure <= self.high
    }

    /// The span in words.
    pub fn words(&self, unit: &str) -> String {
        use crate::core::units::rounding::plain;
        let unit = if unit.is_empty() {
            String::new()
        } else {
            format!(" {unit}")
        };
        if !self.above && self.low == self.high {
            return format!("{}{unit}", plain(self.low));
        }
        match (self.above, self.high.is_infinite()) {
            (true, true) => format!("above {}{unit}", plain(self.low)),
            (false, true) => format!("{}{unit} or more", plain(self.low)),
            (true, false) => format!("above {} and at most {}{unit}", plain(self.low), plain(self.high)),
            (false, false) => format!("{} to {}{unit}", plain(self.low), plain(self.high)),
        }
    }
}

/// The kind of value a parameter takes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Takes {
    /// A plain figure in this unit (empty: a plain number), or an amount of the same dimension.
    Number(&'static str),
    /// Always an amount with its unit; computed in this unit.
    Amount(&'static str),
    /// One of these words.
    Word(&'static [&'static str]),
    /// True or false.
    Flag,
    /// A calendar day.
    Day,
    /// A calendar year.
    Year,
    /// Free text.
    Text,
    /// A factor: `edition/row` or one given in full.
    Factor,
    /// Kilograms of each gas.
    Gases,
    /// A list of fuels: `factor`, `stack`, `share_percent`.
    Fuels,
    /// Kilograms of nitrogen by fertiliser type.
    NitrogenByType(&'static [&'static str]),
    /// An object with parameters of its own.
    Object(&'static [Parameter]),
    /// A vehicle: `edition/row`, or an object with parameters of its own.
    Vehicle(&'static [Parameter]),
    /// The word `none`, or an amount in this unit.
    NoneOrAmount(&'static str),
}

/// One parameter of a model.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Parameter {
    /// Name in documents.
    pub name: &'static str,
    /// What it takes.
    pub takes: Takes,
    /// True if the model cannot do without.
    pub required: bool,
    /// What stands in where it is left out, in words.
    pub default: &'static str,
    /// Outside is refused.
    pub hard: Option<Span>,
    /// Outside gives finding K-01.
    pub usual: Option<Span>,
    /// What it is and how it enters the equation.
    pub meaning: &'static str,
}

impl Parameter {
    /// A required parameter.
    pub const fn required(name: &'static str, takes: Takes, meaning: &'static str) -> Parameter {
        Parameter {
            name,
            takes,
            required: true,
            default: "",
            hard: None,
            usual: None,
            meaning,
        }
    }

    /// An optional parameter with its default in words.
    pub const fn optional(
        name: &'static str,
        takes: Takes,
        default: &'static str,
        meaning: &'static str,
    ) -> Parameter {
        Parameter {
            name,
            takes,
            required: false,
            default,
            hard: None,
            usual: None,
            meaning,
        }
    }

    /// With a hard range.
    pub const fn hard(self, span: Option<Span>) -> Parameter {
        Parameter { hard: span, ..self }
    }

    /// With a usual range.
    pub const fn usual(self, span: Option<Span>) -> Parameter {
        Parameter { usual: span, ..self }
    }

    /// Its name in words, without the unit.
    pub fn label(&self) -> String {
        match super::labels::words(self.name) {
            Some(words) => words.to_owned(),
            None => self.name.replace('_', " "),
        }
    }

    /// Unit of a figure, empty where there is none.
    pub fn unit(&self) -> &'static str {
        match self.takes {
            Takes::Number(unit) | Takes::Amount(unit) | Takes::NoneOrAmount(unit) => unit,
            _ => "",
        }
    }
}
