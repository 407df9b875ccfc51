//! The three declarations: an object by its keys, an enumeration by its words, and a thing that
//! can be given in several ways.

/// An enumeration by words.
macro_rules! choices {
    ($(#[doc = $about:literal])* pub enum $Name:ident {
        $($(#[doc = $doc:literal])* $Variant:ident = $word:literal,)*
    }) => {
        $(#[doc = $about])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum $Name { $($(#[doc = $doc])* $Variant,)* }

        impl $crate::site::reader::Choice for $Name {
            const ALL: &'static [(Self, &'static str)] = &[$((Self::$Variant, $word),)*];
        }

        impl $Name {
            /// The word in the file.
            #[must_use]
            pub fn word(self) -> &'static str {
                match self { $(Self::$Variant => $word,)* }
            }
        }

        impl ::std::fmt::Display for $Name {
            fn fmt(&self, f: &mut ::std::fmt::Formatter<'_>) -> ::std::fmt::Result {
                f.write_str(self.word())
            }
        }

        impl ::serde::Serialize for $Name {
            fn serialize<S: ::serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
                serializer.serialize_str(self.word())
            }
        }
    };
}

/// An object by its keys. With `between`, a check that sees every key that could be read, also
/// when others could not.
macro_rules! record {
    ($(#[doc = $about:literal])* pub struct $Name:ident { $($body:tt)* }) => {
        $crate::site::reader::declare::record!(@all [] $(#[doc = $about])* $Name { $($body)* });
    };
    ($(#[doc = $about:literal])* pub struct $Name:ident { $($body:tt)* }
        between $Parts:ident => $check:path
    ) => {
        $crate::site::reader::declare::record!(
            @all [$Parts $check] $(#[doc = $about])* $Name { $($body)* });
    };
    (@all $between:tt $(#[doc = $about:literal])* $Name:ident {
        $($(#[doc = $doc:literal])* $field:ident: $Type:ty => $rule:expr,)*
    }) => {
        $(#[doc = $about])*
        #[derive(Debug, Clone, PartialEq)]
        pub struct $Name { $($(#[doc = $doc])* pub $field: $Type,)* }

        $crate::site::reader::declare::record!(@parts $between $($field: $Type,)*);

        impl $crate::site::reader::Record for $Name {
            const NAME: &'static str = stringify!($Name);

            fn expected_words() -> String {
                format!("an object with {}", [$(stringify!($field),)*].join(", "))
            }

            fn read_record(node: &$crate::site::reader::Node<'_>) -> Option<Self> {
                let mut object =
                    $crate::site::reader::ObjectReader::new(node, &Self::expected_words())?;
                $(let $field = object.field(stringify!($field), &$rule);)*
                object.finish(&[]);
                $crate::site::reader::declare::record!(@check $between node $($field,)*);
                Some(Self { $($field: $field?,)* })
            }

            fn record_schema(
                definitions: &mut $crate::site::reader::Definitions,
            ) -> ::serde_json::Value {
                $crate::site::reader::declare::keys_schema!(
                    definitions, [$($about)*], $([$($doc)*] $field: $Type => $rule,)*)
            }
        }

        impl ::serde::Serialize for $Name {
            fn serialize<S: ::serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
                use ::serde::ser::SerializeMap;
                use $crate::site::reader::Rule;
                let mut map = serializer.serialize_map(None)?;
                $(if !Rule::is_left_out(&$rule, &self.$field) {
                    map.serialize_entry(stringify!($field), &self.$field)?;
                })*
                map.end()
            }
        }
    };
    (@parts [] $($rest:tt)*) => {};
    (@parts [$Parts:ident $check:path] $($field:ident: $Type:ty,)*) => {
        /// What could be read.
        #[derive(Debug)]
        pub(crate) struct $Parts<'a> { $(pub $field: Option<&'a $Type>,)* }
    };
    (@check [] $($rest:tt)*) => {};
    (@check [$Parts:ident $check:path] $node:ident $($field:ident,)*) => {
        $check($node.reading(), &$Parts { $($field: $field.as_ref(),)* });
    };
}

/// The schema of a list of keys.
macro_rules! keys_schema {
    ($definitions:ident, [$($about:literal)*],
        $([$($doc:literal)*] $field:ident: $Type:ty => $rule:expr,)*) => {{
        use $crate::site::reader::{Rule, rule};
        let about = [$($about,)*].map(str::trim).join(" ");
        $(let $field = [$($doc,)*].map(str::trim).join(" ");)*
        let keys = vec![$((
            stringify!($field),
            $field.as_str(),
            rule::<$Type, _>($rule).schema($definitions),
            rule::<$Type, _>($rule).when_absent().is_none(),
        ),)*];
        $crate::site::reader::object_schema(&about, keys)
    }};
}

/// A thing that can be given in several ways: as a word, or as an object whose keys say which way.
macro_rules! union {
    ($(#[doc = $about:literal])* pub enum $Name:ident {
        words { $($(#[doc = $word_doc:literal])* $Word:ident = $word:literal,)* }
        forms { $($(#[doc = $form_doc:literal])* $Form:ident {
            $($(#[doc = $doc:literal])* $field:ident: $Type:ty => $rule:expr,)*
        })* }
    }) => {
        $(#[doc = $about])*
        #[derive(Debug, Clone, PartialEq)]
        pub enum $Name {
            $($(#[doc = $word_doc])* $Word,)*
            $($(#[doc = $form_doc])* $Form { $($(#[doc = $doc])* $field: $Type,)* },)*
        }

        impl $Name {
            const FORMS: $crate::site::reader::Forms = $crate::site::reader::Forms(
                &[$((stringify!($Form), &[$(stringify!($field),)*]),)*],
                &[$($word,)*],
            );
        }

        impl $crate::site::reader::Record for $Name {
            const NAME: &'static str = stringify!($Name);

            fn expected_words() -> String {
                Self::FORMS.expected()
            }

            fn read_record(node: &$crate::site::reader::Node<'_>) -> Option<Self> {
                $(if let ::jsonc_parser::ast::Value::StringLit(text) = node.value() {
                    if text.value == $word {
                        return Some(Self::$Word);
                    }
                })*
                let (form, _) = Self::FORMS.meant(node)?;
                $(if form == stringify!($Form) {
                    let mut object =
                        $crate::site::reader::ObjectReader::new(node, &Self::FORMS.expected())?;
                    $(let $field = object.field(stringify!($field), &$rule);)*
                    object.finish(&Self::FORMS.elsewhere(form));
                    return Some(Self::$Form { $($field: $field?,)* });
                })*
                None
            }

            fn record_schema(
                definitions: &mut $crate::site::reader::Definitions,
            ) -> ::serde_json::Value {
                let mut ways: Vec<::serde_json::Value> = Vec::new();
                $(
                    let description = [$($word_doc,)*].map(str::trim).join(" ");
                    ways.push(::serde_json::json!({"const": $word, "description": description}));
                )*
                $(ways.push($crate::site::reader::declare::keys_schema!(
                    definitions, [$($form_doc)*], $([$($doc)*] $field: $Type => $rule,)*));)*
                let about = [$($about,)*].map(str::trim).join(" ");
                ::serde_json::json!({"description": about, "oneOf": ways})
            }
        }

        impl ::serde::Serialize for $Name {
            fn serialize<S: ::serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
                use ::serde::ser::SerializeMap;
                use $crate::site::reader::Rule;
                match self {
                    $(Self::$Word => serializer.serialize_str($word),)*
                    $(Self::$Form { $($field,)* } => {
                        let mut map = serializer.serialize_map(None)?;
                        $(if !Rule::is_left_out(&$rule, $field) {
                            map.serialize_entry(stringify!($field), $field)?;
                        })*
                        map.end()
                    })*
                }
            }
        }
    };
}

pub(crate) use {choices, keys_schema, record, union};
