//! Rules made of other rules: lists, pairs, optional keys, objects.

use super::node::{Node, nearest};
use super::rules::{Choice, Definitions, Number, OneOf, Rule, chosen, did_you_mean, words};
use jsonc_parser::ast::Value;
use serde_json::{Map, Value as Json, json};
use std::collections::BTreeMap;
use std::marker::PhantomData;
use std::ops::RangeInclusive;

/// A list of things under one rule, with a smallest and largest count.
#[derive(Debug)]
pub(crate) struct List<R>(pub R, pub RangeInclusive<usize>);

impl<R: Rule> Rule for List<R> {
    type Value = Vec<R::Value>;

    fn read(&self, node: &Node<'_>) -> Option<Self::Value> {
        let Value::Array(array) = node.value() else {
            node.refuse(self.expected(), "");
            return None;
        };
        if !self.1.contains(&array.elements.len()) {
            node.refuse(self.expected(), "");
        }
        // Every entry is read, also after a bad one, so that all problems are listed.
        let read: Vec<_> = array
            .elements
            .iter()
            .enumerate()
            .map(|(index, element)| self.0.read(&node.item(index, element)))
            .collect();
        read.into_iter().collect()
    }

    fn expected(&self) -> String {
        let (least, most) = (self.1.start(), self.1.end());
        format!("a list of {least} to {most} entries, each {}", self.0.expected())
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        let items = self.0.schema(definitions);
        json!({"type": "array", "items": items, "minItems": self.1.start(), "maxItems": self.1.end()})
    }
}

/// Two values in a list: a point of a curve, or a lower and an upper end.
#[derive(Debug)]
pub(crate) struct Pair(pub Number, pub Number);

impl Rule for Pair {
    type Value = (f64, f64);

    fn read(&self, node: &Node<'_>) -> Option<(f64, f64)> {
        let elements = match node.value() {
            Value::Array(array) => array.elements.as_slice(),
            _ => &[],
        };
        let [first, second] = elements else {
            node.refuse(self.expected(), "");
            return None;
        };
        let first = self.0.read(&node.item(0, first));
        let second = self.1.read(&node.item(1, second));
        Some((first?, second?))
    }

    fn expected(&self) -> String {
        format!("a pair [{}, {}]", self.0.expected(), self.1.expected())
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        let items = [self.0.schema(definitions), self.1.schema(definitions)];
        json!({"type": "array", "prefixItems": items, "minItems": 2, "maxItems": 2})
    }
}

/// A key that may be left out.
#[derive(Debug)]
pub(crate) struct Maybe<R>(pub R);

impl<R: Rule> Rule for Maybe<R> {
    type Value = Option<R::Value>;

    fn read(&self, node: &Node<'_>) -> Option<Self::Value> {
        self.0.read(node).map(Some)
    }

    fn expected(&self) -> String {
        self.0.expected()
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        self.0.schema(definitions)
    }

    fn when_absent(&self) -> Option<Self::Value> {
        Some(None)
    }

    fn is_left_out(&self, value: &Self::Value) -> bool {
        value.is_none()
    }
}

/// A key that must be given, if only as `null`.
#[derive(Debug)]
pub(crate) struct OrNull<R>(pub R);

impl<R: Rule> Rule for OrNull<R> {
    type Value = Option<R::Value>;

    fn read(&self, node: &Node<'_>) -> Option<Self::Value> {
        match node.value() {
            Value::NullKeyword(_) => Some(None),
            _ => self.0.read(node).map(Some),
        }
    }

    fn expected(&self) -> String {
        format!("{}, or null", self.0.expected())
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        json!({"oneOf": [{"type": "null"}, self.0.schema(definitions)]})
    }
}

/// An object whose keys are the reader's own names.
#[derive(Debug)]
pub(crate) struct ByName<R>(pub R);

impl<R: Rule> Rule for ByName<R> {
    type Value = BTreeMap<String, R::Value>;

    fn read(&self, node: &Node<'_>) -> Option<Self::Value> {
        entries(node, &self.expected(), |key, node| Some((key.to_owned(), self.0.read(node)?)))
    }

    fn expected(&self) -> String {
        format!("an object of named entries, each {}", self.0.expected())
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        json!({"type": "object", "additionalProperties": self.0.schema(definitions)})
    }
}

/// An object whose keys are words of an enumeration, any of them left out.
#[derive(Debug)]
pub(crate) struct ByChoice<T, R>(pub OneOf<T>, pub R);

impl<T: Choice, R: Rule> Rule for ByChoice<T, R> {
    type Value = BTreeMap<T, R::Value>;

    fn read(&self, node: &Node<'_>) -> Option<Self::Value> {
        entries(node, &self.expected(), |key, node| {
            let value = self.1.read(node);
            let Some(choice) = chosen(key) else {
                let found = format!("unknown key \"{key}\"");
                node.refuse_found(found, self.0.expected(), did_you_mean::<T>(key));
                return None;
            };
            Some((choice, value?))
        })
    }

    fn expected(&self) -> String {
        format!("an object with the keys {}", self.0.expected())
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        let entry = self.1.schema(definitions);
        let properties: Map<_, _> =
            words::<T>().into_iter().map(|word| (word.to_owned(), entry.clone())).collect();
        json!({"type": "object", "properties": properties, "additionalProperties": false})
    }
}

fn entries<K: Ord, V>(
    node: &Node<'_>,
    expected: &str,
    read: impl Fn(&str, &Node<'_>) -> Option<(K, V)>,
) -> Option<BTreeMap<K, V>> {
    let Value::Object(object) = node.value() else {
        node.refuse(expected, "");
        return None;
    };
    let mut complete = Some(BTreeMap::new());
    for property in &object.properties {
        let key = property.name.as_str();
        let entry = node.entry(key, &property.value);
        let repeated = object.properties.iter().filter(|p| p.name.as_str() == key).count() > 1;
        if repeated {
            entry.refuse_found(
                format!("key \"{key}\" more than once"),
                "each key once".to_owned(),
                String::new(),
            );
        }
        match (read(key, &entry), &mut complete) {
            (Some((key, value)), Some(map)) => drop(map.insert(key, value)),
            _ => complete = None,
        }
    }
    complete
}

/// An object declared key by key with the macro `record`.
pub(crate) trait Record: Sized {
    /// Name in the schema.
    const NAME: &'static str;
    /// What is allowed, in words.
    fn expected_words() -> String;
    /// Reads it.
    fn read_record(node: &Node<'_>) -> Option<Self>;
    /// Its schema, without its place among the definitions.
    fn record_schema(definitions: &mut Definitions) -> Json;
}

/// A declared object.
#[derive(Debug)]
pub(crate) struct Nested<T>(PhantomData<T>);

impl<T> Nested<T> {
    pub(crate) const fn new() -> Self {
        Self(PhantomData)
    }
}

impl<T: Record> Rule for Nested<T> {
    type Value = T;

    fn read(&self, node: &Node<'_>) -> Option<T> {
        T::read_record(node)
    }

    fn expected(&self) -> String {
        T::expected_words()
    }

    fn schema(&self, definitions: &mut Definitions) -> Json {
        if !definitions.contains_key(T::NAME) {
            let schema = T::record_schema(definitions);
            definitions.insert(T::NAME, schema);
        }
        json!({"$ref": format!("#/$defs/{}", T::NAME)})
    }
}

/// One way of giving a thing: its name and its keys.
pub(crate) type Form = (&'static str, &'static [&'static str]);

/// Which of several ways of giving a thing is meant: the one that shares most keys.
pub(crate) struct Forms(pub &'static [Form], pub &'static [&'static str]);

impl Forms {
    /// What is allowed, in words.
    pub(crate) fn expected(&self) -> String {
        let words = self.1.iter().map(|word| format!("\"{word}\""));
        let forms = self.0.iter().map(|(_, keys)| format!("{{{}}}", keys.join(", ")));
        words.chain(forms).collect::<Vec<_>>().join(" or ")
    }

    /// The form meant by the keys of this object, or `None` with a problem.
    pub(crate) fn meant(&self, node: &Node<'_>) -> Option<Form> {
        let shared = |keys: &[&str], object: &jsonc_parser::ast::Object<'_>| {
            object.properties.iter().filter(|p| keys.contains(&p.name.as_str())).count()
        };
        let best = match node.value() {
            // The last maximum wins in `max_by_key`; reversed, so that the first form does.
            Value::Object(object) => self
                .0
                .iter()
                .rev()
                .map(|form| (shared(form.1, object), *form))
                .max_by_key(|&(count, _)| count)
                .filter(|&(count, _)| count > 0),
            _ => None,
        };
        if best.is_none() {
            node.refuse(self.expected(), self.near(node));
        }
        best.map(|(_, form)| form)
    }

    fn near(&self, node: &Node<'_>) -> String {
        let known: Vec<&str> = self.0.iter().flat_map(|(_, keys)| keys.iter().copied()).collect();
        let given = match node.value() {
            Value::Object(object) => object.properties.iter().map(|p| p.name.as_str()).collect(),
            Value::StringLit(text) => vec![text.value.as_ref()],
            _ => Vec::new(),
        };
        let known: Vec<&str> = known.into_iter().chain(self.1.iter().copied()).collect();
        let meant = given.iter().find_map(|key| nearest(key, &known));
        meant.map_or_else(String::new, |meant| format!("Did you mean \"{meant}\"?"))
    }

    /// The keys of all forms but one.
    pub(crate) fn elsewhere(&self, name: &str) -> Vec<&'static str> {
        self.0
            .iter()
            .filter(|form| form.0 != name)
            .flat_map(|form| form.1.iter().copied())
            .collect()
    }
}

/// The schema of an object of declared keys: (key, description, schema, required).
pub(crate) fn object_schema(about: &str, keys: Vec<(&'static str, &str, Json, bool)>) -> Json {
    let mut properties = Map::new();
    let mut required = Vec::new();
    for (key, description, mut schema, is_required) in keys {
        if let (Json::Object(map), false) = (&mut schema, description.is_empty()) {
            map.insert("description".to_owned(), json!(description));
        }
        properties.insert(key.to_owned(), schema);
        if is_required {
            required.push(key);
        }
    }
    json!({
        "type": "object",
        "description": about,
        "properties": properties,
        "required": required,
        "additionalProperties": false,
    })
}
