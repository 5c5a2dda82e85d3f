//! How much room a text takes, and texts shortened to the room there is.
//!
//! The reader's sans-serif is not known. Widths here are those of a wide one, so that a narrower
//! one only leaves more room; `tests/pictures.rs` measures the drawn text in a browser.

/// Widths of the printable ASCII characters, space to tilde [1/1000 of the letter size], as read
/// from DejaVu Sans 2.37, one of the widest sans-serifs in common use.
const ASCII: [u16; 95] = [
    318, 401, 460, 838, 636, 950, 780, 275, 390, 390, 500, 838, 318, 361, 318, 337, 636, 636, 636,
    636, 636, 636, 636, 636, 636, 636, 337, 337, 838, 838, 838, 531, 1000, 684, 686, 698, 770, 632,
    575, 775, 752, 295, 295, 656, 557, 863, 748, 787, 603, 787, 695, 635, 611, 732, 684, 989, 685,
    611, 685, 390, 337, 390, 838, 500, 500, 613, 635, 550, 635, 615, 352, 635, 634, 278, 278, 579,
    278, 974, 634, 612, 635, 635, 411, 521, 392, 634, 592, 818, 592, 592, 525, 636, 337, 636, 838,
];
/// Bold letters are wider by this factor on average, words by a little more or less (DejaVu Sans
/// Bold).
const BOLD: f64 = 1.16;

/// Width of a text in letters of a size.
pub fn width(text: &str, size: f64, bold: bool) -> f64 {
    let sum: f64 = text.chars().map(letter).sum();
    sum * size * if bold { BOLD } else { 1.0 }
}

/// Width of one letter of size 1.
fn letter(c: char) -> f64 {
    let code = c as usize;
    match code {
        0x20..=0x7E => f64::from(ASCII[code - 0x20]) / 1000.0,
        // Degree, small powers, middle dot; en dash.
        0xB0 | 0xB2 | 0xB3 | 0xB7 | 0x2013 => 0.5,
        // Letters of European scripts.
        0xA0..=0x052F => 0.85,
        // Punctuation, arrows, signs of mathematics.
        0x2000..=0x2BFF => 1.0,
        // Square scripts and whatever else.
        _ => 1.2,
    }
}

/// The text if it fits into a width, else its beginning and end with an ellipsis between them:
/// numbers at the end tell copies apart.
pub fn shortened(text: &str, size: f64, bold: bool, room: f64) -> String {
    if width(text, size, bold) <= room {
        return text.into();
    }
    let letters: Vec<char> = text.chars().collect();
    let kept = |count: usize| {
        let tail = count / 3;
        let part = |letters: &[char]| letters.iter().collect::<String>();
        let (head, tail) = (&letters[..count - tail], &letters[letters.len() - tail..]);
        format!("{}…{}", part(head).trim_end(), part(tail).trim_start())
    };
    let fits = |short: &String| width(short, size, bold) <= room;
    (1..letters.len()).rev().map(kept).find(fits).unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_text_is_shortened_to_its_room_and_no_further() {
        assert_eq!(shortened("core", 10.0, false, 100.0), "core");
        let short = shortened("a rather long name of a part", 10.0, false, 80.0);
        assert!(short.starts_with("a rat") && short.ends_with("rt"), "{short}");
        assert!(width(&short, 10.0, false) <= 80.0);
        assert_eq!(shortened("mm", 10.0, false, 3.0), "");
    }
}
