//! Quantities in the configuration: text with a unit, one or three numbers, with or without a spread.

use std::borrow::Cow;
use std::marker::PhantomData;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::{Deserialize, Deserializer, de};
use serde_yaml::Value;

use super::long_form;
use crate::uncertain::{Spread, parse_spread, parse_spread_triple, parse_triple};
use crate::units::{self, Kind, QuantityError};

/// A quantity known exactly, SI.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Quantity<K>(pub f64, PhantomData<K>);

/// Three components of a vector in the body frame, known exactly, SI.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Triple<K>(pub [f64; 3], PhantomData<K>);

/// A quantity that may have a spread, SI.
#[derive(Debug, Clone, PartialEq)]
pub struct SpreadQuantity<K>(pub Spread, PhantomData<K>);

/// Three components of a vector in the body frame, each of which may have a spread, SI.
#[derive(Debug, Clone, PartialEq)]
pub struct SpreadTriple<K>(pub [Spread; 3], PhantomData<K>);

/// How the value of a quantity may be written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Form {
    /// One number.
    One,
    /// Three numbers.
    Three,
    /// One number with a spread.
    OneSpread,
    /// Three numbers with spreads.
    ThreeSpread,
}

impl Form {
    const ALL: [(Self, &'static str); 4] =
        [(Self::One, "one"), (Self::Three, "three"), (Self::OneSpread, "one-spread"), (Self::ThreeSpread, "three-spread")];

    fn word(self) -> &'static str {
        Self::ALL.iter().find(|(form, _)| *form == self).map_or("", |(_, word)| word)
    }

    /// The form that a schema's `x-form` names.
    pub(crate) fn named(word: &str) -> Option<Self> {
        Self::ALL.iter().find(|(_, name)| *name == word).map(|(form, _)| *form)
    }
}

/// What a kind says of itself, by name, for the check against the schema.
#[derive(Debug, Clone, Copy)]
pub(crate) struct KindWords {
    /// Dimension asked for.
    pub(crate) dimension: units::Dimension,
    /// "a force".
    pub(crate) name: &'static str,
    /// "1 N".
    pub(crate) example: &'static str,
}

impl KindWords {
    pub(crate) const fn of<K: Kind>() -> Self {
        Self { dimension: K::DIMENSION, name: K::NAME, example: K::EXAMPLE }
    }

    fn is_number(self) -> bool {
        self.dimension == units::Dimension::new([0; 6])
    }
}

/// The text that stands for a scalar or a list of three numbers.
fn text_of(value: &Value) -> Result<Cow<'_, str>, QuantityError> {
    match value {
        Value::String(text) => Ok(Cow::Borrowed(text)),
        Value::Number(number) => Ok(Cow::Owned(number.to_string())),
        Value::Sequence(items) => {
            let parts: Result<Vec<_>, _> = items.iter().map(text_of).collect();
            Ok(Cow::Owned(parts?.join(", ")))
        }
        _ => Err(QuantityError {
            range: 0..0,
            message: "expected a number with its unit".to_owned(),
            help: "write it as text on one line, such as `1 N`".to_owned(),
        }),
    }
}

/// Reads a quantity in any form into three spreads (a single number fills the first).
pub(crate) fn read(value: &Value, words: KindWords, form: Form) -> Result<[Spread; 3], QuantityError> {
    if let (Value::Mapping(map), Form::OneSpread) = (value, form) {
        return long_form::read(map, words).map(threefold);
    }
    let text = text_of(value)?;
    let (dimension, name, example) = (words.dimension, words.name, words.example);
    match form {
        Form::One => units::parse(&text, dimension, name, example).map(|x| threefold(Spread::Fixed(x))),
        Form::OneSpread => parse_spread(&text, dimension, name, example).map(threefold),
        Form::Three => parse_triple(&text, dimension, name, example).map(|xyz| xyz.map(Spread::Fixed)),
        Form::ThreeSpread => parse_spread_triple(&text, dimension, name, example),
    }
}

/// A single value fills all three places.
fn threefold(spread: Spread) -> [Spread; 3] {
    [spread.clone(), spread.clone(), spread]
}

fn schema_of<K: Kind>(form: Form) -> Schema {
    let words = KindWords::of::<K>();
    let mut types = vec!["string"];
    if words.is_number() {
        types.push("number");
    }
    if matches!(form, Form::Three | Form::ThreeSpread) {
        types.push("array");
    }
    if form == Form::OneSpread {
        types.push("object");
    }
    let spread = matches!(form, Form::OneSpread | Form::ThreeSpread);
    json_schema!({
        "type": types,
        "x-quantity": kind_word::<K>(),
        "x-form": form.word(),
        "x-spread": spread,
        "x-unit": K::UNIT,
    })
}

fn kind_word<K: Kind>() -> String {
    format!("{:?}", PhantomData::<K>).rsplit("::").next().unwrap_or_default().trim_end_matches('>').to_owned()
}

macro_rules! leaf {
    ($leaf:ident, $form:expr, $take:expr) => {
        impl<'de, K: Kind> Deserialize<'de> for $leaf<K> {
            fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
                let value = Value::deserialize(deserializer)?;
                let spreads = read(&value, KindWords::of::<K>(), $form)
                    .map_err(|error| de::Error::custom(format!("{}; {}", error.message, error.help)))?;
                let take: fn([Spread; 3]) -> _ = $take;
                Ok(Self(take(spreads), PhantomData))
            }
        }

        impl<K: Kind> JsonSchema for $leaf<K> {
            fn schema_name() -> Cow<'static, str> {
                Cow::Owned(format!("{}{}", stringify!($leaf), kind_word::<K>()))
            }

            fn json_schema(_: &mut SchemaGenerator) -> Schema {
                schema_of::<K>($form)
            }

            fn inline_schema() -> bool {
                true
            }
        }
    };
}

leaf!(Quantity, Form::One, |[x, ..]| x.nominal());
leaf!(Triple, Form::Three, |xyz| xyz.map(|x| x.nominal()));
leaf!(SpreadQuantity, Form::OneSpread, |[x, ..]| x);
leaf!(SpreadTriple, Form::ThreeSpread, |xyz| xyz);

/// Words of the kind that a schema's `x-quantity` names.
pub(crate) fn kind_named(name: &str) -> Option<KindWords> {
    macro_rules! table {
        ($($kind:ident)*) => { match name { $(stringify!($kind) => Some(KindWords::of::<units::kind::$kind>()),)* _ => None } };
    }
    table!(Number Length Area Volume Mass MassRate Time Force Impulse Torque Momentum Inertia Speed Dipole Angle AngularRate Pressure Density GravitationalParameter Irradiance Temperature Acceleration ImpulsePrice Price)
}
