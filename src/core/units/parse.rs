//! Reads a unit as people and published tables write it: `kg N/ha`, `t km`, `MJ fuel (LHV)`.

use super::quantity::mismatch;
use super::table::{self, CELSIUS_ZERO};
use super::{Dimension, Substance, UnitError};

/// Longest unit that is read, in characters.
pub const MAX_CHARS: usize = 64;

/// A unit: what it counts and how many base units it holds.
#[derive(Clone, PartialEq, Debug)]
pub struct Unit {
    /// As written, spaces at the ends left out.
    pub symbol: String,
    /// What it counts.
    pub dimension: Dimension,
    /// SI base units per unit; above zero.
    pub factor: f64,
    /// Base units to add after scaling: 273.15 for `degC` standing alone, else 0.
    pub offset: f64,
}

impl Unit {
    /// A figure in this unit, in base units.
    ///
    /// # Errors
    /// [`UnitError::NotFinite`].
    pub fn to_base(&self, value: f64) -> Result<f64, UnitError> {
        let scaled = match self.divisor() {
            Some(divisor) => value / divisor,
            None => value * self.factor,
        };
        finite(scaled + self.offset)
    }

    /// A value in base units, as a figure in this unit.
    ///
    /// # Errors
    /// [`UnitError::NotFinite`].
    pub fn from_base(&self, value: f64) -> Result<f64, UnitError> {
        let rest = value - self.offset;
        finite(match self.divisor() {
            Some(divisor) => rest * divisor,
            None => rest / self.factor,
        })
    }

    /// Asks for a dimension.
    ///
    /// # Errors
    /// [`UnitError::Mismatch`], naming the unit as written.
    pub fn need(&self, dimension: Dimension) -> Result<(), UnitError> {
        if self.dimension == dimension {
            return Ok(());
        }
        Err(mismatch(self.symbol.clone(), self.dimension, dimension))
    }

    /// The whole number this unit is one part of, if it is: 57 % is then 57 / 100, the nearest
    /// number to 0.57, which 57 x 0.01 is not.
    fn divisor(&self) -> Option<f64> {
        let inverse = 1.0 / self.factor;
        (self.factor < 1.0 && inverse <= 1e15 && inverse.fract() == 0.0).then_some(inverse)
    }
}

fn finite(value: f64) -> Result<f64, UnitError> {
    if value.is_finite() {
        Ok(value)
    } else {
        Err(UnitError::NotFinite)
    }
}

/// Reads a unit. Products by space, `*`, `·` or `.`; quotients by `/`, several in a row or with the divisor in
/// brackets; `m2`, `m^2` or `m²`. `MJ/t km` is refused: it could be read two ways.
///
/// # Errors
/// [`UnitError::Unknown`], with a suggestion where one comes to mind.
pub fn parse_unit(text: &str) -> Result<Unit, UnitError> {
    let text = text.trim();
    if text.chars().count() > MAX_CHARS {
        let start: String = text.chars().take(MAX_CHARS).collect();
        return Err(UnitError::Unknown {
            unit: format!("{start}…"),
            suggestion: None,
        });
    }
    match read(text) {
        Ok((dimension, factor)) => Ok(Unit {
            symbol: text.to_owned(),
            dimension,
            factor,
            offset: if matches!(text, "degC" | "°C") {
                CELSIUS_ZERO
            } else {
                0.0
            },
        }),
        Err(refusal) => Err(UnitError::Unknown {
            unit: text.to_owned(),
            suggestion: suggest(text, refusal),
        }),
    }
}

/// Where reading stopped, as byte positions in the text.
#[derive(Clone, Copy)]
enum Refusal {
    /// A word that is no unit here.
    Word { from: usize, to: usize },
    /// A product after a quotient; the text between the two positions separates its factors.
    TwoWays { from: usize, to: usize },
    /// No unit at all.
    Shape,
}

#[derive(Clone, Copy, PartialEq, Debug)]
enum Token<'a> {
    Word(&'a str),
    Times,
    Per,
    Open,
    Close,
}

/// A token with the byte positions of its start and end.
type Placed<'a> = (Token<'a>, usize, usize);

#[expect(
    clippy::string_slice,
    reason = "every position is one of `char_indices`, so the start of a character"
)]
fn tokens(text: &str) -> Vec<Placed<'_>> {
    let mut out = Vec::new();
    let mut start = None;
    for (at, c) in text.char_indices() {
        let mark = match c {
            '*' | '·' | '.' => Some(Token::Times),
            '/' => Some(Token::Per),
            '(' => Some(Token::Open),
            ')' => Some(Token::Close),
            c if c.is_whitespace() => None,
            _ => {
                start.get_or_insert(at);
                continue;
            }
        };
        if let Some(from) = start.take() {
            out.push((Token::Word(&text[from..at]), from, at));
        }
        if let Some(mark) = mark {
            out.push((mark, at, at + c.len_utf8()));
        }
    }
    if let Some(from) = start {
        out.push((Token::Word(&text[from..]), from, text.len()));
    }
    out
}

fn read(text: &str) -> Result<(Dimension, f64), Refusal> {
    let tokens = tokens(text);
    let mut reader = Reader {
        tokens: &tokens,
        at: 0,
    };
    let (dimension, factor) = reader.quotient()?;
    if dimension.saturated() || !factor.is_finite() || factor <= 0.0 {
        return Err(Refusal::Shape);
    }
    Ok((dimension, factor))
}

struct Reader<'t> {
    tokens: &'t [Placed<'t>],
    at: usize,
}

impl<'t> Reader<'t> {
    fn peek(&self) -> Option<Token<'t>> {
        self.tokens.get(self.at).map(|t| t.0)
    }

    /// The word that comes `ahead` tokens from here.
    fn word(&self, ahead: usize) -> Option<&'t str> {
        match self.tokens.get(self.at + ahead) {
            Some(&(Token::Word(w), ..)) => Some(w),
            _ => None,
        }
    }

    /// Steps over a token if it is the next.
    fn take(&mut self, token: Token<'_>) -> bool {
        let found = self.peek() == Some(token);
        self.at += usize::from(found);
        found
    }

    fn quotient(&mut self) -> Result<(Dimension, f64), Refusal> {
        let (mut dimension, mut factor) = self.product()?;
        while let Some((_, from, to)) = self.tokens.get(self.at).copied() {
            if !self.take(Token::Per) {
                return Err(self.after_quotient(from, to));
            }
            let (d, f) = if self.take(Token::Open) {
                let inner = self.product()?;
                if !self.take(Token::Close) {
                    return Err(Refusal::Shape);
                }
                inner
            } else {
                self.factor()?
            };
            dimension = dimension.per(d);
            factor /= f;
        }
        Ok((dimension, factor))
    }

    /// What to say about a token that follows a quotient without a `/`.
    fn after_quotient(&mut self, from: usize, to: usize) -> Refusal {
        let before = self.at.checked_sub(1).and_then(|i| self.tokens.get(i));
        let end = before.map_or(from, |t| t.2);
        let next = if self.take(Token::Times) { to } else { from };
        match self.factor() {
            Ok(_) => Refusal::TwoWays { from: end, to: next },
            Err(refusal) => refusal,
        }
    }

    fn product(&mut self) -> Result<(Dimension, f64), Refusal> {
        let (mut dimension, mut factor) = self.factor()?;
        loop {
            let times = self.take(Token::Times);
            if !times && !matches!(self.peek(), Some(Token::Word(_))) {
                return Ok((dimension, factor));
            }
            let (d, f) = self.factor()?;
            dimension = dimension.times(d);
            factor *= f;
        }
    }

    /// One unit with what belongs to it: a substance, a kind of energy, a word of a published table.
    fn factor(&mut self) -> Result<(Dimension, f64), Refusal> {
        let (dimension, factor) = self.symbol()?;
        if dimension == Dimension::MASS {
            return Ok((self.counted().unwrap_or(dimension), factor));
        }
        // A rate such as MW has kinds too.
        for rate in [Dimension::NONE, Dimension::TIME] {
            if dimension == Dimension::ENERGY.per(rate) {
                let kind = self.kind_of_energy();
                return Ok((kind.per(rate), factor));
            }
        }
        Ok((dimension, factor))
    }

    fn symbol(&mut self) -> Result<(Dimension, f64), Refusal> {
        let (first, from, to) = match self.tokens.get(self.at) {
            Some(&(Token::Word(w), from, to)) => (w, from, to),
            _ => return Err(Refusal::Shape),
        };
        // Names of several words first: "US gal", "bushel of maize".
        for more in [2, 1] {
            let rest: Option<Vec<&str>> = (1..=more).map(|i| self.word(i)).collect();
            let Some(rest) = rest else { continue };
            let name = format!("{first} {}", rest.join(" "));
            if let Some(found) = table::find(&name) {
                self.at += 1 + more;
                return Ok(found);
            }
        }
        self.at += 1;
        table::find(first)
            .or_else(|| powered(first))
            .ok_or(Refusal::Word { from, to })
    }

    /// The substance after a mass: `N`, `CaCO3 equivalent`, `CaCO3-eq`. None where the mass stays a mass.
    fn counted(&mut self) -> Option<Dimension> {
        let word = self.word(0)?;
        if matches!(word, "seed" | "product") {
            self.at += 1;
            return None;
        }
        let stem = ["-equivalent", "-eq"]
            .iter()
            .find_map(|end| word.strip_suffix(end));
        let substance = Substance::from_symbol(stem.unwrap_or(word))?;
        self.at += 1;
        if stem.is_none() && matches!(self.word(0), Some("equivalent" | "eq")) {
            self.at += 1;
        }
        Some(Dimension::substance(substance))
    }

    /// The kind after an energy. Words by which published tables name the fuel leave it bare.
    fn kind_of_energy(&mut self) -> Dimension {
        let kind = match self.word(0) {
            Some("gross") => Dimension::ENERGY_GROSS,
            Some("net") => Dimension::ENERGY_NET,
            Some("heat") => Dimension::HEAT,
            Some("power") => Dimension::POWER,
            _ => {
                self.fuel();
                return Dimension::ENERGY;
            }
        };
        self.at += 1;
        kind
    }

    fn fuel(&mut self) {
        match self.word(0) {
            Some("fuel") if self.word(1) == Some("fed") => self.at += 2,
            Some("fuel" | "diesel" | "biogas") => self.at += 1,
            _ => {}
        }
        let lhv = [Token::Open, Token::Word("LHV"), Token::Close];
        if self.tokens.iter().skip(self.at).map(|t| t.0).take(3).eq(lhv) {
            self.at += 3;
        }
    }
}

/// `m2`, `km^2`, `m³`: powers of lengths and times only.
fn powered(word: &str) -> Option<(Dimension, f64)> {
    let (base, _, power) = split_power(word)?;
    let (dimension, factor) = table::find(base)?;
    matches!(dimension, Dimension::LENGTH | Dimension::TIME)
        .then(|| (dimension.powi(power), factor.powi(i32::from(power))))
}

/// A word that ends in a power: what stands before it, how it is written, and the power.
fn split_power(word: &str) -> Option<(&str, &'static str, i8)> {
    [("^2", 2), ("^3", 3), ("2", 2), ("3", 3), ("²", 2), ("³", 3)]
        .iter()
        .find_map(|&(end, power)| Some((word.strip_suffix(end)?, end, power)))
}

/// What was most likely meant. A rewritten text is offered only if it can be read.
fn suggest(text: &str, refusal: Refusal) -> Option<String> {
    let (from, to) = match refusal {
        Refusal::Shape => return None,
        Refusal::TwoWays { from, to } => {
            let rewritten = replaced(text, from, to, "/");
            return read(&rewritten).is_ok().then_some(rewritten);
        }
        Refusal::Word { from, to } => (from, to),
    };
    let word = text.get(from..to)?;
    let offer = |new: &str| {
        let rewritten = replaced(text, from, to, new);
        read(&rewritten).is_ok().then_some(rewritten)
    };
    if let Some(hint) = table::hint(word) {
        // A hint may also be a choice in words, which cannot stand in the text.
        return Some(offer(hint).unwrap_or_else(|| hint.to_owned()));
    }
    // The same letters in another case: kwh, KG, M3.
    let (stem, end) = split_power(word).map_or((word, ""), |(stem, end, _)| (stem, end));
    let other_case = table::known().find_map(|(symbol, ..)| {
        let same = symbol.eq_ignore_ascii_case(stem) || symbol.eq_ignore_ascii_case(word);
        same.then(|| offer(&format!("{symbol}{end}"))).flatten()
    });
    // A space left out: tkm, kgN.
    other_case.or_else(|| {
        word.char_indices().skip(1).find_map(|(at, _)| {
            let (left, right) = word.split_at(at);
            table::find(left).and_then(|_| offer(&format!("{left} {right}")))
        })
    })
}

fn replaced(text: &str, from: usize, to: usize, new: &str) -> String {
    let (front, back) = (text.get(..from), text.get(to..));
    format!("{}{new}{}", front.unwrap_or(""), back.unwrap_or(""))
}
