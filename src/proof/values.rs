//! JSON in memory, at 24 bytes a value.
//!
//! The general value type of the JSON crate takes three times as much and silently keeps the last
//! of two fields of one name; files that nobody vouches for need better.

use std::borrow::Cow;
use std::fmt;

use serde::de::{Deserialize, Deserializer, MapAccess, SeqAccess, Visitor};

/// A JSON value; text is that of the file where it has no escapes.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Json<'v> {
    /// A whole number from 0 on.
    Number(u64),
    /// Another number, or null.
    Other,
    Bool(bool),
    Text(Cow<'v, str>),
    Array(Vec<Json<'v>>),
    /// In the order of the file, with fields that are written twice.
    Object(Vec<(Cow<'v, str>, Json<'v>)>),
}

impl<'v> Deserialize<'v> for Json<'v> {
    fn deserialize<D: Deserializer<'v>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(Reading)
    }
}

/// The key of an object, borrowed if it can be.
struct Key<'v>(Cow<'v, str>);

impl<'v> Deserialize<'v> for Key<'v> {
    fn deserialize<D: Deserializer<'v>>(deserializer: D) -> Result<Self, D::Error> {
        match deserializer.deserialize_str(Reading)? {
            Json::Text(text) => Ok(Key(text)),
            _ => Ok(Key("".into())),
        }
    }
}

struct Reading;

impl<'v> Visitor<'v> for Reading {
    type Value = Json<'v>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a JSON value")
    }

    fn visit_bool<E>(self, value: bool) -> Result<Json<'v>, E> {
        Ok(Json::Bool(value))
    }

    fn visit_u64<E>(self, value: u64) -> Result<Json<'v>, E> {
        Ok(Json::Number(value))
    }

    fn visit_i64<E>(self, _: i64) -> Result<Json<'v>, E> {
        Ok(Json::Other)
    }

    fn visit_f64<E>(self, _: f64) -> Result<Json<'v>, E> {
        Ok(Json::Other)
    }

    fn visit_unit<E>(self) -> Result<Json<'v>, E> {
        Ok(Json::Other)
    }

    fn visit_str<E>(self, value: &str) -> Result<Json<'v>, E> {
        Ok(Json::Text(value.to_owned().into()))
    }

    fn visit_borrowed_str<E>(self, value: &'v str) -> Result<Json<'v>, E> {
        Ok(Json::Text(value.into()))
    }

    fn visit_seq<A: SeqAccess<'v>>(self, mut access: A) -> Result<Json<'v>, A::Error> {
        let mut elements = Vec::new();
        while let Some(element) = access.next_element()? {
            elements.push(element);
        }
        elements.shrink_to_fit();
        Ok(Json::Array(elements))
    }

    fn visit_map<A: MapAccess<'v>>(self, mut access: A) -> Result<Json<'v>, A::Error> {
        let mut fields = Vec::new();
        while let Some((Key(key), value)) = access.next_entry()? {
            fields.push((key, value));
        }
        fields.shrink_to_fit();
        Ok(Json::Object(fields))
    }
}
