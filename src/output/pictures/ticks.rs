//! Round numbers for axes.

/// Ticks of an axis and the decimals to write them with.
#[derive(Debug, Clone, PartialEq)]
pub struct Ticks {
    /// Places, rising.
    pub at: Vec<f64>,
    /// Distance between them.
    pub step: f64,
    /// Decimals.
    pub decimals: usize,
}

impl Ticks {
    /// Round places between two values, about `most` of them at most (at least two fit unless the
    /// range is nothing); steps are 1, 2 or 5 times a power of ten.
    pub fn of(from: f64, to: f64, most: usize) -> Ticks {
        let range = to - from;
        if !(range.is_finite() && range > 0.0) {
            return Ticks { at: vec![from], step: 1.0, decimals: 0 };
        }
        let rough = range / most.max(1) as f64;
        let power = 10f64.powf(rough.log10().floor());
        let step = [1.0, 2.0, 5.0, 10.0].map(|m| m * power).into_iter().find(|s| *s >= rough);
        let step = step.unwrap_or(10.0 * power);
        let slack = 1e-9 * range;
        let first = ((from - slack) / step).ceil() as i64;
        let last = ((to + slack) / step).floor() as i64;
        let at = (first..=last).map(|n| n as f64 * step).collect();
        // Steps are 1, 2 or 5 times a power of ten, so the power alone says how many decimals.
        let decimals = (-(step * 1.000_001).log10().floor()).max(0.0) as usize;
        Ticks { at, step, decimals: decimals.min(9) }
    }

    /// Powers of ten between two positive values.
    pub fn powers(from: f64, to: f64) -> Vec<i32> {
        let (first, last) = (from.log10().ceil() as i32, to.log10().floor() as i32);
        (first..=last).collect()
    }

    /// A tick as text.
    pub fn text(&self, value: f64) -> String {
        decimal(value, self.decimals)
    }
}

/// A number with fixed decimals, a minus sign proper, no negative zero.
pub fn decimal(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    let zero = !text.contains(|c: char| ('1'..='9').contains(&c));
    if zero { text.trim_start_matches('-').into() } else { text.replace('-', "−") }
}

/// A power of ten as text: `0.01`, `1`, `1000`, beyond that `1e-6`.
pub fn power(exponent: i32) -> String {
    match exponent {
        0..=4 => format!("{}", 10i64.pow(exponent as u32)),
        -2..=-1 => format!("{}", 10f64.powi(exponent)),
        _ => format!("1e{exponent}"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round_and_inside() {
        let ticks = Ticks::of(39.7, 80.3, 6);
        assert_eq!(ticks.at, [40.0, 50.0, 60.0, 70.0, 80.0]);
        let ticks = Ticks::of(0.0, 0.0431, 5);
        let texts: Vec<String> = ticks.at.iter().map(|t| ticks.text(*t)).collect();
        assert_eq!(texts, ["0.00", "0.01", "0.02", "0.03", "0.04"]);
        assert_eq!(Ticks::of(-20.0, 20.0, 4).text(-10.0), "−10");
        assert_eq!(Ticks::of(3.0, 3.0, 4).at, [3.0]);
    }

    #[test]
    fn powers_are_those_between() {
        assert_eq!(Ticks::powers(3e-7, 2.0), [-6, -5, -4, -3, -2, -1, 0]);
        assert_eq!([-6, -2, 0, 3].map(power), ["1e-6", "0.01", "1", "1000"]);
    }
}
