//! Numbers, counts and names as they stand in lines and columns of text.

use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

/// Smaller shares of a table's largest value are round-off and shown as zero.
const ROUND_OFF: f64 = 1e-6;

/// Fixed decimals without a negative zero.
pub fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    let is_zero = text.starts_with('-') && !text.contains(|c: char| ('1'..='9').contains(&c));
    if is_zero { text[1..].into() } else { text }
}

/// Fixed decimals for values of one and more; three significant digits for smaller ones, with an
/// exponent below 0.0001. Zero for what is round-off beside `scale`, the largest value of its kind.
pub fn sized(value: f64, decimals: usize, scale: f64) -> String {
    let size = value.abs();
    if size <= ROUND_OFF * scale.abs() {
        return fixed(0.0, decimals);
    }
    match size {
        s if !s.is_finite() || s >= 1.0 => fixed(value, decimals),
        s if s < 1e-4 => format!("{value:.2e}"),
        s => fixed(value, decimals.max((2.0 - s.log10().floor()) as usize)),
    }
}

/// A count with its digits in groups of three.
pub fn grouped(count: usize) -> String {
    let digits = count.to_string();
    let mut text = String::new();
    for (n, digit) in digits.chars().enumerate() {
        if n > 0 && (digits.len() - n).is_multiple_of(3) {
            text.push(' ');
        }
        text.push(digit);
    }
    text
}

/// A count with its noun: `1 cell`, `12 000 cells`.
pub fn counted(count: usize, noun: &str) -> String {
    format!("{} {noun}{}", grouped(count), if count == 1 { "" } else { "s" })
}

/// A length in millimetres: up to four decimals, and for less than 0.1 mm four significant digits.
pub fn mm(metres: f64) -> String {
    let length = 1e3 * metres;
    if length != 0.0 && length.abs() < 0.1 {
        return crate::case::units::rounded(length, 4);
    }
    let text = format!("{length:.4}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".into() } else { text.to_string() }
}

/// A name of at most so many columns: its beginning and end, `…` for what is left out.
pub fn shortened(name: &str, columns: usize) -> String {
    if name.width() <= columns {
        return name.to_string();
    }
    // Numbers at the end tell the copies of a pattern apart.
    let end = (columns.saturating_sub(1)) / 3;
    let begin = columns.saturating_sub(1 + end);
    let tail: Vec<char> = fitting(name.chars().rev(), end).chars().rev().collect();
    format!("{}…{}", fitting(name.chars(), begin), tail.into_iter().collect::<String>())
}

/// The first characters that fit into so many columns.
fn fitting(signs: impl Iterator<Item = char>, columns: usize) -> String {
    let mut used = 0;
    signs
        .take_while(|c| {
            used += c.width().unwrap_or(0);
            used <= columns
        })
        .collect()
}

/// A name, shortened or filled with blanks to so many columns.
pub fn in_column(name: &str, columns: usize) -> String {
    let mut text = shortened(name, columns);
    let blanks = columns.saturating_sub(text.width());
    text.extend(std::iter::repeat_n(' ', blanks));
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_shown_without_negative_zeros_and_in_groups() {
        assert_eq!((fixed(-0.04, 1), fixed(-0.06, 1)), ("0.0".into(), "-0.1".into()));
        assert_eq!((grouped(999), grouped(1000)), ("999".into(), "1 000".into()));
        assert_eq!(grouped(1_234_567), "1 234 567");
        assert_eq!((counted(1, "cell"), counted(0, "cell")), ("1 cell".into(), "0 cells".into()));
    }

    #[test]
    fn small_values_keep_three_digits_and_round_off_is_zero() {
        let shown = [13.659, 0.5, 0.001, 1.234e-6, -0.0123, 0.0].map(|v| sized(v, 2, 0.0));
        assert_eq!(shown, ["13.66", "0.500", "0.00100", "1.23e-6", "-0.0123", "0.00"]);
        assert_eq!(sized(-3e-12, 2, 8.0), "0.00");
    }

    #[test]
    fn lengths_far_below_a_millimetre_are_not_shown_as_zero() {
        let shown = [0.0, 0.12, 1.0 / 3e3, 25e-6, 1.234e-8, -2e-10].map(mm);
        assert_eq!(shown, ["0", "120", "0.3333", "0.025", "1.234e-5", "-2e-7"]);
    }

    #[test]
    fn long_names_keep_both_ends_and_wide_ones_their_column() {
        let name = format!("{} 12", "fin ".repeat(80));
        let short = shortened(&name, 20);
        assert_eq!((short.width(), short.ends_with(" 12")), (20, true));
        assert!(short.contains('…'), "{short}");
        for name in ["kern", "放熱器", &"放熱".repeat(20)] {
            assert_eq!(in_column(name, 12).width(), 12, "{name}");
        }
    }
}
