//! The reference page of the case file, `docs/case-file.md`, from the same tables as the reader.

use std::fmt::Write as _;

use super::keys::{Key, Kind, Need, Rule, Table};
use super::materials;
use super::units::{Dimension, number};
use super::vocabulary::TOP;

/// What stands before the tables.
const BEGIN: &str = "\
# The case file

A case file says what the housing is and what is to be found out about it. It is TOML (<https://toml.io>): \
a header in brackets begins a table, `key = value` sets a value, `#` begins a remark. A header in double \
brackets begins one more entry of a list. Unknown keys and missing units are errors, and all mistakes are \
reported together; `ventrise check CASE` tells what was understood.

A file has at most 10 MB and 5000 blocks, a mesh at most 20 million cells and no more than the machine's \
free memory can hold (about 0.75 GB a million).

## In an editor

`ventrise schema > ventrise.schema.json` writes a JSON Schema of this page. Editors with general support \
of TOML by schema complete and check keys, words and units while you type when the first line of the case \
file names it, by a path from the case file:

```toml
#:schema ventrise.schema.json
```

The schema sees keys, kinds, words and units. Ranges, shapes and names are seen by `ventrise check`.

## Values

Texts and words stand in quotes. A physical number is a text with its unit, such as `\"80 mm\"` or \
`\"8 W/(m2 K)\"`; a number without dimension stands plain: `0.9`. Two values stand in brackets: `[\"0 mm\", \"60 mm\"]`.

";

/// What stands after the units.
const SPELLINGS: &str = "
Usual other spellings are understood, such as `°C`, `m²` or `W/mK`. The decimal sign is a point.

";

/// What stands before the materials.
const MATERIALS: &str = "\
## Built-in materials

Conductivity along x and y [W/(m K)] and emissivity of the usual surface. These are values to begin with: \
when a margin is thin, write the supplier's into a `[[material]]`. Emissivities count only in a case that \
models radiation: one that gives an `emissivity` somewhere itself.

| name | conductivity | emissivity | where from |
|---|---|---|---|
";

/// The page as Markdown.
pub fn reference() -> String {
    let mut page = BEGIN.to_string();
    page += "| quantity | units |\n|---|---|\n";
    for dimension in dimensions(&TOP, Vec::new()) {
        let units: Vec<String> = dimension.units().map(|u| format!("`{u}`")).collect();
        line(&mut page, format_args!("| {} | {} |", dimension.name(), units.join(" ")));
    }
    page += SPELLINGS;
    page += "## All tables\n\n";
    page += TOP.says;
    page += "\n\n| table or key | without it | holds |\n|---|---|---|\n";
    for key in TOP.keys {
        let name = match key.kind.table() {
            Some(table) => format!("[`{}`](#{})", table.header, key.name),
            None => format!("`{}`", key.name),
        };
        line(&mut page, format_args!("| {name} | {} | {} |", need(key), key.says));
    }
    page.push('\n');
    example(&mut page, TOP.example);
    for table in TOP.keys.iter().filter_map(|key| key.kind.table()) {
        of_table(&mut page, table, "##");
    }
    page += MATERIALS;
    for m in materials::library() {
        let [x, y] = m.conductivity.map(number);
        let both = if x == y { x } else { format!("{x}, {y}") };
        let row = format_args!("| `{}` | {both} | {} | {} |", m.name, m.emissivity, m.source);
        line(&mut page, row);
    }
    page
}

/// Every dimension that a key has, in the order of the keys.
fn dimensions(table: &Table, mut found: Vec<Dimension>) -> Vec<Dimension> {
    for kind in table.keys.iter().flat_map(|key| key.kind.all()) {
        match kind {
            Kind::Quantity(dimension, _) if !found.contains(dimension) => found.push(*dimension),
            Kind::Table(inner) => found = dimensions(inner, found),
            _ => {}
        }
    }
    found
}

fn of_table(page: &mut String, table: &Table, level: &str) {
    let header = if table.header.contains(' ') {
        table.header.to_string()
    } else {
        format!("`{}`", table.header)
    };
    line(page, format_args!("{level} {header}\n\n{}\n", table.says));
    *page += "| key | value | without it | meaning |\n|---|---|---|---|\n";
    for key in table.keys {
        let row = format_args!(
            "| `{}` | {} | {} | {} |",
            key.name,
            value(&key.kind),
            need(key),
            key.says
        );
        line(page, row);
    }
    page.push('\n');
    for rule in table.rules {
        line(page, format_args!("- {}", sentence(table, rule)));
    }
    if !table.rules.is_empty() {
        page.push('\n');
    }
    example(page, table.example);
    let mut inner: Vec<&Table> = Vec::new();
    for table in table.keys.iter().filter_map(|key| key.kind.table()) {
        if inner.iter().all(|seen| seen.header != table.header) {
            inner.push(table);
        }
    }
    for table in inner {
        of_table(page, table, "###");
    }
}

/// What a key may hold, in words, with its range.
fn value(kind: &Kind) -> String {
    let what = named(kind);
    match kind.range() {
        Some(range) if what.is_empty() => range,
        Some(range) => format!("{what}: {range}"),
        None => what,
    }
}

/// What a kind is called.
fn named(kind: &Kind) -> String {
    match kind {
        Kind::Text => "text".into(),
        Kind::Word(words) => listed(words.iter().map(|w| format!("\"{w}\"")), "or"),
        Kind::Quantity(dimension, _) => dimension.name().into(),
        Kind::Number(..) => "number".into(),
        Kind::Count(..) => String::new(),
        Kind::Pair([Kind::Count(..), _], _) => "two whole numbers in brackets".into(),
        Kind::Pair([a, b], _) => match (named(a), named(b)) {
            (a, b) if a == b => format!("two {a}s in brackets"),
            (a, b) => format!("{a} and {b} in brackets"),
        },
        Kind::List(kind) => format!("list: {}", named(kind)),
        Kind::Table(table) => {
            format!("table, see [{}](#{})", table.header, table.header.replace(' ', "-"))
        }
        Kind::Either(kinds) => {
            let kinds: Vec<String> = kinds.iter().map(named).collect();
            kinds.join(", or ")
        }
    }
}

/// Whether a key must be there, and what holds without it.
fn need(key: &Key) -> String {
    match key.need {
        Need::Required => "required".into(),
        Need::Default(value) => format!("`{value}`"),
        Need::Without("-") => "–".into(),
        Need::Without(words) => words.into(),
    }
}

fn sentence(table: &Table, rule: &Rule) -> String {
    let quoted = |keys: &[&str], word: &str| listed(keys.iter().map(|k| format!("`{k}`")), word);
    let holds = |key: &str, word: &str| {
        let is_default = table.key(key).is_some_and(|k| k.need.is_default(word));
        format!("`{key} = \"{word}\"`{}", if is_default { ", the default," } else { "" })
    };
    match rule {
        Rule::OneOf(groups) => {
            let groups: Vec<String> = groups.iter().map(|g| quoted(g, "and")).collect();
            format!("Give either {}.", groups.join(", or "))
        }
        Rule::AnyOf(keys) => format!("Give at least one of {}.", quoted(keys, "and")),
        Rule::AtMostOne(keys) => format!("Give at most one of {}.", quoted(keys, "and")),
        Rule::Only(key, others) => format!("`{key}` needs {} beside it.", quoted(others, "or")),
        Rule::Never(key, others) => format!("`{key}` goes with none of {}.", quoted(others, "and")),
        Rule::Needs(key, word, needed) => {
            format!("{} needs {}.", holds(key, word), quoted(needed, "and"))
        }
        Rule::Bars(key, word, barred) => {
            format!("{} goes without {}.", holds(key, word), quoted(barred, "and"))
        }
    }
}

/// `a, b and c`.
fn listed(items: impl Iterator<Item = String>, word: &str) -> String {
    let items: Vec<String> = items.collect();
    match items.split_last() {
        Some((last, rest)) if !rest.is_empty() => {
            format!("{} {word} {last}", rest.join(", "))
        }
        _ => items.join(", "),
    }
}

fn example(page: &mut String, text: &str) {
    if !text.is_empty() {
        line(page, format_args!("```toml\n{text}```\n"));
    }
}

fn line(page: &mut String, text: std::fmt::Arguments) {
    let written = writeln!(page, "{text}");
    debug_assert!(written.is_ok());
}
