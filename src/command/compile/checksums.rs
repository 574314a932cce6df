//! The list of hashes that `sha256sum --check` reads.

use std::collections::BTreeMap;
use std::fmt;
use std::str::FromStr;

/// Lines by file name. Lines of files that this run does not write are kept as they are.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Checksums(BTreeMap<String, String>);

impl Checksums {
    /// Enters the line of a file, in place of an older one.
    pub fn enter(&mut self, name: String, line: String) {
        self.0.insert(name, line.trim_end().to_owned());
    }
}

impl FromStr for Checksums {
    /// The number of the first line that cannot be read.
    type Err = usize;

    fn from_str(text: &str) -> Result<Self, usize> {
        let mut lines = BTreeMap::new();
        for (at, line) in text.lines().enumerate() {
            let name = file_name(line).ok_or(at + 1)?;
            lines.insert(name.to_owned(), line.to_owned());
        }
        Ok(Self(lines))
    }
}

/// The file name in a line: 64 hexadecimal digits, a space, a space or asterisk, the name. A backslash in front says that
/// the name holds escapes; it is taken as it stands.
fn file_name(line: &str) -> Option<&str> {
    let line = line.strip_prefix('\\').unwrap_or(line);
    let (hash, rest) = line.split_at_checked(64)?;
    let name = rest
        .strip_prefix("  ")
        .or_else(|| rest.strip_prefix(" *"))?;
    let is_hash = hash.bytes().all(|byte| byte.is_ascii_hexdigit());
    (is_hash && !name.is_empty()).then_some(name)
}

impl fmt::Display for Checksums {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.0.values().try_for_each(|line| writeln!(out, "{line}"))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn other_entries_are_kept_and_all_are_sorted() {
        let (a, b, c) = ("a".repeat(64), "b".repeat(64), "c".repeat(64));
        let mut list: Checksums = format!("{b}  z.md\n{a} *drawing.pdf\n").parse().unwrap();
        list.enter("m.md".to_owned(), format!("{c}  m.md\n"));
        list.enter("z.md".to_owned(), format!("{c}  z.md\n"));
        assert_eq!(
            list.to_string(),
            format!("{a} *drawing.pdf\n{c}  m.md\n{c}  z.md\n")
        );
    }

    #[test]
    fn a_damaged_line_is_named() {
        let good = format!("{}  a.md", "0".repeat(64));
        for bad in ["hello", "", "0123  a.md", &good[1..], &good[..65]] {
            assert_eq!(
                format!("{good}\n{bad}\n").parse::<Checksums>(),
                Err(2),
                "{bad}"
            );
        }
    }
}
