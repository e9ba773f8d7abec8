//! What a sweep varies: a key over a range or a list.

use super::output::Failure;

/// Most points of one input.
const MOST: usize = 1000;

/// One input of a sweep.
#[derive(Debug, Clone)]
pub(super) struct Vary {
    pub(super) key: String,
    pub(super) values: Values,
}

/// The values it takes.
#[derive(Debug, Clone)]
pub(super) enum Values {
    /// From, to, and the unit of both as it was written.
    Range(f64, f64, String),
    List(Vec<String>),
}

fn refuse<T>(message: impl std::fmt::Display) -> Result<T, Failure> {
    let help = "write `--vary \"wheels.capacity=4 .. 20 N m s\"`, or a list such as `--vary \"mission.start=2028-01-01 | 2031-01-01\"`";
    Err(Failure::Input(format!("error: {message}\n  = help: {help}")))
}

impl Vary {
    /// Reads `KEY=FROM..TO unit` or `KEY=a | b | c`.
    pub(super) fn parse(text: &str) -> Result<Self, Failure> {
        // An item's name may hold an `=`; the value begins behind the first one outside brackets.
        let mut depth = 0_i32;
        let split = text.char_indices().find(|(_, c)| {
            depth += i32::from(*c == '[') - i32::from(*c == ']');
            *c == '=' && depth <= 0
        });
        let Some((at, _)) = split else { return refuse(format!("`--vary {text}` has no `=`")) };
        let (key, written) = (text.get(..at).unwrap_or_default().trim(), text.get(at + 1..).unwrap_or_default().trim());
        if key.is_empty() || written.is_empty() {
            return refuse(format!("`--vary {text}`: expected a key, `=`, and its values"));
        }
        let list: Vec<String> = written.split('|').map(|value| value.trim().to_owned()).collect();
        let values = match (list.len(), written.split_once("..")) {
            (1, Some((from, to))) => {
                let number = |text: &str| crate::units::number_prefix(text).ok();
                let (Some((from_value, taken)), Some((to_value, used))) = (number(from), number(to)) else {
                    return refuse(format!("`--vary {text}`: expected two numbers about `..`"));
                };
                let (own, shared) = (from.get(taken..).unwrap_or_default().trim(), to.get(used..).unwrap_or_default().trim());
                if !own.is_empty() && own != shared {
                    return refuse(format!("`--vary {text}`: both ends need the same unit"));
                }
                Values::Range(from_value, to_value, shared.to_owned())
            }
            (1, None) => return refuse(format!("`--vary {text}` is one value only")),
            _ if list.iter().any(String::is_empty) => return refuse(format!("`--vary {text}` has an empty value")),
            _ if list.len() > MOST => return refuse(format!("`--vary {key}` has more than {MOST} values")),
            _ => Values::List(list),
        };
        Ok(Self { key: key.to_owned(), values })
    }

    /// The values as they are set, `steps` of a range.
    pub(super) fn points(&self, steps: usize) -> Vec<String> {
        match &self.values {
            Values::List(list) => list.clone(),
            Values::Range(from, to, unit) => {
                let last = steps.max(2) - 1;
                let at = |k: usize| if k == last { *to } else { from + (to - from) * k as f64 / last as f64 };
                (0..=last).map(|k| written(at(k), unit)).collect()
            }
        }
    }
}

/// A number with its unit, as it is set.
pub(super) fn written(number: f64, unit: &str) -> String {
    // Seven digits: a step of a tenth must read as such, and a place found by halving need not fill the line.
    let short: f64 = format!("{number:.6e}").parse().unwrap_or(number);
    format!("{short} {unit}").trim_end().to_owned()
}
