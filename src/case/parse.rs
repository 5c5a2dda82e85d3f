//! Reading values out of TOML tables, with their places; mistakes are collected on the way.

use std::ops::{Range, RangeInclusive};

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::error::{CaseError, Cause};
use super::units::{self, Dimension, UnitError};

/// Highest temperature that a case may name, 3000 °C [K]: a slip of the unit, or no housing.
const HOTTEST: f64 = 3273.15;

/// A value and its byte range in the text.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Located<T> {
    pub value: T,
    pub span: Range<usize>,
}

/// One table of the file while it is read.
#[derive(Debug, Clone)]
pub(super) struct Scope<'d> {
    pub table: &'d DeTable<'d>,
    /// Byte range of the table (of its header, or of the inline table).
    pub span: Range<usize>,
    /// How messages call it, such as `block "core"`.
    pub place: String,
}

impl<'d> Scope<'d> {
    pub fn new(table: &'d DeTable<'d>, span: Range<usize>, place: &str) -> Self {
        Scope { table, span, place: place.to_string() }
    }

    pub fn get(&self, key: &str) -> Option<&'d Spanned<DeValue<'d>>> {
        self.table.iter().find(|(k, _)| k.get_ref() == key).map(|(_, v)| v)
    }

    pub fn has(&self, key: &str) -> bool {
        self.get(key).is_some()
    }

    /// A table within the table, as it was named in messages.
    pub fn table(&self, key: &str) -> Option<Scope<'d>> {
        let value = self.get(key)?;
        match value.get_ref() {
            DeValue::Table(table) => Some(Scope::new(table, value.span(), key)),
            _ => None,
        }
    }

    /// Byte range of a key's value, or of the table when the key is absent.
    pub fn span_of(&self, key: &str) -> Range<usize> {
        self.get(key).map_or(self.span.clone(), Spanned::span)
    }
}

/// Collects mistakes and warnings while a text is read.
#[derive(Debug)]
pub(super) struct Reader<'t> {
    text: &'t str,
    pub errors: Vec<CaseError>,
    pub warnings: Vec<CaseError>,
}

impl<'t> Reader<'t> {
    pub fn new(text: &'t str) -> Self {
        Reader { text, errors: Vec::new(), warnings: Vec::new() }
    }

    /// The text as typed at a byte range, shortened to one line.
    pub fn typed(&self, span: &Range<usize>) -> String {
        let raw = self.text.get(span.clone()).unwrap_or("");
        let line = raw.split_whitespace().collect::<Vec<_>>().join(" ");
        if line.chars().count() > 60 {
            let head: String = line.chars().take(57).collect();
            format!("{head}...")
        } else {
            line
        }
    }

    pub fn report(&mut self, error: CaseError) {
        self.errors.push(error);
    }

    pub fn warn(&mut self, scope: &Scope, span: Range<usize>, message: impl Into<String>) {
        self.warnings.push(CaseError::new(Cause::Range, &scope.place, message).at(span));
    }

    /// A text.
    pub fn text(&mut self, scope: &Scope, key: &str) -> Option<Located<String>> {
        let value = scope.get(key)?;
        match value.get_ref() {
            DeValue::String(text) if text.trim().is_empty() => {
                let message = format!("{key} is empty");
                self.report(CaseError::new(Cause::Kind, &scope.place, message).at(value.span()));
                None
            }
            DeValue::String(text) => {
                let text = text.trim();
                if let Some(sign) = text.chars().find(|c| is_unprintable(*c)) {
                    let message = format!(
                        "{key} holds the control character U+{:04X}, which no screen or table can \
                         show",
                        u32::from(sign)
                    );
                    let error = CaseError::new(Cause::Kind, &scope.place, message);
                    self.report(error.at(value.span()).hint("write it without"));
                    return None;
                }
                Some(Located { value: text.to_string(), span: value.span() })
            }
            _ => {
                self.wrong_kind(scope, key, value, "a text in quotes belongs here");
                None
            }
        }
    }

    /// One of some words.
    pub fn word(
        &mut self,
        scope: &Scope,
        key: &str,
        words: &[&'static str],
        later: &[&str],
    ) -> Option<Located<&'static str>> {
        let typed = self.text(scope, key)?;
        if let Some(word) = words.iter().find(|w| **w == typed.value) {
            return Some(Located { value: word, span: typed.span });
        }
        self.not_a_word(scope, key, &typed, words, later);
        None
    }

    /// A number without unit: a plain TOML number.
    pub fn number(&mut self, scope: &Scope, key: &str) -> Option<Located<f64>> {
        let value = scope.get(key)?;
        let number = match value.get_ref() {
            DeValue::Integer(i) => integer(i).map(|i| i as f64),
            DeValue::Float(f) => f.as_str().parse::<f64>().ok(),
            DeValue::String(text) => {
                let remedy = if text.trim().parse::<f64>().is_ok() {
                    format!("a plain number belongs here: {key} = {}", text.trim())
                } else {
                    "a plain number without quotes or unit belongs here".to_string()
                };
                self.wrong_kind(scope, key, value, &remedy);
                return None;
            }
            _ => {
                self.wrong_kind(scope, key, value, "a plain number belongs here");
                return None;
            }
        };
        let number = Located { value: number.unwrap_or(f64::NAN), span: value.span() };
        self.within(scope, key, &number, number.value.is_finite(), "a finite number")
            .then_some(number)
    }

    /// An emissivity from 0 to 1.
    pub fn emissivity(&mut self, scope: &Scope) -> Option<f64> {
        self.share(scope, "emissivity")
    }

    /// A plain number from 0 to 1.
    pub fn share(&mut self, scope: &Scope, key: &str) -> Option<f64> {
        let value = self.number(scope, key)?;
        let good = (0.0..=1.0).contains(&value.value);
        self.within(scope, key, &value, good, "from 0 to 1").then_some(value.value)
    }

    /// A whole number in a range.
    pub fn count(
        &mut self,
        scope: &Scope,
        key: &str,
        range: RangeInclusive<usize>,
    ) -> Option<Located<usize>> {
        let number = self.number(scope, key)?;
        let bound = format!("a whole number from {} to {}", range.start(), range.end());
        let whole = number.value.fract() == 0.0
            && number.value >= *range.start() as f64
            && number.value <= *range.end() as f64;
        self.within(scope, key, &number, whole, &bound)
            .then_some(Located { value: number.value as usize, span: number.span })
    }

    /// A quantity with a unit, in SI.
    pub fn quantity(
        &mut self,
        scope: &Scope,
        key: &str,
        dimension: Dimension,
    ) -> Option<Located<f64>> {
        self.quantity_of(scope, key, scope.get(key)?, dimension)
    }

    /// A quantity that must be there.
    pub fn required(
        &mut self,
        scope: &Scope,
        key: &str,
        dimension: Dimension,
        example: &str,
    ) -> Option<Located<f64>> {
        if !scope.has(key) {
            self.missing(scope, key, &format!("\"{example}\""));
        }
        self.quantity(scope, key, dimension)
    }

    /// A positive quantity.
    pub fn positive(
        &mut self,
        scope: &Scope,
        key: &str,
        dimension: Dimension,
    ) -> Option<Located<f64>> {
        let value = self.quantity(scope, key, dimension)?;
        self.within(scope, key, &value, value.value > 0.0, "more than 0").then_some(value)
    }

    /// A quantity in a range, in SI; `bound` says the range in the user's units.
    pub fn bounded(
        &mut self,
        scope: &Scope,
        key: &str,
        dimension: Dimension,
        (range, bound): (RangeInclusive<f64>, &str),
    ) -> Option<Located<f64>> {
        let value = self.quantity(scope, key, dimension)?;
        self.within(scope, key, &value, range.contains(&value.value), bound).then_some(value)
    }

    /// A temperature above absolute zero and below the boiling point of most metals [K].
    pub fn temperature(&mut self, scope: &Scope, key: &str) -> Option<Located<f64>> {
        let value = self.quantity(scope, key, Dimension::Temperature)?;
        let above = value.value > 0.0;
        let bound = if above { "at most 3000 degC" } else { "above absolute zero, -273.15 degC" };
        let good = above && value.value <= HOTTEST;
        self.within(scope, key, &value, good, bound).then_some(value)
    }

    /// Two lengths in brackets, such as an extent or a point [m].
    pub fn two_lengths(&mut self, scope: &Scope, key: &str) -> Option<Located<[f64; 2]>> {
        let value = scope.get(key)?;
        let wanted = "two lengths in brackets belong here, such as [\"0 mm\", \"60 mm\"]";
        let DeValue::Array(array) = value.get_ref() else {
            self.wrong_kind(scope, key, value, wanted);
            return None;
        };
        let items: Vec<_> = array.iter().collect();
        let [a, b] = items.as_slice() else {
            let typed = self.typed(&value.span());
            let message = format!("{key} = {typed} has {} entries; {wanted}", items.len());
            self.report(CaseError::new(Cause::Kind, &scope.place, message).at(value.span()));
            return None;
        };
        let a = self.quantity_of(scope, key, a, Dimension::Length);
        let b = self.quantity_of(scope, key, b, Dimension::Length);
        Some(Located { value: [a?.value, b?.value], span: value.span() })
    }

    /// Two whole numbers in brackets.
    pub fn two_counts(&mut self, scope: &Scope, key: &str) -> Option<Located<[usize; 2]>> {
        let value = scope.get(key)?;
        let wanted = "two whole numbers in brackets belong here, such as [120, 160]";
        if let DeValue::Array(array) = value.get_ref() {
            let counts: Vec<usize> = array
                .iter()
                .filter_map(|item| match item.get_ref() {
                    DeValue::Integer(i) => usize::try_from(integer(i)?).ok(),
                    _ => None,
                })
                .collect();
            if let (2, [nx, ny]) = (array.len(), counts.as_slice()) {
                return Some(Located { value: [*nx, *ny], span: value.span() });
            }
        }
        self.wrong_kind(scope, key, value, wanted);
        None
    }

    /// Two texts in brackets.
    pub fn two_texts(&mut self, scope: &Scope, key: &str) -> Option<Located<[String; 2]>> {
        let value = scope.get(key)?;
        if let DeValue::Array(array) = value.get_ref() {
            let texts = array.iter().filter_map(|item| match item.get_ref() {
                DeValue::String(text) if !text.trim().is_empty() => Some(text.trim().to_string()),
                _ => None,
            });
            let texts: Vec<String> = texts.collect();
            if let (2, Ok(two)) = (array.len(), <[String; 2]>::try_from(texts)) {
                return Some(Located { value: two, span: value.span() });
            }
        }
        let wanted = "two names in brackets belong here, such as [\"core\", \"heater\"]";
        self.wrong_kind(scope, key, value, wanted);
        None
    }

    pub fn quantity_of(
        &mut self,
        scope: &Scope,
        key: &str,
        value: &Spanned<DeValue>,
        dimension: Dimension,
    ) -> Option<Located<f64>> {
        let span = value.span();
        let a_name = dimension.a_name();
        let typed = self.typed(&span);
        let (cause, message, hint) = match value.get_ref() {
            DeValue::String(text) => match units::parse(text, dimension) {
                Ok(si) => return Some(Located { value: si, span }),
                Err(error) => unit_message(key, &typed, &error, dimension),
            },
            DeValue::Integer(_) | DeValue::Float(_) => {
                let example = example(key, Some(&typed), dimension);
                let written = if example.starts_with(&format!("\"{typed} ")) {
                    format!("write it as {example}")
                } else {
                    format!("{a_name} belongs here, such as {example}")
                };
                let message = format!("{key} = {typed} has no unit; {written}");
                (Cause::Unit, message, Some(units_hint(dimension)))
            }
            other => (
                Cause::Kind,
                format!(
                    "{key} = {typed} is {}; {a_name} belongs here, such as {}",
                    kind_name(other),
                    example(key, None, dimension)
                ),
                None,
            ),
        };
        let mut error = CaseError::new(cause, &scope.place, message).at(span);
        if let Some(hint) = hint {
            error = error.hint(hint);
        }
        self.report(error);
        None
    }

    /// A table within a table; `header` is how it is written.
    pub fn table<'d>(&mut self, scope: &Scope<'d>, key: &str, place: &str) -> Option<Scope<'d>> {
        let value = scope.get(key)?;
        match value.get_ref() {
            DeValue::Table(table) => Some(Scope::new(table, value.span(), place)),
            DeValue::Array(_) if scope.place.is_empty() => {
                let message = format!("there is one {key} only");
                let error = CaseError::new(Cause::Kind, "", message).at(value.span());
                self.report(error.hint(format!("write [{key}], with single brackets")));
                None
            }
            _ => {
                self.wrong_kind(scope, key, value, "a table belongs here");
                None
            }
        }
    }

    /// The tables of a list such as `[[block]]`.
    pub fn tables<'d>(&mut self, scope: &Scope<'d>, key: &str) -> Vec<Scope<'d>> {
        let Some(value) = scope.get(key) else { return Vec::new() };
        let mut scopes = Vec::new();
        match value.get_ref() {
            DeValue::Array(array) => {
                for (n, item) in array.iter().enumerate() {
                    match item.get_ref() {
                        DeValue::Table(table) => {
                            let place = format!("{key} {}", n + 1);
                            scopes.push(Scope::new(table, item.span(), &place));
                        }
                        _ => self.wrong_kind(scope, key, item, "a table belongs here"),
                    }
                }
            }
            DeValue::Table(_) => {
                let message = format!("{key} is a list of tables");
                let error = CaseError::new(Cause::Kind, "", message).at(value.span());
                self.report(error.hint(format!("write [[{key}]], with double brackets")));
            }
            _ => self.wrong_kind(scope, key, value, &format!("write it as [[{key}]] tables")),
        }
        scopes
    }
}

/// Characters that move the cursor, end lines or turn the writing direction.
pub(super) fn is_unprintable(sign: char) -> bool {
    sign.is_control()
        || matches!(sign, '\u{2028}' | '\u{2029}' | '\u{202A}'..='\u{202E}' | '\u{2066}'..='\u{2069}')
}

/// Value of a TOML integer.
fn integer(i: &toml::de::DeInteger) -> Option<i64> {
    i64::from_str_radix(i.as_str(), i.radix()).ok()
}

pub(super) fn kind_name(value: &DeValue) -> &'static str {
    match value {
        DeValue::String(_) => "a text",
        DeValue::Integer(_) | DeValue::Float(_) => "a plain number",
        DeValue::Boolean(_) => "true or false",
        DeValue::Datetime(_) => "a date",
        DeValue::Array(_) => "a list",
        DeValue::Table(_) => "a table",
    }
}

fn units_hint(dimension: Dimension) -> String {
    let units: Vec<&str> = dimension.units().collect();
    match units.as_slice() {
        [unit] => format!("the unit of {} is {unit}", dimension.a_name()),
        units => format!("units of {}: {}", dimension.a_name(), units.join(", ")),
    }
}

/// Whether a key's quantity may be zero or less.
fn may_be_zero(key: &str, dimension: Dimension) -> bool {
    match dimension {
        Dimension::Length => !matches!(key, "width" | "height" | "depth" | "cell" | "wall"),
        Dimension::Power | Dimension::Temperature | Dimension::Angle | Dimension::Flux => true,
        _ => false,
    }
}

/// A value in quotes that could stand at a key: the number as typed where it is possible.
fn example(key: &str, number: Option<&str>, dimension: Dimension) -> String {
    let unit = if key == "altitude" { "m" } else { dimension.usual_unit() };
    let usable = |text: &&str| match text.replace('_', "").parse::<f64>() {
        Ok(value) => value.is_finite() && (value > 0.0 || may_be_zero(key, dimension)),
        Err(_) => false,
    };
    let number = number.filter(usable);
    match number.and_then(|text| text.parse::<f64>().ok()) {
        // A share without its unit is meant as a part of one.
        Some(share) if dimension == Dimension::Share && share <= 1.0 => {
            format!("\"{} %\"", units::rounded(100.0 * share, 6))
        }
        _ => format!("\"{} {unit}\"", number.unwrap_or("1")),
    }
}

fn unit_message(
    key: &str,
    text: &str,
    error: &UnitError,
    dimension: Dimension,
) -> (Cause, String, Option<String>) {
    let a_name = dimension.a_name();
    let typed = format!("{key} = {text}");
    let example = |number: Option<&str>| example(key, number, dimension);
    match error {
        UnitError::NoNumber => (
            Cause::Unit,
            format!(
                "{typed} does not begin with a number; {a_name} belongs here, such as {}",
                example(None)
            ),
            None,
        ),
        UnitError::Comma(fixed) => (
            Cause::Unit,
            format!("{typed} has a comma where the decimal point belongs; write \"{fixed}\""),
            None,
        ),
        UnitError::NotFinite => (Cause::Range, format!("{typed} must be a finite number"), None),
        UnitError::NoUnit { number } => (
            Cause::Unit,
            format!(
                "{typed} has no unit; {a_name} belongs here, such as {}",
                example(Some(number))
            ),
            Some(units_hint(dimension)),
        ),
        UnitError::UnknownUnit { number, unit: symbol, nearest } => (
            Cause::Unit,
            match nearest {
                Some(near) => {
                    format!(
                        "{typed}: there is no unit {symbol}; the nearest is \"{number} {near}\""
                    )
                }
                None => format!(
                    "{typed}: there is no unit {symbol}; {a_name} belongs here, such as {}",
                    example(Some(number))
                ),
            },
            Some(units_hint(dimension)),
        ),
        UnitError::WrongDimension { number, is } => (
            Cause::Dimension,
            format!(
                "{typed} is {}; {a_name} belongs here, such as {}",
                is.a_name(),
                example(Some(number))
            ),
            None,
        ),
    }
}
