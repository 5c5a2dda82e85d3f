//! Mistakes that many keys share: what the reader says of keys, words and values that do not fit.

use toml::Spanned;
use toml::de::DeValue;

use super::error::{CaseError, Cause, nearest, one_of};
use super::keys::Table;
use super::parse::{Located, Reader, Scope, kind_name};
use super::vocabulary::NEVER;

impl Reader<'_> {
    /// Reports keys that do not exist, or not yet.
    pub fn check_keys(&mut self, scope: &Scope, table: &Table) {
        for (key, value) in scope.table.iter() {
            let name: &str = key.get_ref();
            if table.key(name).is_some() {
                continue;
            }
            let typed = self.typed(&value.span());
            let shown = match value.get_ref() {
                DeValue::Table(_) | DeValue::Array(_) => name.to_string(),
                _ => format!("{name} = {typed}"),
            };
            let error = if let Some((_, reason, instead)) = NEVER.iter().find(|n| n.0 == name) {
                CaseError::new(Cause::Conflict, &scope.place, *reason).hint(*instead)
            } else if table.later.contains(&name) {
                CaseError::new(
                    Cause::NotYet,
                    &scope.place,
                    format!("{shown}: this version does not have {name} yet"),
                )
                .hint(format!("leave {name} out; a later version brings it"))
            } else {
                let error = CaseError::new(
                    Cause::UnknownKey,
                    &scope.place,
                    format!("{shown}: {} has no key {name}", table.what),
                );
                error.hint(match nearest(name, table.names()) {
                    Some(near) => format!("the nearest key is {near}"),
                    None => {
                        format!("its keys are {}", table.names().collect::<Vec<_>>().join(", "))
                    }
                })
            };
            self.report(error.at(key.span()));
        }
    }

    /// Reports a required key that is not there.
    pub fn missing(&mut self, scope: &Scope, key: &str, example: &str) {
        let error = CaseError::new(Cause::Missing, &scope.place, format!("{key} is missing"));
        self.report(error.at(scope.span.clone()).hint(format!("write {key} = {example}")));
    }

    /// Reports a value outside its range; `bound` completes "must be ...". True when good.
    pub fn within<T>(
        &mut self,
        scope: &Scope,
        key: &str,
        value: &Located<T>,
        good: bool,
        bound: &str,
    ) -> bool {
        if !good {
            let typed = self.typed(&value.span);
            let message = format!("{key} = {typed} must be {bound}");
            self.report(CaseError::new(Cause::Range, &scope.place, message).at(value.span.clone()));
        }
        good
    }

    pub fn wrong_kind(&mut self, scope: &Scope, key: &str, value: &Spanned<DeValue>, wanted: &str) {
        let typed = self.typed(&value.span());
        let kind = kind_name(value.get_ref());
        let message = format!("{key} = {typed} is {kind}; {wanted}");
        self.report(CaseError::new(Cause::Kind, &scope.place, message).at(value.span()));
    }

    pub fn not_a_word(
        &mut self,
        scope: &Scope,
        key: &str,
        typed: &Located<String>,
        words: &[&str],
        later: &[&str],
    ) {
        let quoted: Vec<String> = words.iter().map(|w| format!("\"{w}\"")).collect();
        let quoted: Vec<&str> = quoted.iter().map(String::as_str).collect();
        let message = format!("{key} = \"{}\"", typed.value);
        let error = if later.contains(&typed.value.as_str()) {
            let message = format!("{message}: this version does not have it yet");
            CaseError::new(Cause::NotYet, &scope.place, message)
                .hint(format!("possible now: {}", one_of(&quoted)))
        } else {
            let message = format!("{message} is not possible; it must be {}", one_of(&quoted));
            let error = CaseError::new(Cause::UnknownWord, &scope.place, message);
            match nearest(&typed.value, words.iter().copied()) {
                Some(near) => error.hint(format!("the nearest is \"{near}\"")),
                None => error,
            }
        };
        self.report(error.at(typed.span.clone()));
    }
}
