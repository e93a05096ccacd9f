//! Strict JSON: a key twice in one object is a fault, and NaN does not exist.

use std::cell::RefCell;
use std::fmt;

use serde::de::{DeserializeSeed, Deserializer, Error as _, MapAccess, SeqAccess, Visitor};
use serde_json::{Map, Number, Value};

use super::{Faults, MOST_BYTES, disk, path};

/// The value of a JSON text. Faults go into `faults`; without a value the text
/// could not be read at all.
pub fn read_json(text: &str, faults: &mut Faults) -> Option<Value> {
    if text.len() > MOST_BYTES {
        faults.add("file.too_large", None, "", disk::too_large(disk::MOST_BYTES));
        return None;
    }
    if disk::refuse_zeros(text, faults) {
        return None;
    }
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let twice = RefCell::new(Vec::new());
    let mut reader = serde_json::Deserializer::from_str(text);
    let read = Strict { path: String::new(), twice: &twice }
        .deserialize(&mut reader)
        .and_then(|value| reader.end().map(|()| value));
    for path in twice.into_inner() {
        let message = format!("{path} is given twice: keep one");
        faults.add("file.duplicate_key", None, &path, message);
    }
    match read {
        Ok(value) => Some(value),
        Err(error) => {
            let message = format!("this is not JSON: {error}");
            faults.add("file.syntax", Some(error.line()), "", message);
            None
        }
    }
}

/// Reads any value, and remembers which keys came twice.
struct Strict<'a> {
    path: String,
    twice: &'a RefCell<Vec<String>>,
}

impl<'de> DeserializeSeed<'de> for Strict<'_> {
    type Value = Value;

    fn deserialize<D: Deserializer<'de>>(self, deserializer: D) -> Result<Value, D::Error> {
        deserializer.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for Strict<'_> {
    type Value = Value;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a JSON value")
    }

    fn visit_bool<E>(self, flag: bool) -> Result<Value, E> {
        Ok(Value::Bool(flag))
    }

    fn visit_i64<E>(self, whole: i64) -> Result<Value, E> {
        Ok(Value::from(whole))
    }

    fn visit_u64<E>(self, whole: u64) -> Result<Value, E> {
        Ok(Value::from(whole))
    }

    fn visit_f64<E: serde::de::Error>(self, number: f64) -> Result<Value, E> {
        Number::from_f64(number)
            .map(Value::Number)
            .ok_or_else(|| E::custom("a number must be finite"))
    }

    fn visit_str<E>(self, text: &str) -> Result<Value, E> {
        Ok(Value::from(text))
    }

    fn visit_unit<E>(self) -> Result<Value, E> {
        Ok(Value::Null)
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<Value, A::Error> {
        let mut values = Vec::new();
        while let Some(value) =
            list.next_element_seed(Strict { path: self.path.clone(), twice: self.twice })?
        {
            values.push(value);
        }
        Ok(Value::Array(values))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Value, A::Error> {
        let mut values = Map::new();
        while let Some(key) = map.next_key::<String>()? {
            let path = path::join(&self.path, &key);
            let value = map.next_value_seed(Strict { path: path.clone(), twice: self.twice })?;
            if values.contains_key(&key) {
                self.twice.try_borrow_mut().map_err(A::Error::custom)?.push(path);
            } else {
                values.insert(key, value);
            }
        }
        Ok(Value::Object(values))
    }
}
