//! No text makes the reader panic, however mangled; what is accepted can be written and read back.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used, clippy::expect_used)]

use proptest::prelude::*;
use ventrise::case::{Case, units};

const SAMPLE: &str = include_str!("reference/every-key.toml");

/// Reads a text; accepted cases must survive being written and read again.
fn survives(text: &str) -> Result<(), TestCaseError> {
    match Case::parse(text, "case.toml") {
        Ok(case) => {
            let written = case.resolved();
            let again = Case::parse(&written, "case.toml");
            prop_assert!(again.is_ok(), "{}\n{written}", again.unwrap_err());
            let _ = case.warnings();
        }
        Err(errors) => {
            prop_assert!(!errors.errors().is_empty());
            let _ = errors.to_string();
        }
    }
    Ok(())
}

/// Words that are likely to meet the reader's corners.
fn words() -> impl Strategy<Value = String> {
    prop_oneof![
        Just("\"".to_string()),
        Just("[[".to_string()),
        Just("]".to_string()),
        Just("{".to_string()),
        Just("=".to_string()),
        Just("\n".to_string()),
        Just("\t".to_string()),
        Just("nan".to_string()),
        Just("-0".to_string()),
        Just("9999999999999999999999".to_string()),
        Just("0x7f".to_string()),
        Just("1979-05-27".to_string()),
        Just("\"1e308 m\"".to_string()),
        Just("\"-1e-320 mm\"".to_string()),
        Just("\"°\"".to_string()),
        Just("\"1 \u{00b2}\"".to_string()),
        Just("[[block]]\n".to_string()),
        Just("repeat = { count = 1000, step-x = \"1 um\" }".to_string()),
        Just("name = \"\\u0000\"".to_string()),
        "\\PC{0,6}",
    ]
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..Default::default() })]

    #[test]
    fn any_text(text in "(?s).{0,400}") {
        survives(&text)?;
    }

    #[test]
    fn a_case_with_a_piece_replaced(at in 0usize..2500, length in 0usize..40, word in words()) {
        let chars: Vec<char> = SAMPLE.chars().collect();
        let at = at.min(chars.len());
        let end = (at + length).min(chars.len());
        let mut text: String = chars[..at].iter().collect();
        text.push_str(&word);
        text.extend(&chars[end..]);
        survives(&text)?;
    }

    #[test]
    fn a_case_with_a_value_replaced(line in 0usize..110, word in words()) {
        let lines: Vec<String> = SAMPLE
            .lines()
            .enumerate()
            .map(|(n, l)| match l.split_once(" = ") {
                Some((key, _)) if n == line => format!("{key} = {word}"),
                _ => l.to_string(),
            })
            .collect();
        survives(&lines.join("\n"))?;
    }

    #[test]
    fn any_quantity_and_any_number_back(text in "\\PC{0,16}", si in -1e6f64..1e6) {
        for dimension in [units::Dimension::Length, units::Dimension::Temperature] {
            let _ = units::parse(&text, dimension);
        }
        for (unit, dimension) in [
            ("mm", units::Dimension::Length),
            ("degC", units::Dimension::Temperature),
            ("W", units::Dimension::Power),
            ("ft", units::Dimension::Length),
        ] {
            prop_assert_eq!(units::parse(&units::write(si, unit), dimension), Ok(si));
        }
    }
}
