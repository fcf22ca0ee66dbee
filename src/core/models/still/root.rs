//! Root and maximum of a function of one number inside a bracket: what the physics of the still needs, and no more.

/// Most steps of either search; each halves or shrinks its bracket, so doubles run out first.
const STEPS: usize = 120;

/// Where `f` crosses zero between `low` and `high`, by Ridders' method: the bracket at least halves at every step.
///
/// `None` unless `f` has opposite signs at the ends. `tolerance` is absolute, in the unit of the argument.
pub(super) fn root(f: impl Fn(f64) -> f64, low: f64, high: f64, tolerance: f64) -> Option<f64> {
    let (mut low, mut high) = (low, high);
    let (mut at_low, mut at_high) = (f(low), f(high));
    if at_low == 0.0 {
        return Some(low);
    }
    if at_high == 0.0 {
        return Some(high);
    }
    let opposite = |a: f64, b: f64| (a < 0.0 && b > 0.0) || (a > 0.0 && b < 0.0);
    if !opposite(at_low, at_high) {
        return None;
    }
    let mut best = 0.5 * (low + high);
    for _ in 0..STEPS {
        let middle = 0.5 * (low + high);
        let at_middle = f(middle);
        let under_root = at_middle * at_middle - at_low * at_high;
        let next = middle + (middle - low) * at_low.signum() * at_middle / under_root.sqrt();
        let at_next = f(next);
        let settled = (next - best).abs() <= tolerance;
        best = next;
        if at_next == 0.0 || settled || !at_next.is_finite() {
            break;
        }
        if opposite(at_middle, at_next) {
            let ordered = middle < next;
            (low, at_low) = if ordered {
                (middle, at_middle)
            } else {
                (next, at_next)
            };
            (high, at_high) = if ordered {
                (next, at_next)
            } else {
                (middle, at_middle)
            };
        } else if opposite(at_low, at_next) {
            (high, at_high) = (next, at_next);
        } else {
            (low, at_low) = (next, at_next);
        }
        if high - low <= tolerance {
            break;
        }
    }
    Some(best)
}

/// The largest value of `f` on `low` to `high`: a grid finds the cell, golden section the top inside it.
///
/// Gives argument and value; `None` where the bracket is empty.
pub(super) fn maximum(f: impl Fn(f64) -> f64, low: f64, high: f64) -> Option<(f64, f64)> {
    const CELLS: u32 = 100;
    if low.is_nan() || high.is_nan() || low >= high {
        return None;
    }
    let width = (high - low) / f64::from(CELLS);
    let at = |cell: u32| {
        if cell == CELLS {
            high
        } else {
            low + width * f64::from(cell)
        }
    };
    let mut best = (low, f(low));
    for cell in 1..=CELLS {
        let value = f(at(cell));
        if value > best.1 {
            best = (at(cell), value);
        }
    }
    let (mut from, mut to) = ((best.0 - width).max(low), (best.0 + width).min(high));
    let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
    let (mut left, mut right) = (to - golden * (to - from), from + golden * (to - from));
    let (mut at_left, mut at_right) = (f(left), f(right));
    for _ in 0..STEPS {
        // Near a top the value changes with the square of the distance: this is far below its last digit.
        if to - from <= 1e-9 {
            break;
        }
        if at_left >= at_right {
            (to, right, at_right) = (right, left, at_left);
            left = to - golden * (to - from);
            at_left = f(left);
        } else {
            (from, left, at_left) = (left, right, at_right);
            right = from + golden * (to - from);
            at_right = f(right);
        }
    }
    let top = if at_left >= at_right {
        (left, at_left)
    } else {
        (right, at_right)
    };
    Some(if top.1 > best.1 { top } else { best })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_roots_inside_the_bracket() {
        let found = root(|x| x * x * x - 2.0, 0.0, 2.0, 1e-14).unwrap();
        assert!((found - 2.0_f64.cbrt()).abs() < 1e-13);
        let steep = root(|x: f64| x.exp() - 1e6, 0.0, 50.0, 1e-13).unwrap();
        assert!((steep - 1e6_f64.ln()).abs() < 1e-12);
        assert_eq!(root(|x| x, 0.0, 1.0, 1e-12), Some(0.0));
        assert_eq!(root(|x| x + 1.0, 0.0, 1.0, 1e-12), None);
        assert_eq!(root(|_| f64::NAN, 0.0, 1.0, 1e-12), None);
    }

    #[test]
    fn finds_the_top_inside_and_at_an_end() {
        let (x, value) = maximum(|x| 3.0 - (x - 0.7134) * (x - 0.7134), 0.3, 0.9).unwrap();
        assert!((x - 0.7134).abs() < 1e-7 && (value - 3.0).abs() < 1e-14);
        let (x, value) = maximum(|x| x, 0.3, 0.9).unwrap();
        assert!(x == 0.9 && value == 0.9);
        assert_eq!(maximum(|x| x, 0.9, 0.3), None);
    }
}
