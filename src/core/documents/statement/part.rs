//! How the small parts of a statement are written down once: fields, their words, and the strict reader that follows.

use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Fields, Place, day_of, number_of, shape, text_of};
use jiff::civil::Date;
use serde_json::Value;

/// Something that a field can hold.
pub trait Leaf: Sized {
    /// Reads it; what is wrong is noted.
    fn of(value: &Value, at: &Place, problems: &mut Problems) -> Option<Self>;
}

impl Leaf for String {
    fn of(value: &Value, at: &Place, problems: &mut Problems) -> Option<String> {
        let text = text_of(value, at, problems)?;
        if text.trim().is_empty() || text.chars().count() > 2_000 {
            problems.add(
                at,
                "The text is empty or longer than 2000 letters.",
                "Give 1 to 2000 letters, or leave the field out.",
            );
            return None;
        }
        Some(text.to_owned())
    }
}

impl Leaf for f64 {
    fn of(value: &Value, at: &Place, problems: &mut Problems) -> Option<f64> {
        number_of(value, at, problems)
    }
}

impl Leaf for bool {
    fn of(value: &Value, at: &Place, problems: &mut Problems) -> Option<bool> {
        if let Value::Bool(flag) = value {
            return Some(*flag);
        }
        let detail = format!("true or false belongs here, not {}.", shape(value));
        problems.add(at, detail, "Give true or false without quotes.");
        None
    }
}

impl Leaf for Date {
    fn of(value: &Value, at: &Place, problems: &mut Problems) -> Option<Date> {
        day_of(value, at, problems)
    }
}

/// A field: one thing or none, or a list.
pub trait Field: Sized {
    /// Takes it out of an object; what is wrong is noted.
    fn take(fields: &mut Fields, name: &'static str, at: &Place, problems: &mut Problems) -> Self;

    /// True if there is nothing to write.
    fn is_absent(&self) -> bool;
}

impl<T: Leaf> Field for Option<T> {
    fn take(fields: &mut Fields, name: &'static str, at: &Place, problems: &mut Problems) -> Option<T> {
        fields.part(name, at, problems, T::of)
    }

    fn is_absent(&self) -> bool {
        self.is_none()
    }
}

impl<T: Leaf> Field for Vec<T> {
    fn take(fields: &mut Fields, name: &'static str, at: &Place, problems: &mut Problems) -> Vec<T> {
        fields.list(name, at, problems, T::of)
    }

    fn is_absent(&self) -> bool {
        self.is_empty()
    }
}

/// Writes structs whose fields may all be left out, with the reader that refuses any other field.
macro_rules! parts {
    ($($(#[$about:meta])* $name:ident { $($(#[$doc:meta])* $field:ident: $kind:ty,)* })*) => {$(
        $(#[$about])*
        #[derive(Clone, Debug, Default, PartialEq, serde::Serialize, utoipa::ToSchema)]
        pub struct $name {
            $($(#[$doc])*
            #[serde(skip_serializing_if = "crate::core::documents::statement::part::Field::is_absent")]
            pub $field: $kind,)*
        }

        impl crate::core::documents::statement::part::Leaf for $name {
            fn of(
                value: &serde_json::Value,
                at: &crate::core::documents::reader::Place,
                problems: &mut crate::core::documents::problem::Problems,
            ) -> Option<$name> {
                use crate::core::documents::statement::part::Field;
                crate::core::documents::reader::object(value, at, problems, |fields, at, problems| {
                    Some($name { $($field: <$kind as Field>::take(fields, stringify!($field), at, problems),)* })
                })
            }
        }
    )*};
}
pub(crate) use parts;

/// Writes an enum of words: its names in documents, and the reader that refuses any other word.
macro_rules! words {
    ($($(#[$about:meta])* $name:ident { $($(#[$doc:meta])* $variant:ident = $word:literal,)* })*) => {$(
        $(#[$about])*
        #[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, serde::Serialize, serde::Deserialize, utoipa::ToSchema)]
        pub enum $name {
            $($(#[$doc])* #[serde(rename = $word)] $variant,)*
        }

        impl $name {
            /// Every word.
            pub const ALL: &[$name] = &[$($name::$variant),*];

            /// The name used in documents.
            pub fn name(self) -> &'static str {
                match self { $($name::$variant => $word,)* }
            }
        }

        impl crate::core::documents::statement::part::Leaf for $name {
            fn of(
                value: &serde_json::Value,
                at: &crate::core::documents::reader::Place,
                problems: &mut crate::core::documents::problem::Problems,
            ) -> Option<$name> {
                let words = [$(($word, $name::$variant)),*];
                crate::core::documents::reader::word_of(value, &words, at, problems)
            }
        }
    )*};
}
pub(crate) use words;
