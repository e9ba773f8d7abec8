//! Checking enums, options and other alternatives: finding out which one was meant.

use serde_yaml::{Mapping, Value};

use super::diagnostic::Diagnostic;
use super::nearest::{known, nearest};
use super::path::{Path, short};
use super::schema::{Schema, got};
use super::walk::Walk;

impl Walk<'_> {
    /// Finds the alternative that is meant and checks against it.
    pub(crate) fn choose(&mut self, whole: &Schema<'_>, options: Vec<Schema<'_>>, value: &Value, path: &Path) {
        let (nulls, mut options): (Vec<_>, Vec<_>) = options.into_iter().partition(|option| option.types() == ["null"]);
        if value.is_null() && !nulls.is_empty() {
            return;
        }
        if let [only] = options.as_slice() {
            return self.value(only, value, path);
        }
        let variants: Vec<&str> = options.iter().filter_map(Schema::variant).collect();
        match value {
            Value::String(text) => {
                let words: Vec<&str> = options.iter().flat_map(Schema::words).collect();
                options.retain(|option| option.words().is_empty());
                let taken = options.iter().any(|option| option.takes(value));
                if !taken && (!words.is_empty() || !variants.is_empty()) {
                    return self.word_or_variant(&words, &variants, text, path);
                }
                if words.contains(&text.as_str()) {
                    return;
                }
            }
            Value::Mapping(map) => {
                let tags: Vec<(&str, &str)> = options.iter().filter_map(Schema::tag).collect();
                let maps = options.iter().filter(|option| option.takes(value)).count();
                if let Some(&(tag, _)) = tags.first().filter(|_| tags.len() == maps) {
                    return self.tagged(tag, &options, map, path);
                }
                if !variants.is_empty() && variants.len() == maps {
                    return self.variant(&options, &variants, map, path);
                }
            }
            _ => {}
        }
        options.retain(|option| option.takes(value));
        let best = options
            .iter()
            .map(|option| {
                let mut trial = Walk { leaf: self.leaf, faults: Vec::new() };
                trial.value(option, value, path);
                trial.faults
            })
            .min_by_key(Vec::len);
        match best {
            Some(faults) => self.faults.extend(faults),
            None => self.wrong_kind(whole, value, path),
        }
    }

    /// An enum whose variants carry data, written as a map with one key.
    fn variant(&mut self, options: &[Schema<'_>], variants: &[&str], map: &Mapping, path: &Path) {
        let keys: Vec<&str> = map.keys().filter_map(Value::as_str).collect();
        if let [only] = keys.as_slice() {
            let option = options.iter().find(|option| option.variant() == Some(*only));
            match option.and_then(|option| Some((option.property(only)?, map.get(*only)?))) {
                Some((inner, value)) => self.value(&inner, value, &path.key(*only)),
                None => self.unknown_key(only, variants, path),
            }
            return;
        }
        let list = known(variants.iter().copied()).unwrap_or_default();
        let message = format!("`{path}` must have exactly one key, got {}", keys.len());
        let fault = Diagnostic::error(path.clone(), message).label("choose one");
        self.faults.push(fault.help(format!("write one of {list}")));
    }

    /// An enum whose variants are told apart by the key `tag`.
    fn tagged(&mut self, tag: &str, options: &[Schema<'_>], map: &Mapping, path: &Path) {
        let words: Vec<&str> = options.iter().filter_map(|o| Some(o.tag()?.1)).collect();
        let meant = |word: &str| options.iter().find(|o| o.tag().is_some_and(|(_, w)| w == word));
        match map.get(tag) {
            Some(Value::String(word)) => match meant(word) {
                Some(option) => self.map(option, map, path),
                None => self.word(&words, word, &path.key(tag)),
            },
            Some(other) => {
                let at = path.key(tag);
                let message = format!("`{at}` must be text, got {}", got(other));
                let list = known(words).unwrap_or_default();
                self.faults.push(Diagnostic::error(at, message).help(format!("write one of {list}")));
            }
            None => {
                let at = path.key(tag);
                let list = known(words).unwrap_or_default();
                let fault = Diagnostic::error(at.clone(), format!("`{at}` is missing"));
                let fault = fault.label(format!("`{tag}` belongs here"));
                self.faults.push(fault.help(format!("add `{tag}`, one of {list}")));
            }
        }
    }

    fn word_or_variant(&mut self, words: &[&str], variants: &[&str], text: &str, path: &Path) {
        if variants.contains(&text) {
            let message = format!("`{path}` must give the keys of `{text}`, got only the word");
            let fault = Diagnostic::error(path.clone(), message).label("a map is needed");
            return self.faults.push(fault.help(format!("write `{text}: {{…}}` on the next line")));
        }
        let all: Vec<&str> = words.iter().chain(variants).copied().collect();
        self.word(&all, text, path);
    }

    pub(crate) fn word(&mut self, words: &[&str], text: &str, path: &Path) {
        if words.contains(&text) {
            return;
        }
        let list = known(words.iter().copied()).unwrap_or_default();
        let message = format!("`{path}` must be one of {list}, got `{}`", short(text));
        let help = match nearest(text, words.iter().copied()) {
            Some(word) => format!("did you mean `{word}`?"),
            None => "write one of these words".to_owned(),
        };
        self.faults.push(Diagnostic::error(path.clone(), message).label("unknown word").help(help));
    }
}
