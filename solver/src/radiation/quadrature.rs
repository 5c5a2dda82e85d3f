//! Adaptive quadrature: Gauss's three points, Kronrod's seven, halving where they disagree.

/// Nodes of the seven-point rule on (−1, 1), the positive ones; every second is Gauss's.
const NODES: [f64; 3] =
    [0.960_491_268_708_020_3, 0.774_596_669_241_483_4, 0.434_243_749_346_802_55];

/// Their weights, and that of the centre. Origin: Kronrod's extension of the three-point rule
/// [kronrod-1965], from memory; a test integrates every power that it must integrate exactly.
const WEIGHTS: [f64; 4] = [
    0.104_656_226_026_467_27,
    0.268_488_089_868_333_44,
    0.401_397_414_775_962_2,
    0.450_916_538_658_474_14,
];

/// Gauss's weights: at ±√(3/5), and at the centre.
const GAUSS: [f64; 2] = [5.0 / 9.0, 8.0 / 9.0];

/// How often an interval is halved at most.
const DEPTH: usize = 14;

/// Largest difference of the two rules that is accepted; the seven points are far better than
/// that wherever the function is smooth.
#[derive(Debug, Clone, Copy)]
pub(super) struct Tolerance {
    /// As a share of the whole integral.
    pub relative: f64,
    /// In itself.
    pub absolute: f64,
}

/// ∫₀¹ f.
pub(super) fn integral(mut f: impl FnMut(f64) -> f64, tolerance: Tolerance) -> f64 {
    let [whole, difference] = rules(&mut f, 0.0, 1.0);
    refined(&mut f, [0.0, 1.0], [whole, difference], whole, tolerance, DEPTH)
}

/// The integral over a span whose rules are known; `whole` is the latest of all.
fn refined(
    f: &mut impl FnMut(f64) -> f64,
    [a, b]: [f64; 2],
    [value, difference]: [f64; 2],
    whole: f64,
    tolerance: Tolerance,
    depth: usize,
) -> f64 {
    let bound = tolerance.absolute.max(tolerance.relative * whole.abs());
    if difference <= bound || depth == 0 {
        return value;
    }
    let middle = 0.5 * (a + b);
    let (low, high) = (rules(f, a, middle), rules(f, middle, b));
    let whole = whole + low[0] + high[0] - value;
    refined(f, [a, middle], low, whole, tolerance, depth - 1)
        + refined(f, [middle, b], high, whole, tolerance, depth - 1)
}

/// The seven-point rule on [a, b], and how far the three-point rule is from it.
fn rules(f: &mut impl FnMut(f64) -> f64, a: f64, b: f64) -> [f64; 2] {
    let (centre, half) = (0.5 * (a + b), 0.5 * (b - a));
    let at_centre = f(centre);
    let (mut seven, mut three) = (WEIGHTS[3] * at_centre, GAUSS[1] * at_centre);
    for (k, node) in NODES.iter().enumerate() {
        let pair = f(centre - half * node) + f(centre + half * node);
        seven += WEIGHTS[k] * pair;
        if k == 1 {
            three += GAUSS[0] * pair;
        }
    }
    [half * seven, half * (seven - three).abs()]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn seven_points_integrate_powers_up_to_eleven_exactly() {
        for power in 0..12 {
            let [value, _] = rules(&mut |x: f64| x.powi(power), 0.0, 1.0);
            let exact = 1.0 / f64::from(power + 1);
            assert!((value - exact).abs() < 1e-15, "{power}: {value} {exact}");
        }
        let [value, _] = rules(&mut |x: f64| x.powi(12), -1.0, 1.0);
        assert!((value - 2.0 / 13.0).abs() > 1e-6, "the twelfth power is out of reach");
    }

    #[test]
    fn a_kink_and_a_narrow_peak_are_found() {
        let tolerance = Tolerance { relative: 1e-5, absolute: 1e-9 };
        let kink = integral(|x| (x - 0.3).abs(), tolerance);
        assert!((kink - 0.29).abs() < 1e-5 * 0.29, "{kink}");
        // ∫₀¹ d/(d² + x²) dx = atan(1/d)
        let d: f64 = 1e-3;
        let peak = integral(|x| d / (d * d + x * x), tolerance);
        assert!((peak / (1.0 / d).atan() - 1.0).abs() < 1e-5, "{peak}");
    }
}
