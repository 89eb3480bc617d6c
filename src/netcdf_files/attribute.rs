//! Attributes of variables, groups and files.

use serde::{Deserialize, Serialize};

use super::samples::Samples;

/// A named attribute.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Attribute {
    /// The attribute's name, bad UTF-8 replaced.
    pub name: String,
    /// Its value.
    pub value: AttributeValue,
}

/// What an attribute says. Bad UTF-8 has been replaced; control characters have not.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub enum AttributeValue {
    /// Characters (`NC_CHAR`): the usual form of text.
    Text(String),
    /// Strings (`NC_STRING`), one or several.
    Texts(Vec<String>),
    /// Numbers in the type that the file gives them.
    Numbers(Samples),
}

impl AttributeValue {
    /// The text of the attribute, several strings joined by a blank; none for numbers.
    pub fn text(&self) -> Option<String> {
        match self {
            Self::Text(text) => Some(text.clone()),
            Self::Texts(texts) => Some(texts.join(" ")),
            Self::Numbers(_) => None,
        }
    }

    /// The numbers of the attribute; none for text.
    pub fn numbers(&self) -> Option<Vec<f64>> {
        match self {
            Self::Numbers(samples) => Some(samples.to_f64()),
            Self::Text(_) | Self::Texts(_) => None,
        }
    }

    /// The first number of the attribute; none for text and for an empty attribute.
    pub fn number(&self) -> Option<f64> {
        match self {
            Self::Numbers(samples) if !samples.is_empty() => Some(samples.get(0)),
            _ => None,
        }
    }
}

impl From<&str> for AttributeValue {
    fn from(text: &str) -> Self {
        Self::Text(text.to_owned())
    }
}

impl From<String> for AttributeValue {
    fn from(text: String) -> Self {
        Self::Text(text)
    }
}

impl From<Vec<String>> for AttributeValue {
    fn from(texts: Vec<String>) -> Self {
        Self::Texts(texts)
    }
}

impl From<Samples> for AttributeValue {
    fn from(samples: Samples) -> Self {
        Self::Numbers(samples)
    }
}

macro_rules! attribute_from {
    ($($number:ty),*) => {$(
        impl From<$number> for AttributeValue {
            fn from(value: $number) -> Self { Self::Numbers(value.into()) }
        }
        impl From<Vec<$number>> for AttributeValue {
            fn from(values: Vec<$number>) -> Self { Self::Numbers(values.into()) }
        }
    )*};
}
attribute_from!(i8, u8, i16, u16, i32, u32, i64, u64, f32, f64);
