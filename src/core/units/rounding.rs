//! The one place where numbers become text. Halves go away from zero, by the digits a person sees.
//!
//! Rounding is for show only and works on the shortest decimal that reads back as the number: 2.675 is
//! stored as 2.67499..., but whoever sees "2.675" expects 2.68.

/// How a number is dressed.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub struct Style {
    /// A true minus (U+2212) instead of a hyphen.
    pub true_minus: bool,
    /// A thin space (U+2009) every three digits from 1 000 on.
    pub groups: bool,
    /// `+` before numbers above zero: for changes and releases only.
    pub plus: bool,
    /// The decimal mark: a point, or a comma by a person's setting.
    pub mark: char,
}

impl Style {
    /// For pages and printed statements.
    pub const PAGE: Style = Style {
        true_minus: true,
        groups: true,
        plus: false,
        mark: '.',
    };
    /// For pages, where the number is a change.
    pub const CHANGE: Style = Style {
        plus: true,
        ..Style::PAGE
    };
    /// For CSV, input fields and text that programs read.
    pub const PLAIN: Style = Style {
        true_minus: false,
        groups: false,
        plus: false,
        mark: '.',
    };

    /// The same style with another decimal mark.
    #[must_use]
    pub const fn with_mark(self, mark: char) -> Style {
        Style { mark, ..self }
    }
}

/// Most decimals that are ever printed; more are read as this many.
pub const MAX_DECIMALS: u8 = 30;

/// Rounds to `decimals` (0 to 30) places, halves away from zero of the shortest decimal: 0.25 to 0.3, 2.675 to 2.68.
/// Never gives a negative zero; what is not finite stays as it is.
pub fn round_half_away(x: f64, decimals: u8) -> f64 {
    round_at(x, i32::from(decimals.min(MAX_DECIMALS)))
}

/// Fixed decimals in a style. What is not finite is an en dash: no figure.
pub fn fixed(x: f64, decimals: u8, style: Style) -> String {
    let decimals = decimals.min(MAX_DECIMALS);
    match Digits::of(x) {
        Some(digits) => digits
            .rounded(i32::from(decimals))
            .text(usize::from(decimals), style),
        None => "–".to_owned(),
    }
}

/// Fixed decimals for a page: `show(-2.005, 2)` is "−2.01", `show(35473.0, 0)` is "35 473" with a thin space.
pub fn show(x: f64, decimals: u8) -> String {
    fixed(x, decimals, Style::PAGE)
}

/// A change for a page: as [`show`], with `+` above zero.
pub fn show_change(x: f64, decimals: u8) -> String {
    fixed(x, decimals, Style::CHANGE)
}

/// Fixed decimals for CSV and plain text: hyphen, no groups.
pub fn plain_fixed(x: f64, decimals: u8) -> String {
    fixed(x, decimals, Style::PLAIN)
}

/// All digits of a number, dressed for a page: published factors appear as printed.
pub fn show_all(x: f64) -> String {
    match Digits::of(x) {
        Some(digits) => digits.text(digits.decimals(), Style::PAGE),
        None => "–".to_owned(),
    }
}

/// `figures` significant figures (at least 1), but at most `max_decimals` decimals, for a page: 31.4, 5.72, 0.584.
/// Larger numbers are rounded before the point: 35 473 to three figures is 35 500. Zero is "0".
pub fn significant(x: f64, figures: u8, max_decimals: u8) -> String {
    let Some(digits) = Digits::of(x) else {
        return "–".to_owned();
    };
    let (figures, most) = (
        i32::from(figures.max(1)),
        i32::from(max_decimals.min(MAX_DECIMALS)),
    );
    let places = |d: &Digits| (figures - d.point).min(most);
    let rounded = digits.rounded(places(&digits));
    // 9.996 becomes 10.0: one figure more before the point, one fewer after it.
    let shown = if rounded.is_zero() {
        0
    } else {
        places(&rounded).max(0)
    };
    rounded.text(usize::try_from(shown).unwrap_or(0), Style::PAGE)
}

/// The shortest text that reads back as the same number, for CSV and input fields. Without exponent from
/// 10^-7 to 10^15, with one outside; never "-0"; what is not finite is empty.
pub fn plain(x: f64) -> String {
    match Digits::of(x) {
        None => String::new(),
        Some(digits) if digits.is_zero() => "0".to_owned(),
        Some(digits) if (-6..=15).contains(&digits.point) => digits.text(digits.decimals(), Style::PLAIN),
        Some(_) => format!("{x:e}"),
    }
}

/// How many decimals, from `at_least` on, keep a figure from looking as if it stood on or beyond a limit
/// that it does not reach: 64.96 against 65 needs two. At most six more are spent.
pub fn decimals_against(x: f64, limit: f64, at_least: u8) -> u8 {
    let at_least = at_least.min(MAX_DECIMALS - 6);
    let tells = |d: &u8| {
        let (shown, edge) = (round_half_away(x, *d), limit);
        shown.partial_cmp(&edge) == x.partial_cmp(&limit)
    };
    (at_least..=at_least + 6).find(tells).unwrap_or(at_least + 6)
}

fn round_at(x: f64, decimals: i32) -> f64 {
    let Some(digits) = Digits::of(x) else {
        return x;
    };
    let rounded = digits.rounded(decimals);
    // The text is a decimal number of our own making, so it reads; x stands in for the impossible.
    rounded
        .text(rounded.decimals(), Style::PLAIN)
        .parse()
        .unwrap_or(x)
}

/// The shortest decimal of a finite number: 0.d1 d2 d3 ... times ten to the `point`. Zero has no digits.
struct Digits {
    negative: bool,
    digits: Vec<u8>,
    point: i32,
}

impl Digits {
    fn of(x: f64) -> Option<Digits> {
        if !x.is_finite() {
            return None;
        }
        let text = format!("{:e}", x.abs());
        let (mantissa, exponent) = text.split_once('e')?;
        let digits = mantissa
            .bytes()
            .filter(u8::is_ascii_digit)
            .map(|b| b - b'0')
            .collect();
        let point = exponent.parse::<i32>().ok()?.saturating_add(1);
        Some(
            Digits {
                negative: x < 0.0,
                digits,
                point,
            }
            .trimmed(),
        )
    }

    /// Without zeros at the end; all zeros are the one zero, without a sign.
    fn trimmed(mut self) -> Digits {
        while self.digits.last() == Some(&0) {
            self.digits.pop();
        }
        if self.digits.is_empty() {
            self.negative = false;
            self.point = 0;
        }
        self
    }

    fn is_zero(&self) -> bool {
        self.digits.is_empty()
    }

    /// Decimals that the digits need.
    fn decimals(&self) -> usize {
        let length = i32::try_from(self.digits.len()).unwrap_or(i32::MAX);
        usize::try_from(length.saturating_sub(self.point)).unwrap_or(0)
    }

    /// Rounded to `decimals` places, before the point when negative; halves away from zero.
    fn rounded(&self, decimals: i32) -> Digits {
        let keep = self.point.saturating_add(decimals);
        let mut out = Digits {
            negative: self.negative,
            digits: Vec::new(),
            point: self.point,
        };
        let Ok(keep) = usize::try_from(keep) else {
            return out.trimmed();
        };
        if keep >= self.digits.len() {
            out.digits = self.digits.clone();
            return out;
        }
        out.digits = self.digits.iter().take(keep).copied().collect();
        if self.digits.get(keep).is_some_and(|&d| d >= 5) {
            out.add_one_at_the_end();
        }
        out.trimmed()
    }

    fn add_one_at_the_end(&mut self) {
        for digit in self.digits.iter_mut().rev() {
            if *digit < 9 {
                *digit += 1;
                return;
            }
            *digit = 0;
        }
        self.digits.insert(0, 1);
        self.point += 1;
    }

    /// The digit in front of ten to the `place` (0 for units, -1 for tenths).
    fn at(&self, place: i32) -> char {
        let index = usize::try_from(self.point - 1 - place).ok();
        let digit = index.and_then(|i| self.digits.get(i)).copied();
        char::from(b'0' + digit.unwrap_or(0))
    }

    /// Written with so many decimals, which must not cut digits off.
    fn text(&self, decimals: usize, style: Style) -> String {
        let mut out = String::new();
        if self.negative {
            out.push(if style.true_minus { '−' } else { '-' });
        } else if style.plus && !self.is_zero() {
            out.push('+');
        }
        for place in (0..self.point.max(1)).rev() {
            out.push(self.at(place));
            if style.groups && place > 0 && place % 3 == 0 {
                out.push('\u{2009}');
            }
        }
        if decimals > 0 {
            out.push(style.mark);
            let last = i32::try_from(decimals).unwrap_or(i32::MAX);
            out.extend((1..=last).map(|place| self.at(-place)));
        }
        out
    }
}
