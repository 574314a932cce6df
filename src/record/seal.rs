//! Hashes that tie the filed parts together. They show that nothing was altered since; they are not signatures and say
//! nothing about who made a record.

use sha2::{Digest, Sha256};

use super::canonical::{Unwritable, canonical, pretty};
use super::{Record, Seal, hexadecimal};

/// SHA-256 in lower-case hexadecimal.
pub fn sha256_hex(bytes: &[u8]) -> String {
    hexadecimal(&Sha256::digest(bytes))
}

impl Record {
    /// SHA-256 over the RFC 8785 canonical form of the record without its seal.
    ///
    /// # Errors
    /// A figure that is not finite cannot be written down.
    pub fn hash(&self) -> Result<String, Unwritable> {
        let unsealed = Self {
            seal: None,
            ..self.clone()
        };
        Ok(sha256_hex(canonical(&unsealed)?.as_bytes()))
    }
}

/// Sets the seal of a record to the hash of all the rest. Sealing twice changes nothing.
///
/// # Errors
/// A figure that is not finite cannot be written down.
pub fn seal(record: &mut Record) -> Result<(), Unwritable> {
    record.seal = Some(Seal {
        record_sha256: record.hash()?,
    });
    Ok(())
}

/// The record as it is filed: indented JSON with a line feed at the end.
///
/// # Errors
/// A figure that is not finite cannot be written down.
pub fn record_json(record: &Record) -> Result<String, Unwritable> {
    pretty(record)
}

/// One line of a `SHA256SUMS` file, as `sha256sum --check` reads it. Plan numbers and revisions hold no character that
/// the format would have to escape.
pub fn checksum_line(file_name: &str, content: &[u8]) -> String {
    format!("{}  {file_name}\n", sha256_hex(content))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::fixture;

    #[test]
    fn hash_of_a_known_message() {
        // FIPS 180-4 example message "abc" (NIST example values for SHA-256).
        assert_eq!(
            sha256_hex(b"abc"),
            "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
        );
    }

    #[test]
    fn a_filed_record_read_again_has_the_hash_in_its_seal() {
        let mut record = fixture::pouches();
        seal(&mut record).unwrap();
        let filed = record_json(&record).unwrap();
        let mut again: serde_json::Value = serde_json::from_str(&filed).unwrap();
        let sealed = again.as_object_mut().unwrap().shift_remove("seal").unwrap();
        let hash = sha256_hex(canonical(&again).unwrap().as_bytes());
        assert_eq!(sealed["record_sha256"], hash);
        assert!(filed.ends_with("}\n"));
    }

    #[test]
    fn any_change_changes_the_hash_and_the_seal_does_not() {
        let mut record = fixture::pouches();
        let unsealed = record.hash().unwrap();
        seal(&mut record).unwrap();
        assert_eq!(record.hash().unwrap(), unsealed);
        record.size.upper = record.size.upper.next_up();
        assert_ne!(record.hash().unwrap(), unsealed);
    }

    #[test]
    fn checksum_lines_have_two_spaces() {
        let line = checksum_line("TP-1-A.md", b"abc");
        assert!(line.ends_with("15ad  TP-1-A.md\n"));
        assert_eq!(line.find("  "), Some(64));
    }
}
