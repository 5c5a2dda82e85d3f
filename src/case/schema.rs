//! The JSON Schema of the case file (draft 2020-12), for editors that complete and check while one
//! types. It sees kinds, words, units and which keys go together; ranges of quantities, shapes and
//! names are seen by the reader only.

use serde_json::{Map, Value, json};

use super::keys::{Key, Kind, Need, Rule, Table};
use super::units::Dimension;
use super::vocabulary::{TOP, example};

/// The schema as JSON text.
pub fn schema() -> String {
    let example = json!(toml::from_str::<toml::Table>(&example()).unwrap_or_default());
    let mut schema = of_table(&TOP, &[&example]);
    schema.insert("$schema".into(), json!("https://json-schema.org/draft/2020-12/schema"));
    schema.insert("title".into(), json!("Case file of Ventrise"));
    format!("{:#}\n", Value::Object(schema))
}

/// The schema of a table; `examples` are tables of this kind to take examples of values from.
fn of_table(table: &Table, examples: &[&Value]) -> Map<String, Value> {
    let mut properties = Map::new();
    for key in table.keys {
        let values: Vec<&Value> = examples.iter().filter_map(|e| e.get(key.name)).collect();
        properties.insert(key.name.into(), of_key(key, &values));
    }
    let required = table.keys.iter().filter(|k| matches!(k.need, Need::Required));
    let required: Vec<&str> = required.map(|k| k.name).collect();
    let rules: Vec<Value> = table.rules.iter().flat_map(|rule| of_rule(table, rule)).collect();
    let mut schema = object(json!({
        "type": "object",
        "description": table.says,
        "properties": properties,
        "additionalProperties": false,
    }));
    for (name, list) in [("required", json!(required)), ("allOf", json!(rules))] {
        if list.as_array().is_some_and(|list| !list.is_empty()) {
            schema.insert(name.into(), list);
        }
    }
    schema
}

fn of_key(key: &Key, examples: &[&Value]) -> Value {
    let mut schema = of_kind(&key.kind, examples);
    schema.insert("description".into(), json!(description(key)));
    if let Need::Default(value) = key.need
        && let Ok(document) = toml::from_str::<toml::Table>(&format!("value = {value}"))
    {
        schema.insert("default".into(), json!(document["value"]));
    }
    let is_value = key.kind.table().is_none() || key.kind.words().is_some();
    if let Some(example) = examples.first().filter(|_| is_value) {
        schema.insert("examples".into(), json!([example]));
    }
    Value::Object(schema)
}

/// The schema of what a key holds.
fn of_kind(kind: &Kind, examples: &[&Value]) -> Map<String, Value> {
    match kind {
        Kind::Text => object(json!({ "type": "string", "pattern": "\\S" })),
        Kind::Word(words) => object(json!({ "enum": words })),
        Kind::Quantity(dimension, _) => {
            object(json!({ "type": "string", "pattern": pattern(*dimension) }))
        }
        Kind::Number(least, most, _) => {
            object(json!({ "type": "number", "minimum": least, "maximum": most }))
        }
        Kind::Count(least, most) => {
            object(json!({ "type": "integer", "minimum": least, "maximum": most }))
        }
        Kind::Pair(kinds, _) => {
            let [a, b] = kinds.each_ref().map(|kind| of_kind(kind, &[]));
            // The plain form is understood by readers of older drafts too.
            let (form, items) =
                if a == b { ("items", json!(a)) } else { ("prefixItems", json!([a, b])) };
            object(json!({ "type": "array", form: items, "minItems": 2, "maxItems": 2 }))
        }
        Kind::List(kind) => {
            let all: Vec<&Value> = examples.iter().filter_map(|e| e.as_array()).flatten().collect();
            object(json!({ "type": "array", "items": of_kind(kind, &all) }))
        }
        Kind::Table(table) => of_table(table, examples),
        Kind::Either(kinds) => {
            let kinds: Vec<_> = kinds.iter().map(|kind| of_kind(kind, examples)).collect();
            object(json!({ "anyOf": kinds }))
        }
    }
}

/// What an editor shows beside a key: its meaning, and the range where it has one.
fn description(key: &Key) -> String {
    match key.kind.range() {
        Some(range) => format!("{}; {range}", key.says),
        None => key.says.into(),
    }
}

/// A regular expression, in the part that all dialects share, for a number with a unit of this
/// dimension in any spelling that the reader understands.
fn pattern(dimension: Dimension) -> String {
    let units: Vec<String> = dimension.spellings().map(spelled).collect();
    let number = r"[+\-\u2212]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+\-]?[0-9]+)?";
    let number = number.replace(r"\u2212", "\u{2212}");
    format!("^\\s*{number}\\s*({})\\s*$", units.join("|"))
}

/// The ways to type a unit's symbol.
fn spelled(symbol: &str) -> String {
    const BLANK: &str = "[ \t\u{a0}\u{202f}·⋅*×]";
    let degree = "(deg|°|º)";
    match symbol {
        "degC" => return format!("({degree}{BLANK}*C|℃)"),
        "degF" => return format!("({degree}{BLANK}*F|℉)"),
        "deg" => return degree.into(),
        _ => {}
    }
    let mut pattern = String::new();
    for c in symbol.chars() {
        match c {
            ' ' => pattern += &format!("{BLANK}+"),
            '/' | '(' | ')' => {
                let sign = if c == '/' { "/".to_string() } else { format!("\\{c}") };
                pattern += &format!("{BLANK}*{sign}{BLANK}*");
            }
            '1' => pattern += "[1¹]",
            '2' => pattern += "\\^?[2²₂]",
            '3' => pattern += "\\^?[3³]",
            '-' => pattern += "\\^?[\\-⁻]",
            'u' => pattern += "[uµμ]",
            c => pattern.push(c),
        }
    }
    pattern
}

fn of_rule(table: &Table, rule: &Rule) -> Vec<Value> {
    let has = |key: &&str| json!({ "required": [key] });
    let any = |keys: &[&str]| json!({ "anyOf": keys.iter().map(has).collect::<Vec<_>>() });
    let none = |keys: &[&str]| json!({ "not": any(keys) });
    let both = |a: &str, b: &str| json!({ "not": { "required": [a, b] } });
    match rule {
        Rule::OneOf(groups) => {
            let alone = |(n, group): (usize, &&[&str])| {
                let others = groups.iter().enumerate().filter(|(m, _)| *m != n);
                let others: Vec<&str> = others.flat_map(|(_, g)| g.iter().copied()).collect();
                json!({ "required": group, "not": any(&others) })
            };
            vec![json!({ "anyOf": groups.iter().enumerate().map(alone).collect::<Vec<_>>() })]
        }
        Rule::AnyOf(keys) => vec![any(keys)],
        Rule::AtMostOne(keys) => {
            let later = |n: usize| keys[n + 1..].iter().map(move |b| both(keys[n], b));
            (0..keys.len()).flat_map(later).collect()
        }
        Rule::Only(key, others) => vec![json!({ "if": has(key), "then": any(others) })],
        Rule::Never(key, others) => others.iter().map(|other| both(key, other)).collect(),
        Rule::Needs(key, word, needed) => {
            vec![json!({ "if": is(table, key, word), "then": { "required": needed } })]
        }
        Rule::Bars(key, word, barred) => {
            vec![json!({ "if": is(table, key, word), "then": none(barred) })]
        }
    }
}

/// The condition that a key holds a word, be it as its default.
fn is(table: &Table, key: &str, word: &str) -> Value {
    let is = json!({ key: { "const": word } });
    if table.key(key).is_some_and(|k| k.need.is_default(word)) {
        json!({ "properties": is })
    } else {
        json!({ "properties": is, "required": [key] })
    }
}

fn object(value: Value) -> Map<String, Value> {
    match value {
        Value::Object(map) => map,
        _ => Map::new(),
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::case::units;
    use regex_lite::Regex;

    const ALL: [Dimension; 18] = [
        Dimension::Length,
        Dimension::Power,
        Dimension::Temperature,
        Dimension::Angle,
        Dimension::Pressure,
        Dimension::VolumeFlow,
        Dimension::Conductivity,
        Dimension::Film,
        Dimension::Flux,
        Dimension::AreaResistance,
        Dimension::Resistance,
        Dimension::SpecificHeat,
        Dimension::Density,
        Dimension::Viscosity,
        Dimension::Diffusivity,
        Dimension::Expansion,
        Dimension::Time,
        Dimension::Share,
    ];

    #[test]
    fn the_pattern_takes_what_the_reader_takes_and_nothing_else() {
        let patterns = ALL.map(|d| (d, Regex::new(&pattern(d)).unwrap()));
        let agree = |text: &str| {
            for (dimension, pattern) in &patterns {
                let read = units::parse(text, *dimension).is_ok();
                assert_eq!(pattern.is_match(text), read, "{text} as {dimension:?}");
            }
        };
        for dimension in ALL {
            assert!(dimension.spellings().count() > 0, "{dimension:?}");
            for symbol in dimension.spellings() {
                let raised = symbol.replace('2', "²").replace('3', "^3").replace(' ', "·");
                let loose = symbol.replace('/', " / ").replace('(', "( ");
                for symbol in [symbol, &raised, &loose, &symbol.replace("deg", "°")] {
                    for number in ["1", "-2.50", ".5", "+3.", "1e-3", "4E+2", "\u{2212}7"] {
                        agree(&format!("{number} {symbol}"));
                        agree(&format!(" {number}{symbol} "));
                    }
                    agree(symbol);
                    agree(&format!("1,5 {symbol}"));
                    agree(&format!("1_000 {symbol}"));
                    agree(&format!("1 {symbol} x"));
                }
            }
        }
        for text in ["5", "", "5 mn", "5 furlong", "5 µm", "20 °C", "20 deg C", "20℃", "3 MM"] {
            agree(text);
        }
    }
}
