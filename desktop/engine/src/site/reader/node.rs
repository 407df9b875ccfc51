//! The document with its positions, and the list of problems that grows while it is read.

use super::super::problem::Problem;
use super::rules::Rule;
use jsonc_parser::ast::{Object, Value};
use jsonc_parser::common::Ranged;
use std::cell::RefCell;
use std::collections::HashMap;

/// One pass over one document.
#[derive(Debug)]
pub(crate) struct Reading<'t> {
    text: &'t str,
    line_starts: Vec<usize>,
    places: RefCell<HashMap<String, usize>>,
    problems: RefCell<Vec<Problem>>,
    not_cross_checked: RefCell<Vec<String>>,
}

impl<'t> Reading<'t> {
    pub(crate) fn new(text: &'t str) -> Self {
        let after_breaks =
            text.bytes().enumerate().filter(|&(_, byte)| byte == b'\n').map(|(at, _)| at + 1);
        Self {
            text,
            line_starts: std::iter::once(0).chain(after_breaks).collect(),
            places: RefCell::default(),
            problems: RefCell::default(),
            not_cross_checked: RefCell::default(),
        }
    }

    /// Line and column of a byte offset, both counted from 1.
    fn position(&self, offset: usize) -> (u32, u32) {
        let line = self.line_starts.partition_point(|&start| start <= offset).max(1);
        let start = self.line_starts[line - 1];
        let column = self.text.get(start..offset).map_or(0, |before| before.chars().count());
        (line as u32, column as u32 + 1)
    }

    fn report_at(&self, offset: usize, path: &str, found: String, allowed: String, remedy: String) {
        let (line, column) = self.position(offset);
        let path = path.to_owned();
        self.problems.borrow_mut().push(Problem { line, column, path, found, allowed, remedy });
    }

    /// Reports a problem between entries, at the place of `path`, which has been read before.
    pub(crate) fn report(
        &self,
        path: &str,
        found: impl Into<String>,
        allowed: impl Into<String>,
        remedy: impl Into<String>,
    ) {
        let offset = self.places.borrow().get(path).copied().unwrap_or_default();
        self.report_at(offset, path, found.into(), allowed.into(), remedy.into());
    }

    /// Whether no problem has been found so far.
    pub(crate) fn is_clean(&self) -> bool {
        self.problems.borrow().is_empty()
    }

    /// Notes sections that could not be checked against the others.
    pub(crate) fn note_not_cross_checked<'n>(&self, sections: impl Iterator<Item = &'n str>) {
        self.not_cross_checked.borrow_mut().extend(sections.map(str::to_owned));
    }

    /// The problems found, by line, and the sections that could not be checked against others.
    pub(crate) fn into_problems(self) -> (Vec<Problem>, Vec<String>) {
        let mut problems = self.problems.into_inner();
        problems.sort_by_key(|problem| (problem.line, problem.column));
        (problems, self.not_cross_checked.into_inner())
    }
}

/// The path of a key. One that is not a plain word (a column header) is quoted, so that the path
/// stays readable.
pub(crate) fn key_path(parent: &str, key: &str) -> String {
    let plain = key.chars().all(|c| c.is_ascii_alphanumeric() || c == '_');
    match (parent.is_empty(), plain) {
        (true, _) => key.to_owned(),
        (false, true) => format!("{parent}.{key}"),
        (false, false) => format!("{parent}[\"{key}\"]"),
    }
}

/// One value of the document with its place.
#[derive(Debug)]
pub(crate) struct Node<'a> {
    reading: &'a Reading<'a>,
    value: &'a Value<'a>,
    path: String,
}

impl<'a> Node<'a> {
    pub(crate) fn new(reading: &'a Reading<'a>, value: &'a Value<'a>, path: String) -> Self {
        reading.places.borrow_mut().insert(path.clone(), value.start());
        Self { reading, value, path }
    }

    pub(crate) fn value(&self) -> &'a Value<'a> {
        self.value
    }

    pub(crate) fn reading(&self) -> &'a Reading<'a> {
        self.reading
    }

    pub(crate) fn item(&self, index: usize, value: &'a Value<'a>) -> Node<'a> {
        Node::new(self.reading, value, format!("{}[{index}]", self.path))
    }

    pub(crate) fn entry(&self, key: &str, value: &'a Value<'a>) -> Node<'a> {
        Node::new(self.reading, value, key_path(&self.path, key))
    }

    /// Reports this value.
    pub(crate) fn refuse(&self, allowed: impl Into<String>, remedy: impl Into<String>) {
        let found = describe(self.value);
        self.reading.report_at(
            self.value.start(),
            &self.path,
            found,
            allowed.into(),
            remedy.into(),
        );
    }

    /// Reports something about this value other than the value itself.
    pub(crate) fn refuse_found(&self, found: String, allowed: String, remedy: String) {
        self.reading.report_at(self.value.start(), &self.path, found, allowed, remedy);
    }
}

/// The value as it reads in a message.
fn describe(value: &Value<'_>) -> String {
    const LONGEST: usize = 60;
    match value {
        Value::StringLit(text) => {
            let mut shown: String = text.value.chars().take(LONGEST).collect();
            if shown.len() < text.value.len() {
                shown.push_str("...");
            }
            format!("\"{shown}\"")
        }
        Value::NumberLit(number) => number.value.chars().take(LONGEST).collect(),
        Value::BooleanLit(flag) => flag.value.to_string(),
        Value::NullKeyword(_) => "null".to_owned(),
        Value::Array(array) => match array.elements.len() {
            0 => "an empty list".to_owned(),
            1 => "a list of 1 entry".to_owned(),
            count => format!("a list of {count} entries"),
        },
        Value::Object(object) if object.properties.is_empty() => "an empty object".to_owned(),
        Value::Object(object) => {
            let keys: Vec<_> = object.properties.iter().take(8).map(|p| p.name.as_str()).collect();
            format!("an object with {}", keys.join(", "))
        }
    }
}

/// Reads the keys of one object, then says which ones are missing, repeated or unknown.
#[derive(Debug)]
pub(crate) struct ObjectReader<'a> {
    node: &'a Node<'a>,
    object: &'a Object<'a>,
    known: Vec<&'static str>,
    missing: Vec<(&'static str, String)>,
}

impl<'a> ObjectReader<'a> {
    /// `None`, with a problem, when the value is not an object.
    pub(crate) fn new(node: &'a Node<'a>, expected: &str) -> Option<Self> {
        let Value::Object(object) = node.value else {
            node.refuse(expected, "");
            return None;
        };
        Some(Self { node, object, known: Vec::new(), missing: Vec::new() })
    }

    /// Reads one declared key.
    pub(crate) fn field<R: Rule>(&mut self, key: &'static str, rule: &R) -> Option<R::Value> {
        self.known.push(key);
        match self.object.properties.iter().find(|property| property.name.as_str() == key) {
            Some(property) => rule.read(&self.node.entry(key, &property.value)),
            None => {
                let absent = rule.when_absent();
                if absent.is_none() {
                    self.missing.push((key, rule.expected()));
                }
                absent
            }
        }
    }

    /// Reports what was not declared or not given. `elsewhere` are keys of the other forms of the
    /// same object.
    pub(crate) fn finish(mut self, elsewhere: &[&'static str]) {
        self.report_unknown(elsewhere);
        for (key, expected) in &self.missing {
            let path = key_path(&self.node.path, key);
            let offset = self.object.range.start;
            let found = "nothing".to_owned();
            let remedy = format!("Add the key \"{key}\".");
            self.node.reading.report_at(offset, &path, found, expected.clone(), remedy);
        }
    }

    fn not_given(&self) -> Vec<&'static str> {
        let given = |key: &&str| self.object.properties.iter().any(|p| p.name.as_str() == *key);
        self.known.iter().copied().filter(|key| !given(key)).collect()
    }

    fn report_unknown(&mut self, elsewhere: &[&'static str]) {
        for (index, property) in self.object.properties.iter().enumerate() {
            let key = property.name.as_str();
            let repeated = self.object.properties[..index].iter().any(|p| p.name.as_str() == key);
            let remedy = if repeated {
                format!("The key \"{key}\" is given twice; keep one.")
            } else if self.known.contains(&key) {
                continue;
            } else if elsewhere.contains(&key) {
                "This key belongs to another way of giving the same thing; give one way only."
                    .to_owned()
            } else if let Some(meant) = nearest(key, &self.not_given()) {
                // The misspelt key is the missing one: said once.
                self.missing.retain(|(missing, _)| *missing != meant);
                format!("Did you mean \"{meant}\"?")
            } else {
                "Take the key out or look up its name.".to_owned()
            };
            let path = key_path(&self.node.path, key);
            let offset = property.range.start;
            let found = format!("unknown key \"{key}\"");
            let found = if repeated { format!("key \"{key}\" again") } else { found };
            self.node.reading.report_at(offset, &path, found, self.known.join(", "), remedy);
        }
    }
}

/// The candidate that a slip of the pen could have turned into `given`.
pub(crate) fn nearest<'c>(given: &str, candidates: &[&'c str]) -> Option<&'c str> {
    let given = given.to_lowercase();
    let likeness = |candidate: &str| {
        let candidate = candidate.to_lowercase();
        let likeness = strsim::normalized_damerau_levenshtein(&given, &candidate);
        // A forgotten unit at the end of a key is a likely slip, however long the unit.
        let cut_short = given.len() > 1 && candidate.starts_with(&given);
        if cut_short { likeness.max(0.7) } else { likeness }
    };
    candidates
        .iter()
        .map(|&candidate| (likeness(candidate), candidate))
        .filter(|&(likeness, _)| likeness >= 0.6)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, candidate)| candidate)
}
