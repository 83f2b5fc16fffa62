//! A JSON value whose keys keep the order in which they were written.

use serde::ser::{Serialize, SerializeMap, Serializer};

/// A JSON value.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Json {
    Null,
    Bool(bool),
    Count(u64),
    Number(f64),
    Text(String),
    List(Vec<Json>),
    Object(Vec<(String, Json)>),
}

impl Json {
    /// An object from its entries.
    pub(crate) fn object<K: Into<String>>(entries: impl IntoIterator<Item = (K, Self)>) -> Self {
        Self::Object(entries.into_iter().map(|(k, v)| (k.into(), v)).collect())
    }

    pub(crate) fn text(text: impl Into<String>) -> Self {
        Self::Text(text.into())
    }

    /// Indented text with a final newline.
    pub(crate) fn to_bytes(&self) -> Result<Vec<u8>, serde_json::Error> {
        let mut bytes = serde_json::to_vec_pretty(self)?;
        bytes.push(b'\n');
        Ok(bytes)
    }
}

impl From<f64> for Json {
    fn from(value: f64) -> Self {
        Self::Number(value)
    }
}

impl From<Option<f64>> for Json {
    fn from(value: Option<f64>) -> Self {
        value.map_or(Self::Null, Self::Number)
    }
}

impl From<&str> for Json {
    fn from(value: &str) -> Self {
        Self::Text(value.to_owned())
    }
}

impl Serialize for Json {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        match self {
            Self::Null => serializer.serialize_unit(),
            Self::Bool(b) => serializer.serialize_bool(*b),
            Self::Count(n) => serializer.serialize_u64(*n),
            // JSON knows no NaN.
            Self::Number(v) if !v.is_finite() => serializer.serialize_unit(),
            Self::Number(v) => serializer.serialize_f64(*v),
            Self::Text(s) => serializer.serialize_str(s),
            Self::List(items) => serializer.collect_seq(items),
            Self::Object(entries) => {
                let mut map = serializer.serialize_map(Some(entries.len()))?;
                for (key, value) in entries {
                    map.serialize_entry(key, value)?;
                }
                map.end()
            }
        }
    }
}
