//! The leaves of the plan document. Each takes whatever the source text is: `010` is the text 010, `NO` is a word.

use std::borrow::Cow;
use std::fmt;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::de::{Deserializer, MapAccess, SeqAccess, Visitor, value};
use serde::{Deserialize, Serialize, de};

macro_rules! leaf {
    ($name:ident, $kinds:expr, $what:literal) => {
        #[doc = $what]
        #[derive(Clone, Debug, PartialEq, Eq, Deserialize, Serialize)]
        #[serde(transparent)]
        pub struct $name(pub String);

        impl JsonSchema for $name {
            fn schema_name() -> Cow<'static, str> {
                stringify!($name).into()
            }

            /// An editor's YAML reader sees numbers and booleans where this language sees their text.
            fn json_schema(_: &mut SchemaGenerator) -> Schema {
                json_schema!({"type": $kinds, "description": $what})
            }
        }
    };
}

leaf!(
    Scalar,
    ["string", "number", "boolean"],
    "A word, a number or a set expression."
);
leaf!(
    Number,
    ["string", "number"],
    "An exact decimal number; `%` and `ppm` may follow it."
);
leaf!(
    Prose,
    ["string", "number", "boolean"],
    "Text for people. Quote it, so that nothing in it is read as YAML."
);

/// From one number to another.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Range {
    /// The smallest value.
    pub from: Number,
    /// The largest value.
    pub to: Number,
}

/// An even grid.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Grid {
    /// The first value.
    pub from: Number,
    /// The last value, if a whole number of steps leads there.
    pub to: Number,
    /// The distance between neighbours.
    pub step: Number,
}

/// A probability, or a range of probabilities.
#[derive(Clone, Debug, Serialize, JsonSchema)]
#[serde(untagged)]
pub enum Rate {
    /// One value.
    Single(Number),
    /// One value for which serde hands over a number instead of its text, because a range could stand there. Its exact
    /// text is in the located tree.
    #[schemars(skip)]
    Double(f64),
    /// A range.
    Range(Range),
}

/// A list of values, or an even grid.
#[derive(Clone, Debug, Serialize, JsonSchema)]
#[serde(untagged)]
pub enum ListOrRange {
    /// The values.
    List(Vec<Number>),
    /// The grid.
    Grid(Grid),
}

/// Not derived: an untagged enum would read every number as a double before it is known to be one.
impl<'de> Deserialize<'de> for Rate {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(RateVisitor)
    }
}

struct RateVisitor;

impl<'de> Visitor<'de> for RateVisitor {
    type Value = Rate;

    fn expecting(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str("a number, or `from` and `to`")
    }

    fn visit_str<E: de::Error>(self, text: &str) -> Result<Rate, E> {
        Ok(Rate::Single(Number(text.to_owned())))
    }

    fn visit_f64<E: de::Error>(self, value: f64) -> Result<Rate, E> {
        Ok(Rate::Double(value))
    }

    fn visit_u64<E: de::Error>(self, value: u64) -> Result<Rate, E> {
        Ok(Rate::Double(value as f64))
    }

    fn visit_i64<E: de::Error>(self, value: i64) -> Result<Rate, E> {
        Ok(Rate::Double(value as f64))
    }

    fn visit_u128<E: de::Error>(self, value: u128) -> Result<Rate, E> {
        Ok(Rate::Double(value as f64))
    }

    fn visit_i128<E: de::Error>(self, value: i128) -> Result<Rate, E> {
        Ok(Rate::Double(value as f64))
    }

    fn visit_bool<E: de::Error>(self, value: bool) -> Result<Rate, E> {
        Ok(Rate::Single(Number(value.to_string())))
    }

    fn visit_map<A: MapAccess<'de>>(self, map: A) -> Result<Rate, A::Error> {
        Range::deserialize(value::MapAccessDeserializer::new(map)).map(Rate::Range)
    }
}

impl<'de> Deserialize<'de> for ListOrRange {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(ListOrRangeVisitor)
    }
}

struct ListOrRangeVisitor;

impl<'de> Visitor<'de> for ListOrRangeVisitor {
    type Value = ListOrRange;

    fn expecting(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str("a list of numbers, or `from`, `to` and `step`")
    }

    fn visit_seq<A: SeqAccess<'de>>(self, items: A) -> Result<ListOrRange, A::Error> {
        Vec::deserialize(value::SeqAccessDeserializer::new(items)).map(ListOrRange::List)
    }

    fn visit_map<A: MapAccess<'de>>(self, map: A) -> Result<ListOrRange, A::Error> {
        Grid::deserialize(value::MapAccessDeserializer::new(map)).map(ListOrRange::Grid)
    }
}
