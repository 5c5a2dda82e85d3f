//! Colours: paper and ink, colours of lines, and colour scales for fields.
//!
//! The scales are published ones, re-stepped so that equal steps of a value are equal steps of
//! lightness (CIE L*): differences look alike along the whole scale, with any kind of colour
//! vision and on a grey printer.
//!
//! - temperature: cividis (J. R. Nuñez, C. R. Anderton, R. S. Renslow, PLoS ONE 13(7), 2018,
//!   e0199239), made for colour-blind eyes, dark for cold;
//! - speed: "PuBuGn" and heat flux: "OrRd" (M. Harrower, C. A. Brewer, The Cartographic Journal
//!   40(1), 2003, 27-37), light for little, so that still air stays the colour of the paper.
//!
//! Lines of a chart differ in lightness and dashes too, never in hue alone.

use colorous::{CIVIDIS, Gradient, ORANGE_RED, PURPLE_BLUE_GREEN};

/// Background.
pub const PAPER: &str = "#fdfcf9";
/// Lines and letters.
pub const INK: &str = "#1f2a30";
/// Lesser letters.
pub const FAINT: &str = "#55626a";
/// Lines of grids.
pub const GRID: &str = "#d9d8d1";
/// Mesh lines.
pub const MESH: &str = "#b9c2c4";
/// Blocks.
pub const SOLID: &str = "#c9ccc8";
/// Blocks that release heat.
pub const HEATED: &str = "#e3a57c";
/// Blocks that are cooled.
pub const COOLED: &str = "#a9c7dc";
/// What deserves a look: limits.
pub const ALARM: &str = "#9c2f1b";
/// What is measured: probes, air.
pub const AIR_MARK: &str = "#1d5d6b";
/// Lines of charts, dark to light.
pub const LINES: [&str; 6] = ["#12343b", "#9c2f1b", "#2f7f8f", "#c77a2b", "#7a5c86", "#6f8f3a"];
/// Their dashes.
pub const DASHES: [&str; 6] = ["", "7 3", "2 2.5", "9 3 2 3", "4 2", "12 3"];

/// What a colour scale is for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Scale {
    /// Cold to hot.
    Temperature,
    /// Still to fast.
    Speed,
    /// Little to much heat.
    HeatFlux,
}

/// Number of colours of a scale.
pub const STEPS: usize = 120;

impl Scale {
    /// The scale's colours, evenly stepped in lightness.
    pub fn colours(self) -> [[u8; 3]; STEPS] {
        let (gradient, from, to) = match self {
            Scale::Temperature => (CIVIDIS, 0.0, 1.0),
            Scale::Speed => (PURPLE_BLUE_GREEN, 0.0, 1.0),
            Scale::HeatFlux => (ORANGE_RED, 0.0, 1.0),
        };
        even(gradient, from, to)
    }
}

/// Colours of a gradient between two places, re-stepped evenly in lightness, which must rise or
/// fall throughout.
fn even(gradient: Gradient, from: f64, to: f64) -> [[u8; 3]; STEPS] {
    const FINE: usize = 2000;
    let at = |n: usize| {
        let c = gradient.eval_continuous(from + (to - from) * n as f64 / FINE as f64);
        [c.r, c.g, c.b]
    };
    let light: Vec<f64> = (0..=FINE).map(|n| lightness(at(n))).collect();
    let (first, last) = (light[0], light[FINE]);
    let mut n = 0;
    std::array::from_fn(|step| {
        let wanted = first + (last - first) * step as f64 / (STEPS - 1) as f64;
        let passed = |l: f64| if last > first { l >= wanted } else { l <= wanted };
        while n < FINE && !passed(light[n]) {
            n += 1;
        }
        at(n)
    })
}

/// CIE lightness L* of an sRGB colour, 0 to 100 (IEC 61966-2-1 for the luminance, CIE 15 for L*).
pub fn lightness(colour: [u8; 3]) -> f64 {
    let linear = colour.map(|c| {
        let c = f64::from(c) / 255.0;
        if c <= 0.040_45 { c / 12.92 } else { ((c + 0.055) / 1.055).powf(2.4) }
    });
    let y = 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2];
    if y > 216.0 / 24_389.0 { 116.0 * y.cbrt() - 16.0 } else { y * 24_389.0 / 27.0 }
}

/// A colour of thin lines on a colour: darker on light ones, lighter on dark ones.
pub fn set_off(colour: [u8; 3]) -> [u8; 3] {
    let towards = if lightness(colour) > 45.0 { 0.0 } else { 255.0 };
    colour.map(|c| (0.66 * f64::from(c) + 0.34 * towards) as u8)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lightness_of_known_colours() {
        assert!(lightness([0; 3]).abs() < 1e-9 && (lightness([255; 3]) - 100.0).abs() < 1e-6);
        // sRGB mid grey 119 is L* 50.03 (CIE definition worked by hand).
        assert!((lightness([119; 3]) - 50.03).abs() < 0.02, "{}", lightness([119; 3]));
    }

    /// Also what a grey printer and an eye without one kind of cone go by.
    #[test]
    fn scales_step_evenly_in_lightness_over_a_wide_range() {
        for scale in [Scale::Temperature, Scale::Speed, Scale::HeatFlux] {
            let light = scale.colours().map(lightness);
            let span = light[STEPS - 1] - light[0];
            assert!(span.abs() > 55.0, "{scale:?}: {span}");
            let step = span / (STEPS - 1) as f64;
            for (n, l) in light.iter().enumerate() {
                let wanted = light[0] + step * n as f64;
                // Colours have whole numbers from 0 to 255, about 0.4 of lightness apart.
                assert!((l - wanted).abs() < 0.6, "{scale:?} {n}: {l} {wanted}");
            }
        }
    }
}
