//! Reading a request strictly, and refusing it with the field, the allowed values and a remedy.

use super::trail::Trail;
use brimstead_core::quantity::{Bounded, OutOfRange};
use serde::Deserialize;
use serde::de::DeserializeOwned;
use serde_json::value::RawValue;
use serde_json::{Value, json};

/// Answers one quantity.
pub type Handler = fn(&RawValue, &mut Trail) -> Result<Value, Refusal>;

/// Why a line gave no result.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Refusal {
    /// Path in `input`, or the key of the request itself.
    pub field: String,
    /// What is wrong, what is allowed, what to do.
    pub message: String,
}

impl Refusal {
    pub fn new(field: impl Into<String>, message: impl Into<String>) -> Self {
        Self { field: field.into(), message: message.into() }
    }

    pub fn into_json(self) -> Value {
        json!({"field": self.field, "message": self.message})
    }

    /// A refusal by the core, laid at the field it came from.
    pub fn at(field: impl Into<String>, error: impl std::fmt::Display) -> Self {
        Self::new(field, error.to_string())
    }
}

/// One line of the batch.
#[derive(Debug)]
pub struct Request<'a> {
    pub id: Option<&'a RawValue>,
    pub quantity: String,
    pub input: &'a RawValue,
    pub working: bool,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Envelope<'a> {
    #[serde(borrow)]
    id: Option<&'a RawValue>,
    quantity: String,
    #[serde(borrow)]
    input: &'a RawValue,
    #[serde(default)]
    working: bool,
}

/// Only the id, to answer a request that is otherwise wrong.
#[derive(Deserialize)]
struct IdOnly {
    id: Option<Box<RawValue>>,
}

impl<'a> Request<'a> {
    /// # Errors
    /// The id as far as it could be read, and why the line is no request.
    pub fn parse(line: &'a str, number: usize) -> Result<Self, (Option<Box<RawValue>>, Refusal)> {
        match serde_json::from_str::<Envelope<'a>>(line) {
            Ok(Envelope { id, quantity, input, working }) => {
                Ok(Self { id, quantity, input, working })
            }
            Err(error) => {
                let id = serde_json::from_str::<IdOnly>(line).ok().and_then(|only| only.id);
                let (field, what) = field_and_message("", &error.to_string());
                let remedy = "A request is {\"id\": any, \"quantity\": \"name\", \"input\": {...}} \
                              with optional \"working\": true, on one line.";
                Err((id, Refusal::new(field, format!("line {number}: {what}. {remedy}"))))
            }
        }
    }
}

/// Reads the input of a quantity: unknown, missing and mistyped keys are refused with their path.
///
/// # Errors
/// [`Refusal`] with the path of the first problem.
pub fn read<T: DeserializeOwned>(input: &RawValue) -> Result<T, Refusal> {
    // A list in the order of the keys would be taken for them.
    if !input.get().starts_with('{') {
        return Err(Refusal::new("", "the input is no object; give {\"key\": value, ...}"));
    }
    let mut reader = serde_json::Deserializer::from_str(input.get());
    serde_path_to_error::deserialize(&mut reader).map_err(|error| {
        let path = error.path().to_string();
        let path = if path == "." { String::new() } else { path };
        let (field, message) = field_and_message(&path, &error.inner().to_string());
        Refusal::new(field, message)
    })
}

/// Turns the reader's words into a field and a sentence: for a missing, unknown or repeated key the
/// field is the key itself, not the object around it.
fn field_and_message(path: &str, message: &str) -> (String, String) {
    // The position within the line helps nobody who wrote the line with a program.
    let message = message.split(" at line ").next().unwrap_or(message);
    for (marker, what, remedy) in [
        ("missing field `", "is missing", "; add it"),
        ("unknown field `", "is not known", ""),
        ("duplicate field `", "is given twice", "; give it once"),
    ] {
        if let Some(rest) = message.strip_prefix(marker)
            && let Some((key, rest)) = rest.split_once('`')
        {
            // An unknown key's path already ends with the key.
            let parent = path.strip_suffix(key).map_or(path, |p| p.trim_end_matches('.'));
            let field = if parent.is_empty() { key.to_string() } else { format!("{parent}.{key}") };
            let remedy = if rest.is_empty() { remedy } else { rest };
            return (field, format!("{key} {what}{remedy}"));
        }
    }
    (path.to_string(), message.to_string())
}

/// Checks a value of the input against a quantity of the core.
///
/// # Errors
/// [`Refusal`] at `field`.
pub fn within(field: &str, value: f64, quantity: &'static Bounded) -> Result<f64, Refusal> {
    quantity.check(value).map_err(|refused: OutOfRange| Refusal::at(field, refused))
}

/// Lays a refusal of the core at the key of the input that it speaks of: `keys` pairs names of
/// quantities with paths, in which `{}` stands for the position in a list. What is in no pair is
/// laid at `otherwise`.
pub fn located(
    error: impl std::fmt::Display,
    value: Option<OutOfRange>,
    keys: &[(&str, &str)],
    otherwise: &str,
) -> Refusal {
    let key = value.and_then(|refused| {
        let (_, path) = keys.iter().find(|(name, _)| *name == refused.quantity.name)?;
        Some(path.replace("{}", &refused.index.unwrap_or(0).to_string()))
    });
    Refusal::at(key.unwrap_or_else(|| otherwise.to_owned()), error)
}
