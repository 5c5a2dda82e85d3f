//! What a table of the case file is made of: its keys, what each may hold, how they go together.
//!
//! The tables themselves are in `vocabulary`. The reader takes from there which keys exist; the
//! schema for editors and the reference page are written from there.

use super::units::Dimension;

/// A table of the case file.
#[derive(Debug)]
pub(super) struct Table {
    /// Its header, such as `[section]` or `[[block]]`; how an inline table is called.
    pub header: &'static str,
    /// How messages call it: "a block".
    pub what: &'static str,
    /// What it is for, in a sentence or two.
    pub says: &'static str,
    /// Its keys, in the order in which they are usually written.
    pub keys: &'static [Key],
    /// Keys that a later version will have.
    pub later: &'static [&'static str],
    /// How keys go together.
    pub rules: &'static [Rule],
    /// An example in TOML; all examples together are a case. Inline tables are in their parent's.
    pub example: &'static str,
}

impl Table {
    /// The key of a name.
    pub fn key(&self, name: &str) -> Option<&'static Key> {
        self.keys.iter().find(|k| k.name == name)
    }

    /// The names of all keys.
    pub fn names(&self) -> impl Iterator<Item = &'static str> {
        self.keys.iter().map(|k| k.name)
    }
}

/// A key of a table.
#[derive(Debug)]
pub(super) struct Key {
    pub name: &'static str,
    pub kind: Kind,
    pub need: Need,
    /// What it means, in a sentence without its full stop.
    pub says: &'static str,
}

/// A line of a table: name, what it holds, whether it must be there, what it means.
pub(super) const fn key(name: &'static str, kind: Kind, need: Need, says: &'static str) -> Key {
    Key { name, kind, need, says }
}

/// Whether a key must be there, and what holds without it.
#[derive(Debug)]
pub(super) enum Need {
    /// It must be there.
    Required,
    /// Without it the value holds that is written here as in TOML.
    Default(&'static str),
    /// Without it this holds, in words.
    Without(&'static str),
}

/// What a key holds. A range is a text that completes "must be", or empty where any will do.
#[derive(Debug)]
pub(super) enum Kind {
    /// A text.
    Text,
    /// One of some words.
    Word(&'static [&'static str]),
    /// A number with a unit; its range.
    Quantity(Dimension, &'static str),
    /// A plain number: least, most, range in words.
    Number(f64, f64, &'static str),
    /// A whole number: least, most.
    Count(usize, usize),
    /// Two values in brackets; the range of both together.
    Pair(&'static [Kind; 2], &'static str),
    /// Any number of values in brackets, or as tables of one header.
    List(&'static Kind),
    /// A table.
    Table(&'static Table),
    /// One of some kinds.
    Either(&'static [Kind]),
}

/// How keys of a table go together.
#[derive(Debug)]
pub(super) enum Rule {
    /// All keys of exactly one of these groups.
    OneOf(&'static [&'static [&'static str]]),
    /// At least one of these keys.
    AnyOf(&'static [&'static str]),
    /// At most one of these keys.
    AtMostOne(&'static [&'static str]),
    /// The first key is used only with one of the others.
    Only(&'static str, &'static [&'static str]),
    /// The first key is not used with any of the others.
    Never(&'static str, &'static [&'static str]),
    /// Where the key holds the word, these keys must be there.
    Needs(&'static str, &'static str, &'static [&'static str]),
    /// Where the key holds the word (or is absent and the word is its default), these may not be.
    Bars(&'static str, &'static str, &'static [&'static str]),
}

impl Need {
    /// Whether a word is the default.
    pub fn is_default(&self, word: &str) -> bool {
        matches!(self, Need::Default(value) if value.trim_matches('"') == word)
    }
}

impl Kind {
    /// The range in words.
    pub fn range(&self) -> Option<String> {
        match self {
            Kind::Quantity(_, range) | Kind::Number(_, _, range) | Kind::Pair(_, range) => {
                (!range.is_empty()).then(|| (*range).into())
            }
            Kind::Count(least, most) => Some(format!("a whole number from {least} to {most}")),
            Kind::Either(kinds) => kinds.iter().find_map(Kind::range),
            _ => None,
        }
    }

    /// The kinds that it is made of, itself included.
    pub fn all(&self) -> Vec<&Kind> {
        let inner: &[Kind] = match self {
            Kind::Pair(kinds, _) => *kinds,
            Kind::Either(kinds) => kinds,
            Kind::List(kind) => std::slice::from_ref(*kind),
            _ => &[],
        };
        std::iter::once(self).chain(inner.iter().flat_map(Kind::all)).collect()
    }

    /// The table in it.
    pub fn table(&self) -> Option<&'static Table> {
        self.all().into_iter().find_map(|kind| match kind {
            Kind::Table(table) => Some(*table),
            _ => None,
        })
    }

    /// The words in it.
    pub fn words(&self) -> Option<&'static [&'static str]> {
        self.all().into_iter().find_map(|kind| match kind {
            Kind::Word(words) => Some(*words),
            _ => None,
        })
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use std::collections::BTreeSet;

    use toml::Value;

    use super::super::error::{CaseError, Cause};
    use super::super::model::Case;
    use super::super::vocabulary::TOP;
    use super::*;

    /// Bounds that every temperature has, whatever its key.
    const ANY_TEMPERATURE: [&str; 2] = ["above absolute zero, -273.15 degC", "at most 3000 degC"];

    /// All examples of the tables as one case.
    fn document() -> toml::Table {
        toml::from_str(&super::super::vocabulary::example()).unwrap()
    }

    /// Every table with that way to it along which the examples show most of its keys.
    fn tables() -> Vec<(Vec<&'static str>, &'static Table)> {
        let mut all: Vec<(Vec<&str>, &Table)> = vec![(Vec::new(), &TOP)];
        let mut missed: BTreeSet<&str> = BTreeSet::new();
        let mut next = 0;
        while next < all.len() {
            let (way, table) = all[next].clone();
            for key in table.keys {
                let Some(t) = key.kind.table() else { continue };
                let is_written = at(&mut document(), &way).get(key.name).is_some_and(has_table);
                if is_written {
                    all.push(([way.as_slice(), &[key.name]].concat(), t));
                } else {
                    missed.insert(t.header);
                }
            }
            next += 1;
        }
        all.iter().for_each(|(_, table)| _ = missed.remove(table.header));
        assert!(missed.is_empty(), "no example of {missed:?}");
        let shown = |way: &[&'static str]| at(&mut document(), way).len();
        let mut fullest: Vec<(Vec<&str>, &Table)> = Vec::new();
        for (way, table) in all {
            match fullest.iter_mut().find(|(_, t)| t.header == table.header) {
                Some(known) if shown(&known.0) < shown(&way) => known.0 = way,
                Some(_) => {}
                None => fullest.push((way, table)),
            }
        }
        fullest
    }

    fn has_table(value: &Value) -> bool {
        value.is_table() || value.as_array().is_some_and(|l| l.last().is_some_and(Value::is_table))
    }

    /// The table at the end of a way; of a list the last entry (the examples' fullest).
    fn at<'d>(document: &'d mut toml::Table, way: &[&str]) -> &'d mut toml::Table {
        way.iter().fold(document, |table, key| match table.get_mut(*key).unwrap() {
            Value::Table(inner) => inner,
            Value::Array(list) => list.last_mut().unwrap().as_table_mut().unwrap(),
            other => panic!("{key} = {other} is no table"),
        })
    }

    /// The examples with every side a table, so that there is a way to each key.
    fn with_sides() -> toml::Table {
        let mut document = document();
        let sides = at(&mut document, &["sides"]);
        for side in super::super::vocabulary::SIDE_NAMES {
            assert!(sides[side].is_table(), "{side}");
        }
        document
    }

    fn read(document: &toml::Table) -> Result<Case, Vec<CaseError>> {
        let text = toml::to_string(document).unwrap();
        Case::parse(&text, "case.toml").map_err(|errors| errors.errors().to_vec())
    }

    /// The mistakes when a key has this value.
    fn mistakes(way: &[&str], key: &str, value: &Value) -> Vec<CaseError> {
        let mut document = with_sides();
        at(&mut document, way).insert(key.into(), value.clone());
        read(&document).err().unwrap_or_default()
    }

    #[test]
    fn the_examples_together_are_a_case() {
        if let Err(errors) = read(&with_sides()) {
            panic!("{errors:#?}");
        }
    }

    #[test]
    fn the_reader_reads_every_key() {
        let date = Value::Datetime("1979-05-27".parse().unwrap());
        for (way, table) in tables() {
            for key in table.keys {
                let found = mistakes(&way, key.name, &date);
                let named = |e: &CaseError| {
                    e.cause() == Cause::Kind
                        && (e.message().contains(&format!("{} = 1979-05-27", key.name)))
                };
                assert!(found.iter().any(named), "{way:?} {}: {found:#?}", key.name);
            }
        }
    }

    #[test]
    fn the_reader_refuses_other_keys_and_names_these() {
        for (way, table) in tables() {
            let found = mistakes(&way, "qqqqqqqqqqqq", &Value::Integer(1));
            let names = format!("its keys are {}", table.names().collect::<Vec<_>>().join(", "));
            let told = |e: &CaseError| {
                e.cause() == Cause::UnknownKey && e.draw("case.toml", "").contains(&names)
            };
            assert!(found.iter().any(told), "{way:?}: {found:#?}");
            for later in table.later {
                let found = mistakes(&way, later, &Value::Integer(1));
                assert!(found.iter().any(|e| e.cause() == Cause::NotYet), "{way:?} {later}");
            }
        }
    }

    #[test]
    fn exactly_the_required_keys_are_missed() {
        for (way, table) in tables() {
            for key in table.keys {
                let mut document = with_sides();
                if at(&mut document, &way).remove(key.name).is_none() {
                    assert!(!matches!(key.need, Need::Required), "no example of {}", key.name);
                    continue;
                }
                let found = read(&document).err().unwrap_or_default();
                let is_missed = found.iter().any(|e| {
                    e.cause() == Cause::Missing
                        && [
                            format!("{} is missing", key.name),
                            format!("[{}] is missing", key.name),
                        ]
                        .iter()
                        .any(|text| e.message().ends_with(text.as_str()))
                });
                let by_rule = table.rules.iter().any(|rule| match rule {
                    Rule::OneOf(groups) => groups.iter().any(|g| g.contains(&key.name)),
                    Rule::Needs(_, _, needed) => needed.contains(&key.name),
                    _ => false,
                });
                let required = matches!(key.need, Need::Required);
                assert_eq!(is_missed, required || by_rule, "{way:?} {}: {found:#?}", key.name);
            }
        }
    }

    #[test]
    fn defaults_are_what_holds_without_the_key() {
        let mut count = 0;
        for (way, table) in tables() {
            for key in table.keys {
                let Need::Default(value) = key.need else { continue };
                let value: toml::Table = toml::from_str(&format!("v = {value}")).unwrap();
                let mut with = with_sides();
                at(&mut with, &way).insert(key.name.into(), value["v"].clone());
                let mut without = with_sides();
                at(&mut without, &way).remove(key.name);
                let [with, without] = [with, without].map(|document| read(&document));
                let (Ok(with), Ok(without)) = (&with, &without) else {
                    // Where the example needs another value, a rule says so.
                    assert!(!table.rules.is_empty(), "{way:?} {}", key.name);
                    continue;
                };
                assert_eq!(with.resolved(), without.resolved(), "{way:?} {}", key.name);
                count += 1;
            }
        }
        assert!(count >= 9, "{count} compared");
    }

    fn text(value: f64, dimension: Dimension) -> Value {
        Value::String(format!("{value:e} {}", dimension.usual_unit()))
    }

    /// Values outside the range of a kind.
    fn wrong(kind: &Kind) -> Vec<Value> {
        match kind {
            Kind::Word(_) => vec![Value::String("quux".into())],
            Kind::Quantity(dimension, _) => {
                [1e30, -1e30, 2.5e3, 1e-30, 0.0].map(|value| text(value, *dimension)).to_vec()
            }
            Kind::Number(..) | Kind::Count(..) => [1e30, -1e30, 0.5].map(Value::Float).to_vec(),
            _ => Vec::new(),
        }
    }

    #[test]
    fn words_and_ranges_are_the_readers() {
        for (way, table) in tables() {
            for key in table.keys {
                let is_temperature =
                    |k: &&Kind| matches!(k, Kind::Quantity(Dimension::Temperature, _));
                let temperature = key.kind.all().iter().any(is_temperature);
                let values: Vec<Value> = match &key.kind {
                    Kind::Pair([Kind::Quantity(dimension, _), _], _) => {
                        vec![Value::Array(vec![text(7.0, *dimension); 2])]
                    }
                    Kind::Pair([Kind::Count(..), _], _) => {
                        vec![Value::Array(vec![Value::Integer(0); 2])]
                    }
                    Kind::Pair(..) | Kind::List(_) => Vec::new(),
                    kind => kind.all().into_iter().flat_map(wrong).collect(),
                };
                let begin = format!(": {} = ", key.name);
                let mut told: BTreeSet<String> = BTreeSet::new();
                for value in &values {
                    for error in mistakes(&way, key.name, value) {
                        let message = error.message();
                        if let (true, Some((_, bound))) =
                            (message.contains(&begin), message.split_once("must be "))
                        {
                            told.insert(bound.to_string());
                        }
                    }
                }
                if temperature {
                    let range = key.kind.range().unwrap_or_default();
                    told.retain(|b| range.contains(b) || !ANY_TEMPERATURE.contains(&b.as_str()));
                }
                let mut known: Vec<String> = key.kind.range().into_iter().collect();
                if let Some(words) = key.kind.words() {
                    let quoted: Vec<String> = words.iter().map(|w| format!("\"{w}\"")).collect();
                    let quoted: Vec<&str> = quoted.iter().map(String::as_str).collect();
                    known.push(super::super::error::one_of(&quoted));
                }
                let is_known = |bound: &String| known.iter().any(|k| k.contains(bound));
                assert!(told.iter().all(is_known), "{key:?}: {told:?}");
                let probe_to = known.iter().any(|k| k.starts_with("another point"));
                assert!(known.is_empty() || !told.is_empty() || probe_to, "{key:?}: nothing told");
            }
        }
    }
}
