//! Two ways to write a record down: the canonical form that is hashed, and the pretty form that is filed.
//!
//! Both print a number as ECMAScript does (RFC 8785, section 3.2.2.3), so that reading the filed text again and bringing
//! it into canonical form gives the very bytes that were hashed.

use std::io;

use serde::Serialize;
use serde_json::ser::{Formatter, PrettyFormatter, Serializer};
use serde_json_canonicalizer::to_string as canonical_text;

/// Why a record cannot be written down.
#[derive(Debug)]
pub struct Unwritable(serde_json::Error);

impl std::fmt::Display for Unwritable {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(out, "the record cannot be written as JSON: {}", self.0)
    }
}

impl std::error::Error for Unwritable {}

/// The RFC 8785 canonical form: one line, keys sorted, the shortest number text.
///
/// # Errors
/// A number that is not finite has no form in JSON.
pub fn canonical<T: Serialize>(value: &T) -> Result<String, Unwritable> {
    canonical_text(value).map_err(Unwritable)
}

/// The filed form: indented by two spaces, keys in the order of the record, a line feed at the end.
///
/// # Errors
/// A number that is not finite has no form in JSON.
pub fn pretty<T: Serialize>(value: &T) -> Result<String, Unwritable> {
    let mut bytes = Vec::new();
    let mut serializer = Serializer::with_formatter(&mut bytes, NumbersAsHashed::default());
    value.serialize(&mut serializer).map_err(Unwritable)?;
    bytes.push(b'\n');
    String::from_utf8(bytes).map_err(|fault| {
        Unwritable(serde_json::Error::io(io::Error::new(
            io::ErrorKind::InvalidData,
            fault,
        )))
    })
}

/// Indentation as usual, numbers as in the canonical form.
#[derive(Default)]
struct NumbersAsHashed {
    layout: PrettyFormatter<'static>,
}

macro_rules! as_usual {
    ($($name:ident($($argument:ident: $kind:ty),*)),+ $(,)?) => {
        $(fn $name<W: ?Sized + io::Write>(&mut self, writer: &mut W $(, $argument: $kind)*) -> io::Result<()> {
            self.layout.$name(writer $(, $argument)*)
        })+
    };
}

impl Formatter for NumbersAsHashed {
    as_usual!(
        begin_array(),
        end_array(),
        begin_array_value(first: bool),
        end_array_value(),
        begin_object(),
        end_object(),
        begin_object_key(first: bool),
        begin_object_value(),
        end_object_value(),
    );

    fn write_f64<W: ?Sized + io::Write>(&mut self, writer: &mut W, value: f64) -> io::Result<()> {
        let text = canonical_text(&value).map_err(io::Error::other)?;
        writer.write_all(text.as_bytes())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        /// The filed text, read again, has the canonical form of the value itself.
        #[test]
        fn filed_numbers_hash_alike(bits in any::<u64>()) {
            let number = f64::from_bits(bits);
            prop_assume!(number.is_finite());
            let filed = pretty(&vec![number]).unwrap();
            let again: serde_json::Value = serde_json::from_str(&filed).unwrap();
            prop_assert_eq!(canonical(&again).unwrap(), canonical(&vec![number]).unwrap());
        }
    }

    #[test]
    fn numbers_are_printed_as_ecmascript_prints_them() {
        // RFC 8785, appendix B: rows of its table of number samples.
        for (bits, text) in [
            (0x0000_0000_0000_0001_u64, "5e-324"),
            (0x4340_0000_0000_0000, "9007199254740992"),
            (0x44b5_2d02_c7e1_4af6, "1e+23"),
            (0x444b_1ae4_d6e2_ef50, "1e+21"),
            (0x3eb0_c6f7_a0b5_ed8d, "0.000001"),
            (0x3eb0_c6f7_a0b5_ed8c, "9.999999999999997e-7"),
        ] {
            let number = f64::from_bits(bits);
            assert_eq!(pretty(&number).unwrap(), format!("{text}\n"));
        }
    }

    #[test]
    fn what_is_not_finite_is_refused() {
        assert!(canonical(&f64::INFINITY).is_err());
        assert!(canonical(&f64::NAN).is_err());
    }
}
