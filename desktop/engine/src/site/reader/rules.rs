//! The rules a key can have. A rule reads a value, says in words what it allows and describes
//! itself as JSON Schema.

use super::node::{Node, nearest};
use brimstead_core::quantity::Bounded;
use jiff::Timestamp;
use jsonc_parser::ast::Value;
use serde::{Serialize, Serializer};
use serde_json::{Value as Json, json};
use std::collections::BTreeMap;
use std::marker::PhantomData;
use std::ops::RangeInclusive;

/// The named parts of the schema, gathered while it is written.
pub(crate) type Definitions = BTreeMap<&'static str, Json>;

/// What one key may hold.
pub(crate) trait Rule {
    /// What reading gives.
    type Value;
    /// Reads the value; `None`, with a problem reported, when nothing usable stands there.
    fn read(&self, node: &Node<'_>) -> Option<Self::Value>;
    /// What is allowed, in words.
    fn expected(&self) -> String;
    /// The same as JSON Schema.
    fn schema(&self, definitions: &mut Definitions) -> Json;
    /// The value of a key that is not given; `None` when it must be given.
    fn when_absent(&self) -> Option<Self::Value> {
        None
    }
    /// Whether the key is left out when this value is written.
    fn is_left_out(&self, _: &Self::Value) -> bool {
        false
    }
}

/// Ties a rule to the type of its key, so that a declaration need not name the type twice.
pub(crate) fn rule<T, R: Rule<Value = T>>(rule: R) -> R {
    rule
}

/// A number within the range of a quantity.
#[derive(Debug)]
pub(crate) struct Number(pub &'static Bounded);

impl Rule for Number {
    type Value = f64;

    fn read(&self, node: &Node<'_>) -> Option<f64> {
        let value = number(node, || self.expected())?;
        if self.0.check(value).is_err() {
            node.refuse(self.expected(), self.0.remedy);
        }
        Some(value)
    }

    fn expected(&self) -> String {
        let Bounded { name, unit, min, max, .. } = *self.0;
        let unit = if unit.is_empty() { String::new() } else { format!(" {unit}") };
        format!("{name} from {} to {}{unit}", plain(min), plain(max))
    }

    fn schema(&self, _: &mut Definitions) -> Json {
        json!({"type": "number", "minimum": self.0.min, "maximum": self.0.max})
    }
}

/// Numbers as a person writes them: no long tails of zeros.
fn plain(value: f64) -> String {
    if value != 0.0 && !(1e-4..1e7).contains(&value.abs()) {
        format!("{value:e}")
    } else {
        value.to_string()
    }
}

fn number(node: &Node<'_>, expected: impl Fn() -> String) -> Option<f64> {
    match node.value() {
        Value::NumberLit(literal) => match literal.value.parse() {
            Ok(value) => Some(value),
            Err(_) => {
                node.refuse(expected(), "Not a number that can be read.");
                None
            }
        },
        Value::StringLit(_) => {
            node.refuse(expected(), "Give the number without quotes and with a decimal point.");
            None
        }
        _ => {
            node.refuse(expected(), "");
            None
        }
    }
}

/// A whole number within a range.
#[derive(Debug)]
pub(crate) struct Whole(pub RangeInclusive<u32>);

impl Rule for Whole {
    type Value = u32;

    fn read(&self, node: &Node<'_>) -> Option<u32> {
        let value = number(node, || self.expected())?;
        let whole = value as u32;
        if f64::from(whole) == value && self.0.contains(&whole) {
            return Some(whole);
        }
        node.refuse(self.expected(), "");
        None
    }

    fn expected(&self) -> String {
        format!("a whole number from {} to {}", self.0.start(), self.0.end())
    }

    fn schema(&self, _: &mut Definitions) -> Json {
        json!({"type": "integer", "minimum": self.0.start(), "maximum": self.0.end()})
    }
}

/// Text of a length in bytes, which is how the core and the loggers count.
#[derive(Debug)]
pub(crate) struct Text(pub RangeInclusive<usize>);

impl Rule for Text {
    type Value = String;

    fn read(&self, node: &Node<'_>) -> Option<String> {
        let Value::StringLit(text) = node.value() else {
            node.refuse(self.expected(), "");
            return None;
        };
        if !self.0.contains(&text.value.len()) {
            let remedy = match text.value.len() {
                0 => "It must not be empty.".to_owned(),
                bytes => format!("It has {bytes} bytes (letters beyond plain ASCII count 2 to 4)."),
            };
            node.refuse(self.expected(), remedy);
        }
        Some(text.value.clone().into_owned())
    }

    fn expected(&self) -> String {
        format!("text of {} to {} bytes", self.0.start(), self.0.end())
    }

    fn schema(&self, _: &mut Definitions) -> Json {
        // The schema counts characters: never more than bytes, so it refuses nothing good.
        json!({"type": "string", "minLength": (*self.0.start()).min(1), "maxLength": self.0.end()})
    }
}

/// `true` or `false`.
#[derive(Debug)]
pub(crate) struct Flag;

impl Rule for Flag {
    type Value = bool;

    fn read(&self, node: &Node<'_>) -> Option<bool> {
        match node.value() {
            Value::BooleanLit(flag) => Some(flag.value),
            _ => {
                node.refuse(self.expected(), "");
                None
            }
        }
    }

    fn expected(&self) -> String {
        "true or false".to_owned()
    }

    fn schema(&self, _: &mut Definitions) -> Json {
        json!({"type": "boolean"})
    }
}

/// An instant as it stands in the file, with its UTC offset.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct InstantText {
    /// The text, RFC 3339.
    pub text: String,
    /// Unix time, s.
    pub time_s: i64,
}

impl InstantText {
    /// The instant of a text, whole seconds only.
    fn parse(text: &str) -> Option<Self> {
        let separated = matches!(text.as_bytes().get(10), Some(b'T' | b't'));
        let bracketed = text.contains('[');
        let instant: Timestamp = text.parse().ok()?;
        let whole = instant.subsec_nanosecond() == 0;
        (separated && !bracketed && whole)
            .then(|| Self { text: text.to_owned(), time_s: instant.as_second() })
    }
}

impl Serialize for InstantText {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(&self.text)
    }
}

/// An instant with its UTC offset (RFC 3339), whole seconds.
#[derive(Debug)]
pub(crate) struct Instant;

impl Rule for Instant {
    type Value = InstantText;

    fn read(&self, node: &Node<'_>) -> Option<InstantText> {
        let instant = match node.value() {
            Value::StringLit(text) => InstantText::parse(&text.value),
            _ => None,
        };
        if instant.is_none() {
            let remedy = "Write date, T, time and the offset from UTC or Z; an instant without offset is ambiguous.";
            node.refuse(self.expected(), remedy);
        }
        instant
    }

    fn expected(&self) -> String {
        "an instant in whole seconds such as \"2031-03-04T06:00:00+08:00\"".to_owned()
    }

    fn schema(&self, _: &mut Definitions) -> Json {
        json!({"type": "string", "format": "date-time"})
    }
}

/// An enumeration by words.
pub(crate) trait Choice: Copy + Ord + 'static {
    /// Every value with its word.
    const ALL: &'static [(Self, &'static str)];
}

/// One word of an enumeration.
#[derive(Debug)]
pub(crate) struct OneOf<T>(PhantomData<T>);

impl<T> OneOf<T> {
    pub(crate) const fn new() -> Self {
        Self(PhantomData)
    }
}

pub(super) fn words<T: Choice>() -> Vec<&'static str> {
    T::ALL.iter().map(|&(_, word)| word).collect()
}

pub(super) fn chosen<T: Choice>(given: &str) -> Option<T> {
    T::ALL.iter().find(|&&(_, word)| word == given).map(|&(value, _)| value)
}

pub(super) fn did_you_mean<T: Choice>(given: &str) -> String {
    nearest(given, &words::<T>())
        .map_or_else(String::new, |meant| format!("Did you mean \"{meant}\"?"))
}

fn quoted(words: &[&str]) -> String {
    words.iter().map(|word| format!("\"{word}\"")).collect::<Vec<_>>().join(", ")
}

impl<T: Choice> Rule for OneOf<T> {
    type Value = T;

    fn read(&self, node: &Node<'_>) -> Option<T> {
        let Value::StringLit(text) = node.value() else {
            node.refuse(self.expected(), "");
            return None;
        };
        let value = chosen(&text.value);
        if value.is_none() {
            node.refuse(self.expected(), did_you_mean::<T>(&text.value));
        }
        value
    }

    fn expected(&self) -> String {
        quoted(&words::<T>())
    }

    fn schema(&self, _: &mut Definitions) -> Json {
        json!({"enum": words::<T>()})
    }
}
