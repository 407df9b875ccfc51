//! A small reader of JSON documents in which each key is declared once: its Rust field, its rule
//! (type, range, choices) and its description. From the declaration come the reading, every
//! message and the JSON Schema.
//!
//! Reading goes on after a problem, so that one pass lists all of them. A value outside its range
//! is reported and kept, so that it can still be checked against its neighbours; the document as a
//! whole is refused when there is any problem.

mod composite;
pub(crate) mod declare;
mod node;
mod rules;

pub(crate) use composite::{
    ByChoice, ByName, Forms, List, Maybe, Nested, OrNull, Pair, Record, object_schema,
};
pub(crate) use declare::{choices, record, union};
pub(crate) use node::{Node, ObjectReader, Reading, key_path, nearest};
pub use rules::InstantText;
pub(crate) use rules::{
    Choice, Definitions, Flag, Instant, Number, OneOf, Rule, Text, Whole, rule,
};
