//! How pages dress figures and words. Numbers become text in `core::units::rounding` only.
#![allow(
    missing_docs,
    reason = "the macro of filters makes types of its own; every filter says what it does"
)]

use crate::core::units::rounding;
use askama::filters::{HtmlSafe, Safe};
use askama::{Result, Values};
use jiff::civil::Date;

/// HTML or SVG of our own making: pictures and their pattern definitions. Nothing that a person typed goes in unescaped.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Markup(pub String);

impl std::fmt::Display for Markup {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.0)
    }
}

impl HtmlSafe for Markup {}

/// g CO2e/MJ in a table: two decimals.
#[askama::filter_fn]
pub fn g(x: &f64, _: &dyn Values) -> Result<String> {
    Ok(rounding::show(*x, 2))
}

/// A percentage in a table, without its sign: one decimal.
#[askama::filter_fn]
pub fn pct(x: &f64, _: &dyn Values) -> Result<String> {
    Ok(rounding::show(*x, 1))
}

/// A change in g CO2e/MJ: two decimals, `+` above zero.
#[askama::filter_fn]
pub fn change(x: &f64, _: &dyn Values) -> Result<String> {
    Ok(rounding::show_change(*x, 2))
}

/// All digits of a figure.
#[askama::filter_fn]
pub fn all(x: &f64, _: &dyn Values) -> Result<String> {
    Ok(rounding::show_all(*x))
}

/// A step of the workings: at least four figures, at most four decimals.
#[askama::filter_fn]
pub fn worked(x: &f64, _: &dyn Values) -> Result<String> {
    Ok(worked_text(*x))
}

/// A step of the workings as text: four decimals from one on, five significant figures below, and a power of ten where
/// the zeros could no longer be counted.
pub fn worked_text(x: f64) -> String {
    if x != 0.0 && x.abs() < 1e-6 {
        let (mut head, mut power) = (x, 0_u32);
        // What rounds to 10.000 is 1.0000 of the next power.
        while head.abs() < 0.999_95 {
            head *= 10.0;
            power += 1;
        }
        return format!(
            "{} × 10\u{207b}{}",
            rounding::significant(head, 4, 3),
            raised(power)
        );
    }
    if x == 0.0 || x.abs() >= 1.0 {
        rounding::show(x, 4)
    } else {
        rounding::significant(x, 5, 12)
    }
}

/// A whole number in raised digits.
fn raised(number: u32) -> String {
    let raise = |digit: char| match digit {
        '0' => '⁰',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        '4' => '⁴',
        '5' => '⁵',
        '6' => '⁶',
        '7' => '⁷',
        '8' => '⁸',
        _ => '⁹',
    };
    number.to_string().chars().map(raise).collect()
}

/// 12 Jul 2027.
#[askama::filter_fn]
pub fn day(date: &Date, _: &dyn Values) -> Result<String> {
    Ok(short_day(*date))
}

/// 12 Jul 2027.
pub fn short_day(date: Date) -> String {
    date.strftime("%-d %b %Y").to_string()
}

/// The first letter made large.
pub fn capital(words: &str) -> String {
    let mut letters = words.chars();
    letters
        .next()
        .map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}

/// The first letter made small, for a name inside a sentence; formulas stay.
pub fn small(words: &str) -> String {
    let mut letters = words.chars();
    match (letters.next(), letters.clone().next()) {
        (Some(first), Some(second)) if second.is_lowercase() => first.to_lowercase().chain(letters).collect(),
        _ => words.to_owned(),
    }
}

/// Formulas with their subscripts, terms as e with its index, everything else escaped.
#[askama::filter_fn]
pub fn chem(words: impl std::fmt::Display, _: &dyn Values) -> Result<Safe<String>> {
    Ok(Safe(chem_html(&words.to_string())))
}

const FORMULAS: [(&str, &str); 19] = [
    ("CaCO3", "CaCO<sub>3</sub>"),
    ("P2O5", "P<sub>2</sub>O<sub>5</sub>"),
    ("CO2", "CO<sub>2</sub>"),
    ("CH4", "CH<sub>4</sub>"),
    ("N2O", "N<sub>2</sub>O"),
    ("K2O", "K<sub>2</sub>O"),
    ("H2O", "H<sub>2</sub>O"),
    ("SO3", "SO<sub>3</sub>"),
    ("NH3", "NH<sub>3</sub>"),
    ("e_ec", "e<sub>ec</sub>"),
    ("e_td", "e<sub>td</sub>"),
    ("e_sca", "e<sub>sca</sub>"),
    ("e_ccs", "e<sub>ccs</sub>"),
    ("e_ccr", "e<sub>ccr</sub>"),
    ("e_l", "e<sub>l</sub>"),
    ("e_p", "e<sub>p</sub>"),
    ("e_u", "e<sub>u</sub>"),
    ("m3", "m³"),
    ("degC", "°C"),
];

/// Words as HTML: escaped, with formulas in their usual form.
pub fn chem_html(words: &str) -> String {
    let mut out = String::with_capacity(words.len() + 16);
    let mut rest = words;
    let mut before = ' ';
    while let Some(next) = rest.chars().next() {
        let formula = FORMULAS.iter().find_map(|(plain, html)| {
            let after = rest.strip_prefix(plain)?;
            stands_alone(before, after, plain).then_some((html, after))
        });
        if let Some((html, after)) = formula {
            out.push_str(html);
            before = '2';
            rest = after;
            continue;
        }
        match next {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            other => out.push(other),
        }
        before = next;
        rest = rest.strip_prefix(next).unwrap_or_default();
    }
    out
}

/// A formula is not part of a longer word or id; `CO2e` is one.
fn stands_alone(before: char, after: &str, plain: &str) -> bool {
    let joins = |c: char| c.is_ascii_alphanumeric() || c == '_';
    let ends = match after.chars().next() {
        Some('e') if plain == "CO2" => true,
        Some(c) => !joins(c),
        None => true,
    };
    ends && !joins(before) && before != '-'
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn formulas_get_their_subscripts_and_nothing_else_does() {
        assert_eq!(chem_html("g CO2e/MJ"), "g CO<sub>2</sub>e/MJ");
        assert_eq!(
            chem_html("kg P2O5 & K2O"),
            "kg P<sub>2</sub>O<sub>5</sub> &amp; K<sub>2</sub>O"
        );
        assert_eq!(chem_html("- e_ccs"), "- e<sub>ccs</sub>");
        assert_eq!(chem_html("default:e_td"), "default:e<sub>td</sub>");
        assert_eq!(
            chem_html("e_td_final_fuel, m3x, XCO2"),
            "e_td_final_fuel, m3x, XCO2"
        );
        assert_eq!(chem_html("<b>\"'"), "&lt;b&gt;&quot;&#39;");
    }

    #[test]
    fn workings_keep_figures_below_one() {
        assert_eq!(worked_text(31.413_44), "31.4134");
        assert_eq!(worked_text(0.000_012_345_67), "0.000012346");
        assert_eq!(worked_text(-0.0), "0.0000");
        assert_eq!(worked_text(5.966_852_764_774_28e-10), "5.967 × 10⁻¹⁰");
        assert_eq!(worked_text(-9.999_9e-8), "\u{2212}1.000 × 10⁻⁷");
    }
}
