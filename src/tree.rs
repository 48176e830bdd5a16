//! A value of no fixed shape: what a bench looks like before it is checked.
//!
//! The checks must see everything that arrived, so that all faults come at once: misspelt keys, keys given
//! twice, text where a number belongs, and numbers that are none. JSON's own value type would turn NaN into
//! "absent" on the way in.

use serde::de::{Deserialize, Deserializer, MapAccess, SeqAccess, Visitor};
use serde::ser::{Serialize, SerializeMap, Serializer};

/// A value as it arrived: from JavaScript, or from the text of a bench file.
#[derive(Debug, Clone, PartialEq, Default)]
pub enum Tree {
    /// Not there.
    #[default]
    Null,
    /// Yes or no.
    Bool(bool),
    /// Any number, NaN and infinity included.
    Number(f64),
    /// Text.
    Text(String),
    /// A row of values.
    List(Vec<Tree>),
    /// Named values in their order; a name may stand there twice.
    Map(Vec<(String, Tree)>),
}

impl Tree {
    /// Reads JSON text; the message of a failure names line and column.
    pub fn from_json(text: &str) -> Result<Tree, String> {
        serde_json::from_str(text).map_err(|error| error.to_string())
    }

    /// The entry called `key`, when this is a map that has one.
    pub fn get(&self, key: &str) -> Option<&Tree> {
        match self {
            Tree::Map(entries) => entries.iter().find(|(name, _)| name == key).map(|(_, value)| value),
            _ => None,
        }
    }

    /// The entry called `key`, to be changed in place.
    pub fn get_mut(&mut self, key: &str) -> Option<&mut Tree> {
        match self {
            Tree::Map(entries) => entries.iter_mut().find(|(name, _)| name == key).map(|(_, value)| value),
            _ => None,
        }
    }

    /// Whether this stands for "not there".
    pub fn is_null(&self) -> bool {
        *self == Tree::Null
    }
}

impl From<f64> for Tree {
    fn from(number: f64) -> Tree {
        Tree::Number(number)
    }
}

impl From<&str> for Tree {
    fn from(text: &str) -> Tree {
        Tree::Text(text.to_owned())
    }
}

impl Serialize for Tree {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        match self {
            Tree::Null => serializer.serialize_unit(),
            Tree::Bool(value) => serializer.serialize_bool(*value),
            Tree::Number(value) => serializer.serialize_f64(*value),
            Tree::Text(value) => serializer.serialize_str(value),
            Tree::List(values) => serializer.collect_seq(values),
            Tree::Map(entries) => {
                let mut map = serializer.serialize_map(Some(entries.len()))?;
                for (key, value) in entries {
                    map.serialize_entry(key, value)?;
                }
                map.end()
            }
        }
    }
}

impl<'de> Deserialize<'de> for Tree {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Tree, D::Error> {
        deserializer.deserialize_any(TreeVisitor)
    }
}

struct TreeVisitor;

impl<'de> Visitor<'de> for TreeVisitor {
    type Value = Tree;

    fn expecting(&self, formatter: &mut std::fmt::Formatter) -> std::fmt::Result {
        formatter.write_str("a number, a text, a list, an object, true, false or null")
    }

    fn visit_unit<E>(self) -> Result<Tree, E> {
        Ok(Tree::Null)
    }

    fn visit_none<E>(self) -> Result<Tree, E> {
        Ok(Tree::Null)
    }

    fn visit_some<D: Deserializer<'de>>(self, deserializer: D) -> Result<Tree, D::Error> {
        Tree::deserialize(deserializer)
    }

    fn visit_bool<E>(self, value: bool) -> Result<Tree, E> {
        Ok(Tree::Bool(value))
    }

    fn visit_i64<E>(self, value: i64) -> Result<Tree, E> {
        Ok(Tree::Number(value as f64))
    }

    fn visit_u64<E>(self, value: u64) -> Result<Tree, E> {
        Ok(Tree::Number(value as f64))
    }

    fn visit_f64<E>(self, value: f64) -> Result<Tree, E> {
        Ok(Tree::Number(value))
    }

    fn visit_str<E>(self, value: &str) -> Result<Tree, E> {
        Ok(Tree::Text(value.to_owned()))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Tree, A::Error> {
        let mut list = Vec::new();
        while let Some(item) = items.next_element()? {
            list.push(item);
        }
        Ok(Tree::List(list))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut items: A) -> Result<Tree, A::Error> {
        let mut map = Vec::new();
        while let Some(entry) = items.next_entry()? {
            map.push(entry);
        }
        Ok(Tree::Map(map))
    }
}
