//! `--set KEY=VALUE`: one value of the configuration given on the command line.
//!
//! KEY is a path such as `wheels.capacity`, `thrusters[0].thrust` or `thrusters[A1].thrust`; items
//! of a list go by `name`, else by position from 0. VALUE is YAML, so plain text is text.

use std::ops::Range;
use std::sync::Arc;

use super::diagnostic::Diagnostic;
use super::nearest::nearest;
use super::node::{Body, Entry, Map, Node};
use super::path::{Part, parts, short};
use super::source::{Place, Source};

/// What stands before the flag's value in the text that messages show.
const FLAG: &str = "--set ";

/// Puts the value of one flag into the configuration.
///
/// # Errors
/// No `=`, no value, a value that is not valid YAML, a map or list on the way to the key that does
/// not exist.
pub(crate) fn apply(root: &mut Node, flag: &str, rank: usize) -> Result<(), Vec<Diagnostic>> {
    let source = Source::checked("command line", &format!("{FLAG}{flag}"), rank).map_err(|error| vec![error.into()])?;
    let (key, value) = split(&source)?;
    let written = source.slice(&key);
    let node = read_value(&source, &value)?;
    let steps: Vec<Step<'_>> = parts(written)
        .into_iter()
        .map(|part| {
            let start = key.start + part.start;
            let range = start..start + part.text.len();
            Step { part, place: Place { source: Arc::clone(&source), range } }
        })
        .collect();
    put(root, &steps, node).map_err(|fault| vec![*fault])
}

/// One step of KEY and where it stands in the flag.
struct Step<'a> {
    part: Part<'a>,
    place: Place,
}

/// The byte ranges of KEY and VALUE.
fn split(source: &Arc<Source>) -> Result<(Range<usize>, Range<usize>), Vec<Diagnostic>> {
    let text = source.text();
    let mut in_brackets = false;
    let equals = text.char_indices().find(|&(_, c)| {
        in_brackets = c == '[' || in_brackets && c != ']';
        c == '=' && !in_brackets
    });
    let fault = |range: Range<usize>, message: &str, label: &str| {
        let place = Place { source: Arc::clone(source), range };
        let help = "write it as `--set wheels.capacity=\"8 N m s\"`";
        vec![Diagnostic::error_at(place, message).label(label).help(help)]
    };
    let Some((equals, _)) = equals else {
        return Err(fault(FLAG.len()..text.len(), "`--set` needs KEY=VALUE", "there is no `=`"));
    };
    let (key, value) = (FLAG.len()..equals, equals + 1..text.len());
    if source.slice(&key).trim().is_empty() {
        return Err(fault(key, "`--set` needs KEY=VALUE", "there is no key before `=`"));
    }
    if source.slice(&value).trim().is_empty() {
        return Err(fault(value, "`--set` needs KEY=VALUE", "there is no value after `=`"));
    }
    Ok((key, value))
}

fn read_value(source: &Arc<Source>, value: &Range<usize>) -> Result<Node, Vec<Diagnostic>> {
    let node = Node::read(source, value)?;
    let rest = node.place.range.end..value.end;
    if source.slice(&rest).trim_start().starts_with('#') {
        let place = Place { source: Arc::clone(source), range: rest };
        let fault = Diagnostic::error_at(place, "the value of `--set` ends before ` #`");
        let fault = fault.label("YAML takes this for a comment");
        return Err(vec![fault.help("put the value in quotes: `--set 'KEY=\"a #b\"'`")]);
    }
    Ok(node)
}

/// Follows the steps and puts `node` at the last.
fn put(root: &mut Node, steps: &[Step<'_>], node: Node) -> Result<(), Box<Diagnostic>> {
    // `parts` gives at least one step.
    let Some((last, way)) = steps.split_last() else {
        return Ok(());
    };
    let mut holder = root;
    for step in way {
        begin(holder, step);
        holder = enter(holder, step)?;
    }
    if let Body::Map(map) = &mut holder.body {
        let key = last.part.text.to_owned();
        map.set(Entry { key, key_place: last.place.clone(), node });
        return Ok(());
    }
    *enter(holder, last)? = node;
    Ok(())
}

/// Makes an empty map for a section that is not there yet. A name close to one that is there is a slip, and is told as such;
/// one that the configuration does not know is told when its keys are checked.
fn begin(holder: &mut Node, step: &Step<'_>) {
    let word = step.part.text;
    if let Body::Map(map) = &mut holder.body
        && map.get(word).is_none()
        && nearest(word, map.keys()).is_none()
    {
        let node = Node { place: step.place.clone(), body: Body::Map(Map::default()) };
        map.set(Entry { key: word.to_owned(), key_place: step.place.clone(), node });
    }
}

/// The value one step down.
fn enter<'a>(holder: &'a mut Node, step: &Step<'_>) -> Result<&'a mut Node, Box<Diagnostic>> {
    let word = step.part.text;
    let known: Vec<String> = match &holder.body {
        Body::Map(map) => map.keys().map(str::to_owned).collect(),
        Body::List(items) => items.iter().filter_map(Node::name).collect(),
        Body::Scalar(_) => Vec::new(),
    };
    let kind = holder.kind();
    let (found, count) = match &mut holder.body {
        Body::Map(map) => (map.get_mut(word).map(|entry| &mut entry.node), None),
        Body::List(items) => {
            let count = items.len();
            let named = items.iter().position(|item| item.name().as_deref() == Some(word));
            let position = named.or_else(|| word.parse().ok());
            (position.and_then(|position| items.get_mut(position)), Some(count))
        }
        Body::Scalar(_) => (None, None),
    };
    found.ok_or_else(|| Box::new(missing(step, kind, &known, count)))
}

fn missing(step: &Step<'_>, kind: &str, known: &[String], count: Option<usize>) -> Diagnostic {
    let word = short(step.part.text);
    let (message, otherwise) = match (kind, count) {
        (_, Some(0)) => (format!("`--set` names the item `{word}` of an empty list"), "set the list as a whole".to_owned()),
        (_, Some(count)) => (
            format!("`--set` names `{word}`, which is no item of this list"),
            format!("give a name, or a position from 0 to {}", count - 1),
        ),
        ("a map", None) => (
            format!("`--set` names `{word}`, which is not in the configuration"),
            format!("set all of it: `--set '{word}={{key: value}}'`"),
        ),
        (kind, None) => {
            (format!("`--set` names the key `{word}` of a value that has no keys"), format!("the value is {kind}; set it as a whole"))
        }
    };
    let names = || known.iter().map(String::as_str);
    let help = match nearest(step.part.text, names()) {
        Some(name) => format!("did you mean `{}`?", short(name)),
        None => super::nearest::known(names()).map_or(otherwise.clone(), |list| format!("known here: {list}; or {otherwise}")),
    };
    Diagnostic::error_at(step.place.clone(), message).label("not found").help(help)
}
