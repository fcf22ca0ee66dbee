//! Figures as people type them.

/// A figure as a person types it: a point, spaces between groups; a comma is asked about, for it may mean either.
///
/// # Errors
/// What is so, and what to do.
pub fn figure(typed: &str) -> Result<f64, (String, String)> {
    let spaced: String = typed
        .chars()
        .filter(|c| !matches!(c, ' ' | '\u{2009}' | '\u{a0}' | '\u{202f}'))
        .map(|c| if c == '\u{2212}' { '-' } else { c })
        .collect();
    let figure = spaced
        .parse::<f64>()
        .ok()
        .filter(|figure| figure.is_finite() && !spaced.contains(['n', 'N']));
    if let Some(figure) = figure {
        return Ok(figure);
    }
    let shown: String = typed.chars().take(40).collect();
    let remedy = if typed.contains(',') {
        format!(
            "Write a point, such as {}.",
            spaced.replace(',', ".").chars().take(40).collect::<String>()
        )
    } else {
        "Give it in digits, such as 113.2.".to_owned()
    };
    Err((format!("\"{shown}\" is not a figure."), remedy))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_are_read_and_doubts_are_told() {
        assert_eq!(figure("1\u{2009}104.6"), Ok(1_104.6));
        assert_eq!(figure("\u{2212}2e3"), Ok(-2_000.0));
        let (fact, remedy) = figure("8,9").expect_err("a comma may mean either");
        assert_eq!(fact, "\"8,9\" is not a figure.");
        assert_eq!(remedy, "Write a point, such as 8.9.");
        for wrong in ["", "nan", "inf", "1e999", "ten"] {
            assert!(figure(wrong).is_err(), "{wrong}");
        }
    }
}
