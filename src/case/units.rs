//! Units: text such as `"80 mm"` to SI and back. The one place that knows unit symbols.
//!
//! A unit turns a number v into SI as (v + offset)·numerator / denominator; the quotient is kept
//! as two numbers so that "9 mm" becomes exactly 0.009 m.

use std::fmt::Write as _;

use strsim::damerau_levenshtein;

/// What a number measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Dimension {
    /// Length [m].
    Length,
    /// Power, heat released per time [W].
    Power,
    /// Absolute temperature [K].
    Temperature,
    /// Angle [rad].
    Angle,
    /// Pressure [Pa].
    Pressure,
    /// Volume flow [m³/s].
    VolumeFlow,
    /// Thermal conductivity [W/(m·K)].
    Conductivity,
    /// Film coefficient [W/(m²·K)].
    Film,
    /// Heat flux [W/m²].
    Flux,
    /// Thermal resistance times area [K·m²/W].
    AreaResistance,
    /// Thermal resistance [K/W].
    Resistance,
    /// Specific heat [J/(kg·K)].
    SpecificHeat,
    /// Density [kg/m³].
    Density,
    /// Dynamic viscosity [Pa·s].
    Viscosity,
    /// Kinematic viscosity or diffusivity [m²/s].
    Diffusivity,
    /// Thermal expansion coefficient [1/K].
    Expansion,
    /// Relative change by temperature [1/K].
    Slope,
    /// Time [s].
    Time,
    /// Share of a whole [-].
    Share,
}

impl Dimension {
    /// Name in messages.
    pub fn name(self) -> &'static str {
        match self {
            Dimension::Length => "length",
            Dimension::Power => "power",
            Dimension::Temperature => "temperature",
            Dimension::Angle => "angle",
            Dimension::Pressure => "pressure",
            Dimension::VolumeFlow => "volume flow",
            Dimension::Conductivity => "thermal conductivity",
            Dimension::Film => "film coefficient",
            Dimension::Flux => "heat flux",
            Dimension::AreaResistance => "area resistance",
            Dimension::Resistance => "thermal resistance",
            Dimension::SpecificHeat => "specific heat",
            Dimension::Density => "density",
            Dimension::Viscosity => "dynamic viscosity",
            Dimension::Diffusivity => "kinematic viscosity",
            Dimension::Expansion => "expansion coefficient",
            Dimension::Slope => "change by temperature",
            Dimension::Time => "time",
            Dimension::Share => "percentage",
        }
    }

    /// Name with its article.
    pub fn a_name(self) -> String {
        let article = match self {
            Dimension::Angle | Dimension::AreaResistance | Dimension::Expansion => "an",
            _ => "a",
        };
        format!("{article} {}", self.name())
    }

    /// The unit used in remedies and in written cases.
    pub fn usual_unit(self) -> &'static str {
        match self {
            Dimension::Length => "mm",
            Dimension::Power => "W",
            Dimension::Temperature => "degC",
            Dimension::Angle => "deg",
            Dimension::Pressure => "Pa",
            Dimension::VolumeFlow => "m3/h",
            Dimension::Conductivity => "W/(m K)",
            Dimension::Film => "W/(m2 K)",
            Dimension::Flux => "W/m2",
            Dimension::AreaResistance => "K m2/W",
            Dimension::Resistance => "K/W",
            Dimension::SpecificHeat => "J/(kg K)",
            Dimension::Density => "kg/m3",
            Dimension::Viscosity => "Pa s",
            Dimension::Diffusivity => "m2/s",
            Dimension::Expansion => "1/K",
            Dimension::Slope => "%/K",
            Dimension::Time => "s",
            Dimension::Share => "%",
        }
    }

    /// Every accepted unit of this dimension, in its first spelling.
    pub fn units(self) -> impl Iterator<Item = &'static str> {
        UNITS
            .iter()
            .filter(move |u| u.dimension == self)
            .filter_map(|u| u.spellings.first())
            .copied()
    }

    /// Every spelling of its units, as they are after signs for the same thing have been made one.
    pub fn spellings(self) -> impl Iterator<Item = &'static str> {
        UNITS.iter().filter(move |u| u.dimension == self).flat_map(|u| u.spellings).copied()
    }
}

/// A unit and its spellings (after [`normalised`]).
struct Unit {
    spellings: &'static [&'static str],
    dimension: Dimension,
    offset: f64,
    numerator: f64,
    denominator: f64,
}

const fn unit(
    spellings: &'static [&'static str],
    dimension: Dimension,
    numerator: f64,
    denominator: f64,
) -> Unit {
    Unit { spellings, dimension, offset: 0.0, numerator, denominator }
}

/// All units. Inch, foot and Fahrenheit by definition (0.0254 m, 0.3048 m, 5/9 K);
/// mmH2O and inH2O are the conventional 9.80665 Pa and 25.4 times that (NIST SP 811, appendix B.8).
const UNITS: &[Unit] = &[
    unit(&["mm"], Dimension::Length, 1.0, 1e3),
    unit(&["m"], Dimension::Length, 1.0, 1.0),
    unit(&["cm"], Dimension::Length, 1.0, 1e2),
    unit(&["um"], Dimension::Length, 1.0, 1e6),
    unit(&["in"], Dimension::Length, 254.0, 1e4),
    unit(&["ft"], Dimension::Length, 3048.0, 1e4),
    unit(&["W"], Dimension::Power, 1.0, 1.0),
    unit(&["mW"], Dimension::Power, 1.0, 1e3),
    unit(&["kW"], Dimension::Power, 1e3, 1.0),
    Unit { offset: 273.15, ..unit(&["degC"], Dimension::Temperature, 1.0, 1.0) },
    unit(&["K"], Dimension::Temperature, 1.0, 1.0),
    Unit { offset: 459.67, ..unit(&["degF"], Dimension::Temperature, 5.0, 9.0) },
    unit(&["deg"], Dimension::Angle, std::f64::consts::PI, 180.0),
    unit(&["Pa"], Dimension::Pressure, 1.0, 1.0),
    unit(&["kPa"], Dimension::Pressure, 1e3, 1.0),
    unit(&["hPa"], Dimension::Pressure, 1e2, 1.0),
    unit(&["mmH2O"], Dimension::Pressure, 9.80665, 1.0),
    unit(&["inH2O"], Dimension::Pressure, 249.08891, 1.0),
    unit(&["m3/h"], Dimension::VolumeFlow, 1.0, 3600.0),
    unit(&["m3/s"], Dimension::VolumeFlow, 1.0, 1.0),
    unit(&["l/s", "L/s"], Dimension::VolumeFlow, 1.0, 1e3),
    unit(&["l/min", "L/min"], Dimension::VolumeFlow, 1.0, 6e4),
    unit(&["cfm"], Dimension::VolumeFlow, 0.028316846592, 60.0),
    unit(
        &["W/(m K)", "W/(K m)", "W/(mK)", "W/mK", "W/m K", "W/m/K"],
        Dimension::Conductivity,
        1.0,
        1.0,
    ),
    unit(
        &["W/(m2 K)", "W/(K m2)", "W/(m2K)", "W/m2K", "W/m2 K", "W/m2/K"],
        Dimension::Film,
        1.0,
        1.0,
    ),
    unit(&["W/m2"], Dimension::Flux, 1.0, 1.0),
    unit(&["W/cm2"], Dimension::Flux, 1e4, 1.0),
    unit(&["K m2/W", "m2 K/W", "m2K/W", "Km2/W"], Dimension::AreaResistance, 1.0, 1.0),
    unit(&["K cm2/W", "cm2 K/W", "cm2K/W", "Kcm2/W"], Dimension::AreaResistance, 1.0, 1e4),
    unit(&["K/W"], Dimension::Resistance, 1.0, 1.0),
    unit(
        &["J/(kg K)", "J/(K kg)", "J/(kgK)", "J/kgK", "J/kg K", "J/kg/K"],
        Dimension::SpecificHeat,
        1.0,
        1.0,
    ),
    unit(
        &["kJ/(kg K)", "kJ/(kgK)", "kJ/kgK", "kJ/kg K", "kJ/kg/K"],
        Dimension::SpecificHeat,
        1e3,
        1.0,
    ),
    unit(&["kg/m3"], Dimension::Density, 1.0, 1.0),
    unit(&["g/cm3"], Dimension::Density, 1e3, 1.0),
    unit(&["Pa s", "Pas", "kg/(m s)"], Dimension::Viscosity, 1.0, 1.0),
    unit(&["m2/s"], Dimension::Diffusivity, 1.0, 1.0),
    unit(&["1/K", "/K", "K-1", "per K"], Dimension::Expansion, 1.0, 1.0),
    unit(&["%/K"], Dimension::Slope, 1.0, 1e2),
    unit(&["s"], Dimension::Time, 1.0, 1.0),
    unit(&["min"], Dimension::Time, 60.0, 1.0),
    unit(&["h"], Dimension::Time, 3600.0, 1.0),
    unit(&["%"], Dimension::Share, 1.0, 1e2),
];

/// Why a text is no quantity of the dimension asked for.
#[derive(Debug, Clone, PartialEq)]
pub enum UnitError {
    /// The text does not begin with a number.
    NoNumber,
    /// A comma stands where the decimal point belongs; the text with a point.
    Comma(String),
    /// The number is not finite.
    NotFinite,
    /// Nothing follows the number.
    NoUnit {
        /// The number as typed.
        number: String,
    },
    /// The unit is in no table.
    UnknownUnit {
        /// The number as typed.
        number: String,
        /// The unit as typed.
        unit: String,
        /// The nearest accepted unit, if one is near.
        nearest: Option<&'static str>,
    },
    /// The unit measures something else.
    WrongDimension {
        /// The number as typed.
        number: String,
        /// What the unit measures.
        is: Dimension,
    },
}

/// Reads a quantity such as `"80 mm"` and returns it in SI; a conversion keeps 15 digits.
///
/// # Errors
/// No number, no unit, an unknown unit, a unit of another dimension, a number that is not finite.
pub fn parse(text: &str, dimension: Dimension) -> Result<f64, UnitError> {
    let text = text.trim().replace('\u{2212}', "-");
    let lower = text.trim_start_matches(['+', '-']).to_ascii_lowercase();
    if lower.starts_with("inf") || lower.starts_with("nan") {
        return Err(UnitError::NotFinite);
    }
    let length = number_length(&text);
    let (number, rest) = text.split_at(length);
    if number.is_empty() {
        return Err(UnitError::NoNumber);
    }
    if rest.starts_with(',') && rest[1..].starts_with(|c: char| c.is_ascii_digit()) {
        return Err(UnitError::Comma(text.replacen(',', ".", 1)));
    }
    let value: f64 = number.parse().map_err(|_| UnitError::NoNumber)?;
    let typed = rest.trim();
    if typed.is_empty() {
        return Err(UnitError::NoUnit { number: number.to_string() });
    }
    let symbol = normalised(typed);
    let Some(unit) = UNITS.iter().find(|u| u.spellings.contains(&symbol.as_str())) else {
        return Err(UnitError::UnknownUnit {
            number: number.to_string(),
            unit: typed.to_string(),
            nearest: nearest_unit(&symbol, dimension),
        });
    };
    if unit.dimension != dimension {
        return Err(UnitError::WrongDimension { number: number.to_string(), is: unit.dimension });
    }
    let mut si = (value + unit.offset) * unit.numerator / unit.denominator;
    if (unit.offset, unit.numerator, unit.denominator) != (0.0, 1.0, 1.0) {
        // 86 degF is 303.15 K, not 303.15000000000003 K.
        si = rounded_value(si, 15);
    }
    if si.is_finite() { Ok(si) } else { Err(UnitError::NotFinite) }
}

/// Writes an SI value in a unit so that [`parse`] reads the same number back: the shortest text of
/// up to 15 digits that does, else all digits, else the value in the base unit of its dimension.
pub fn write(si: f64, unit_symbol: &str) -> String {
    let Some(unit) = UNITS.iter().find(|u| u.spellings.contains(&unit_symbol)) else {
        return format!("{si}");
    };
    let value = si * unit.denominator / unit.numerator - unit.offset;
    for digits in [12, 14, 15, 16] {
        let text = format!("{} {unit_symbol}", rounded(value, digits));
        if parse(&text, unit.dimension) == Ok(si) {
            return text;
        }
    }
    let base = UNITS
        .iter()
        .find(|u| {
            u.dimension == unit.dimension
                && (u.offset, u.numerator, u.denominator) == (0.0, 1.0, 1.0)
        })
        .and_then(|u| u.spellings.first());
    match base {
        Some(symbol) => format!("{} {symbol}", number(si)),
        None => format!("{} {unit_symbol}", number(value)),
    }
}

/// A value rounded to so many significant digits, in its shortest text.
pub fn rounded(value: f64, digits: usize) -> String {
    number(rounded_value(value, digits))
}

/// A value rounded to so many significant digits.
pub fn rounded_value(value: f64, digits: usize) -> f64 {
    format!("{:.*e}", digits.saturating_sub(1), value).parse().unwrap_or(value)
}

/// Shortest text that reads back to the same number, with an exponent when far from one.
pub fn number(value: f64) -> String {
    let size = value.abs();
    let mut text = String::new();
    let written = if size != 0.0 && !(1e-4..1e9).contains(&size) {
        write!(text, "{value:e}")
    } else {
        write!(text, "{}", if value == 0.0 { 0.0 } else { value })
    };
    debug_assert!(written.is_ok());
    text
}

/// Length of the number a text begins with: sign, digits, point, exponent.
fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let digits = |from: usize| bytes[from..].iter().take_while(|b| b.is_ascii_digit()).count();
    let sign = usize::from(matches!(bytes.first(), Some(b'+' | b'-')));
    let whole = digits(sign);
    let mut end = sign + whole;
    let mut fraction = 0;
    if bytes.get(end) == Some(&b'.') {
        fraction = digits(end + 1);
        end += 1 + fraction;
    }
    if whole + fraction == 0 {
        return 0;
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let exponent_sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        let exponent = digits((end + 1 + exponent_sign).min(bytes.len()));
        if exponent > 0 {
            end += 1 + exponent_sign + exponent;
        }
    }
    end
}

/// One spelling for the ways a symbol is typed: dots and stars as blanks, raised digits as plain
/// ones, the degree sign as `deg`, the Greek mu as `u`, no blanks beside `/` and brackets.
fn normalised(symbol: &str) -> String {
    let mut plain = String::with_capacity(symbol.len());
    for c in symbol.chars() {
        match c {
            '·' | '⋅' | '*' | '×' | '\u{a0}' | '\u{202f}' | '\t' => plain.push(' '),
            '²' => plain.push('2'),
            '³' => plain.push('3'),
            '¹' => plain.push('1'),
            '⁻' => plain.push('-'),
            '^' => {}
            '°' | 'º' => plain.push_str("deg"),
            '℃' => plain.push_str("degC"),
            '℉' => plain.push_str("degF"),
            'µ' | 'μ' => plain.push('u'),
            '₂' => plain.push('2'),
            c => plain.push(c),
        }
    }
    let mut text = plain.split_whitespace().collect::<Vec<_>>().join(" ");
    for joint in ["/", "(", ")"] {
        text = text.replace(&format!(" {joint}"), joint).replace(&format!("{joint} "), joint);
    }
    match text.as_str() {
        "deg C" => "degC".to_string(),
        "deg F" => "degF".to_string(),
        _ => text,
    }
}

/// The nearest accepted symbol: same letters in another case first, then by edit distance; units
/// of the wanted dimension win ties.
fn nearest_unit(symbol: &str, dimension: Dimension) -> Option<&'static str> {
    let distance = |spelling: &str, of: Dimension| {
        let edits = damerau_levenshtein(spelling, symbol);
        let folded = damerau_levenshtein(&spelling.to_lowercase(), &symbol.to_lowercase());
        2 * edits.min(2 * folded) + usize::from(of != dimension)
    };
    let (best, unit, spelling) = UNITS
        .iter()
        .flat_map(|u| u.spellings.iter().map(move |s| (distance(s, u.dimension), u, *s)))
        .min_by_key(|(d, ..)| *d)?;
    let near =
        best <= 3 || (best <= 5 && spelling.len() > 3) || symbol.eq_ignore_ascii_case(spelling);
    let hopeless =
        spelling.chars().count() <= 2 && best > 1 && !spelling.eq_ignore_ascii_case(symbol);
    match () {
        () if matches!(symbol, "C" | "F") && dimension == Dimension::Temperature => {
            Some(if symbol == "C" { "degC" } else { "degF" })
        }
        () if near && !(hopeless && unit.dimension != dimension) => unit.spellings.first().copied(),
        () => None,
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used, clippy::expect_used)]
mod tests {
    use super::*;

    #[test]
    fn every_unit_of_the_table_reads_as_its_si_value() {
        use Dimension::*;
        let pi = std::f64::consts::PI;
        // By the definitions in the SI brochure (9th edition) and NIST SP 811, appendix B.
        for (text, dimension, si) in [
            ("1 m", Length, 1.0),
            ("80 mm", Length, 0.08),
            ("80mm", Length, 0.08),
            ("9 mm", Length, 0.009),
            (" 2.5  cm ", Length, 0.025),
            ("35 um", Length, 35e-6),
            ("35 µm", Length, 35e-6),
            ("35 μm", Length, 35e-6),
            ("1 in", Length, 0.0254),
            ("1 ft", Length, 0.3048),
            ("32 W", Power, 32.0),
            ("250 mW", Power, 0.25),
            ("1.2 kW", Power, 1200.0),
            ("-3 W", Power, -3.0),
            ("\u{2212}3 W", Power, -3.0),
            ("40 degC", Temperature, 313.15),
            ("40 °C", Temperature, 313.15),
            ("40°C", Temperature, 313.15),
            ("40 ℃", Temperature, 313.15),
            ("-40 degF", Temperature, 233.15),
            ("86 °F", Temperature, 303.15),
            ("300 K", Temperature, 300.0),
            ("90 deg", Angle, pi / 2.0),
            ("90°", Angle, pi / 2.0),
            ("2 Pa", Pressure, 2.0),
            ("101.325 kPa", Pressure, 101_325.0),
            ("1013.25 hPa", Pressure, 101_325.0),
            ("1 mmH2O", Pressure, 9.80665),
            ("1 mmH₂O", Pressure, 9.80665),
            ("1 inH2O", Pressure, 249.08891),
            ("36 m3/h", VolumeFlow, 0.01),
            ("36 m³/h", VolumeFlow, 0.01),
            ("36 m^3 / h", VolumeFlow, 0.01),
            ("0.5 m3/s", VolumeFlow, 0.5),
            ("5 l/s", VolumeFlow, 0.005),
            ("60 l/min", VolumeFlow, 0.001),
            ("1 cfm", VolumeFlow, 4.7194744320e-4),
            ("0.2 W/(m K)", Conductivity, 0.2),
            ("0.2 W/(m·K)", Conductivity, 0.2),
            ("0.2 W/(m*K)", Conductivity, 0.2),
            ("0.2 W/mK", Conductivity, 0.2),
            ("0.2W/(mK)", Conductivity, 0.2),
            ("0.2 W / (m K)", Conductivity, 0.2),
            ("8 W/(m2 K)", Film, 8.0),
            ("8 W/(m² K)", Film, 8.0),
            ("8 W/m²K", Film, 8.0),
            ("100 W/m2", Flux, 100.0),
            ("1 W/cm²", Flux, 1e4),
            ("0.6 K m2/W", AreaResistance, 0.6),
            ("0.6 K·cm²/W", AreaResistance, 0.6e-4),
            ("0.6 cm2 K/W", AreaResistance, 0.6e-4),
            ("2 K/W", Resistance, 2.0),
            ("1007 J/(kg K)", SpecificHeat, 1007.0),
            ("1.007 kJ/(kg K)", SpecificHeat, 1007.0),
            ("2700 kg/m3", Density, 2700.0),
            ("2.7 g/cm3", Density, 2700.0),
            ("1.95e-5 Pa s", Viscosity, 1.95e-5),
            ("1.95E-5 Pa·s", Viscosity, 1.95e-5),
            ("1.5e-5 m2/s", Diffusivity, 1.5e-5),
            ("0.0032 1/K", Expansion, 0.0032),
            ("0.0032 K⁻¹", Expansion, 0.0032),
            ("2 s", Time, 2.0),
            ("2 min", Time, 120.0),
            ("2 h", Time, 7200.0),
            ("60 %", Share, 0.6),
            ("60%", Share, 0.6),
            (".5 m", Length, 0.5),
            ("5. m", Length, 5.0),
            ("+5 m", Length, 5.0),
        ] {
            let read = parse(text, dimension);
            let read = read.unwrap_or_else(|e| panic!("{text:?}: {e:?}"));
            // 15 digits are kept in a conversion.
            assert!((read - si).abs() <= 5e-15 * si.abs(), "{text:?} reads as {read}, not {si}");
        }
    }

    #[test]
    fn symbols_are_exact_in_case_and_near_misses_are_named() {
        for (text, dimension, nearest) in [
            ("80 MM", Dimension::Length, Some("mm")),
            ("80 Mm", Dimension::Length, Some("mm")),
            ("5 w", Dimension::Power, Some("W")),
            ("5 kw", Dimension::Power, Some("kW")),
            ("40 C", Dimension::Temperature, Some("degC")),
            ("40 degc", Dimension::Temperature, Some("degC")),
            ("5 Watt", Dimension::Power, None),
            ("5 parsec", Dimension::Length, None),
            ("5 W/(mm K)", Dimension::Conductivity, Some("W/(m K)")),
        ] {
            let Err(UnitError::UnknownUnit { nearest: found, .. }) = parse(text, dimension) else {
                panic!("{text:?}: {:?}", parse(text, dimension));
            };
            assert_eq!(found, nearest, "{text:?}");
        }
    }

    #[test]
    fn what_is_no_quantity_is_told_apart() {
        let length = |text| parse(text, Dimension::Length).unwrap_err();
        assert_eq!(length(""), UnitError::NoNumber);
        assert_eq!(length("mm"), UnitError::NoNumber);
        assert_eq!(length("e5 mm"), UnitError::NoNumber);
        assert_eq!(length("80"), UnitError::NoUnit { number: "80".into() });
        assert_eq!(length("1,5 mm"), UnitError::Comma("1.5 mm".into()));
        assert_eq!(length("inf mm"), UnitError::NotFinite);
        assert_eq!(length("-NaN mm"), UnitError::NotFinite);
        assert_eq!(length("1e400 mm"), UnitError::NotFinite);
        let wrong = UnitError::WrongDimension { number: "3".into(), is: Dimension::Power };
        assert_eq!(length("3 W"), wrong);
    }

    #[test]
    fn spellings_are_unique_and_normal() {
        let mut seen = std::collections::HashSet::new();
        for unit in UNITS {
            for spelling in unit.spellings {
                assert!(seen.insert(spelling), "{spelling} twice");
                assert_eq!(normalised(spelling), *spelling);
            }
        }
    }

    #[test]
    fn written_values_are_short_and_read_back() {
        assert_eq!(write(0.009, "mm"), "9 mm");
        assert_eq!(write(313.15, "degC"), "40 degC");
        assert_eq!(parse(&write(0.1 + 0.2, "mm"), Dimension::Length), Ok(0.1 + 0.2));
        assert_eq!(write(1.95e-5, "Pa s"), "1.95e-5 Pa s");
    }
}
