//! Values as JSON documents: a head that says what it is, and the value's fields.
//!
//! `{"format": "fluxloom-lattice", "version": 1, ...}`. Reading is strict: the
//! head must fit, every field must be there once, no other may be, and a value
//! that its own constructor would refuse is refused here too. Numbers come back
//! bit for bit.

use std::fmt;
use std::marker::PhantomData;

use serde::de::value::StringDeserializer;
use serde::de::{
    DeserializeOwned, DeserializeSeed, Deserializer, Error as _, IgnoredAny, IntoDeserializer,
    MapAccess, Visitor,
};
use serde::{Deserialize, Serialize};

use crate::fault::Fault;

/// The version that is written, and the newest that is read.
const VERSION: u64 = 1;

/// The keys of the head.
const HEAD: [&str; 2] = ["format", "version"];

/// A value that can be written down and read back.
pub trait Document: Serialize + DeserializeOwned {
    /// What the document calls itself.
    const FORMAT: &'static str;

    /// The document.
    ///
    /// # Errors
    /// A fault if the value holds a number that JSON cannot, which no value of
    /// this crate does.
    fn to_json(&self) -> Result<String, Box<Fault>> {
        #[derive(Serialize)]
        struct Written<'a, T> {
            format: &'static str,
            version: u64,
            #[serde(flatten)]
            body: &'a T,
        }
        serde_json::to_string(&Written { format: Self::FORMAT, version: VERSION, body: self })
            .map_err(|error| fault("file.not_valid", None, error.to_string()))
    }

    /// The value of a document.
    ///
    /// # Errors
    /// A fault with code `file.format` for a document of another kind,
    /// `file.version_too_new`, or `file.not_valid`.
    fn from_json(text: &str) -> Result<Self, Box<Fault>> {
        check_head(text, Self::FORMAT)?;
        let mut reader = serde_json::Deserializer::from_str(text);
        let read = Self::deserialize(Headless { inner: &mut reader })
            .and_then(|value| reader.end().map(|()| value));
        read.map_err(|error| unreadable(&error))
    }
}

fn fault(code: &str, line: Option<usize>, message: String) -> Box<Fault> {
    let code = code.to_owned();
    Box::new(Fault { code, file: None, line, path: String::new(), message, did_you_mean: None })
}

fn unreadable(error: &serde_json::Error) -> Box<Fault> {
    let line = Some(error.line().max(1));
    fault("file.not_valid", line, format!("this document cannot be read: {error}"))
}

/// Whether the text is an object of the right format in a version known here.
fn check_head(text: &str, expected: &str) -> Result<(), Box<Fault>> {
    #[derive(Deserialize)]
    struct Head {
        format: Option<serde_json::Value>,
        version: Option<serde_json::Value>,
    }
    if !text.trim_start().starts_with('{') {
        let message = format!("this is not a JSON object: \"{expected}\" is needed");
        return Err(fault("file.not_valid", Some(1), message));
    }
    let head: Head = serde_json::from_str(text).map_err(|error| unreadable(&error))?;
    match &head.format {
        Some(serde_json::Value::String(format)) if format == expected => {}
        found => {
            let found = found.as_ref().map_or("none".to_owned(), ToString::to_string);
            let message = format!("format is {found} where \"{expected}\" is needed");
            return Err(fault("file.format", None, message));
        }
    }
    let version = head.version.unwrap_or_default();
    match version.as_u64() {
        Some(VERSION) => Ok(()),
        Some(newer) if newer > VERSION => Err(fault(
            "file.version_too_new",
            None,
            format!(
                "{expected} version {newer} is not known here, only version {VERSION}: it needs a \
                 newer Fluxloom"
            ),
        )),
        _ => Err(fault(
            "file.version",
            None,
            format!("version is {version} where {VERSION} is needed"),
        )),
    }
}

/// A deserializer that takes the head out of an object before the value sees it.
struct Headless<D> {
    inner: D,
}

impl<'de, D: Deserializer<'de>> Deserializer<'de> for Headless<D> {
    type Error = D::Error;

    // Every document is an object, whatever the value's own shape would allow.
    fn deserialize_any<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, D::Error> {
        self.inner.deserialize_map(HeadlessVisitor { visitor, lifetime: PhantomData })
    }

    serde::forward_to_deserialize_any! {
        bool i8 i16 i32 i64 i128 u8 u16 u32 u64 u128 f32 f64 char str string bytes byte_buf
        option unit unit_struct newtype_struct seq tuple tuple_struct map struct enum identifier
        ignored_any
    }
}

struct HeadlessVisitor<'de, V> {
    visitor: V,
    lifetime: PhantomData<&'de ()>,
}

impl<'de, V: Visitor<'de>> Visitor<'de> for HeadlessVisitor<'de, V> {
    type Value = V::Value;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("an object")
    }

    fn visit_map<M: MapAccess<'de>>(self, map: M) -> Result<V::Value, M::Error> {
        self.visitor.visit_map(Body { map, seen: [false; 2] })
    }
}

/// The entries of an object without its head.
struct Body<M> {
    map: M,
    seen: [bool; 2],
}

impl<'de, M: MapAccess<'de>> MapAccess<'de> for Body<M> {
    type Error = M::Error;

    fn next_key_seed<K: DeserializeSeed<'de>>(
        &mut self,
        seed: K,
    ) -> Result<Option<K::Value>, M::Error> {
        while let Some(key) = self.map.next_key::<String>()? {
            let Some((slot, name)) = self.seen.iter_mut().zip(HEAD).find(|(_, name)| *name == key)
            else {
                let key: StringDeserializer<M::Error> = key.into_deserializer();
                return seed.deserialize(key).map(Some);
            };
            if std::mem::replace(slot, true) {
                return Err(M::Error::duplicate_field(name));
            }
            self.map.next_value::<IgnoredAny>()?;
        }
        Ok(None)
    }

    fn next_value_seed<S: DeserializeSeed<'de>>(&mut self, seed: S) -> Result<S::Value, M::Error> {
        self.map.next_value_seed(seed)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Lattice, LatticeInput};

    fn lattice() -> Lattice {
        let input =
            LatticeInput { wavelength_nm: 1064.0, depth_er: 0.1 + 0.2, ..LatticeInput::RETRO };
        Lattice::new(input).unwrap()
    }

    #[test]
    fn written_with_a_head_and_read_back() {
        let text = lattice().to_json().unwrap();
        assert!(text.starts_with(r#"{"format":"fluxloom-lattice","version":1,"wavelength_nm":"#));
        assert_eq!(Lattice::from_json(&text).unwrap(), lattice());
    }

    #[test]
    fn other_documents_are_refused() {
        let text = lattice().to_json().unwrap();
        for (from, to, code) in [
            ("fluxloom-lattice", "fluxloom-bands", "file.format"),
            ("\"version\":1", "\"version\":2", "file.version_too_new"),
            ("\"version\":1", "\"version\":0", "file.version"),
            ("\"version\":1", "\"version\":1,\"version\":1", "file.not_valid"),
            ("\"depth_er\"", "\"depth\"", "file.not_valid"),
            ("180.0", "0.0", "file.not_valid"),
            ("}", "} x", "file.not_valid"),
            ("{", "[", "file.not_valid"),
        ] {
            let fault = Lattice::from_json(&text.replacen(from, to, 1)).unwrap_err();
            assert_eq!(fault.code, code, "{from} -> {to}: {fault}");
        }
    }
}
