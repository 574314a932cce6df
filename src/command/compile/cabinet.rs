//! The folder in which reports are filed. Nothing is ever written outside it, and what is filed changes only on purpose.

use std::fs::{self, File, TryLockError};
use std::io;
use std::path::{Path, PathBuf};

use crate::command::whole_file::{self, Prepared};

use super::checksums::Checksums;

/// The name of the list of hashes.
pub const CHECKSUMS: &str = "SHA256SUMS";

/// An open folder of reports.
pub struct Cabinet {
    folder: PathBuf,
    replace: bool,
    checksums: Checksums,
    /// Held as long as the cabinet is open.
    _lock: Option<File>,
}

/// What filing did.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Filed {
    /// The files are new, or a missing one was added.
    New,
    /// The same content was filed before.
    Same,
    /// Other content was written over.
    Replaced,
}

/// Why nothing was filed.
#[derive(Debug)]
pub enum Refusal {
    /// Files with other content exist.
    Differs(Vec<String>),
    /// Something that is no regular file has the name.
    NoFile(String),
    /// The file system refuses.
    Disk(io::Error),
}

impl From<io::Error> for Refusal {
    fn from(fault: io::Error) -> Self {
        Self::Disk(fault)
    }
}

impl std::fmt::Display for Refusal {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::Differs(names) => {
                write!(out, "filed before with other content: {}", names.join(", "))
            }
            Self::NoFile(name) => {
                write!(
                    out,
                    "{name} in the report folder is a link or no file, and is not written"
                )
            }
            Self::Disk(fault) => write!(out, "the report cannot be written: {fault}"),
        }
    }
}

/// What stands at a place.
enum Standing {
    Nothing,
    Same,
    Other,
}

impl Cabinet {
    /// Opens a folder, makes it if need be, and clears away what an interrupted run left.
    ///
    /// # Errors
    /// A sentence: the folder cannot be made or read, another run has it open, or its list of hashes is damaged.
    pub fn open(folder: &Path, replace: bool) -> Result<Self, String> {
        fs::create_dir_all(folder)
            .map_err(|fault| format!("the folder cannot be made: {fault}"))?;
        let lock = lock(folder)?;
        if lock.is_some() {
            whole_file::sweep(folder)
                .map_err(|fault| format!("the folder cannot be tidied: {fault}"))?;
        }
        let list = folder.join(CHECKSUMS);
        let checksums = match standing(&list, b"") {
            Ok(Standing::Nothing) => Checksums::default(),
            Ok(_) => fs::read_to_string(&list)
                .map_err(|fault| format!("{CHECKSUMS} cannot be read: {fault}"))?
                .parse()
                .map_err(|line| format!("line {line} of {CHECKSUMS} is not one of a list of hashes; mend it or move the file away"))?,
            Err(refusal) => return Err(refusal.to_string()),
        };
        Ok(Self {
            folder: folder.to_owned(),
            replace,
            checksums,
            _lock: lock,
        })
    }

    /// Files the parts of one report. All of them are on the disk before the first gets its name.
    ///
    /// # Errors
    /// A refusal; no file was changed then, unless the disk failed between two renamings.
    pub fn file(&self, parts: &[(String, String)]) -> Result<Filed, Refusal> {
        let mut missing = Vec::new();
        let mut other = Vec::new();
        for (name, content) in parts {
            match standing(&self.folder.join(name), content.as_bytes())? {
                Standing::Nothing => missing.push((name, content)),
                Standing::Same => {}
                Standing::Other => other.push((name, content)),
            }
        }
        if !other.is_empty() && !self.replace {
            let names = other.iter().map(|(name, _)| (*name).clone()).collect();
            return Err(Refusal::Differs(names));
        }
        let filed = match (missing.is_empty(), other.is_empty()) {
            (true, true) => return Ok(Filed::Same),
            (false, true) => Filed::New,
            (_, false) => Filed::Replaced,
        };
        let prepared = missing
            .iter()
            .chain(&other)
            .map(|(name, content)| whole_file::prepare(&self.folder, name, content.as_bytes()))
            .collect::<io::Result<Vec<Prepared>>>()?;
        for part in prepared {
            part.put(&self.folder)?;
        }
        whole_file::settle(&self.folder)?;
        Ok(filed)
    }

    /// Enters hashes into the list; those of other files are kept.
    ///
    /// # Errors
    /// A sentence: the list cannot be written.
    pub fn list(&self, entries: Vec<(String, String)>) -> Result<(), String> {
        let mut checksums = self.checksums.clone();
        for (name, line) in entries {
            checksums.enter(name, line);
        }
        if checksums == self.checksums {
            return Ok(());
        }
        whole_file::write_whole(&self.folder, CHECKSUMS, checksums.to_string().as_bytes())
            .map_err(|fault| format!("{CHECKSUMS} cannot be written: {fault}"))
    }
}

/// Two runs at once could each lose the other's entries in the list of hashes.
fn lock(folder: &Path) -> Result<Option<File>, String> {
    // Where a folder cannot be opened like a file, or the file system knows no locks, there is none.
    let Ok(handle) = File::open(folder) else {
        return Ok(None);
    };
    match handle.try_lock() {
        Ok(()) => Ok(Some(handle)),
        Err(TryLockError::WouldBlock) => {
            Err("another run is writing to this folder; wait until it has ended".to_owned())
        }
        Err(TryLockError::Error(_)) => Ok(None),
    }
}

/// Compares a place with a content. A link is refused, for it could lead out of the folder.
fn standing(path: &Path, content: &[u8]) -> Result<Standing, Refusal> {
    let metadata = match fs::symlink_metadata(path) {
        Ok(metadata) => metadata,
        Err(fault) if fault.kind() == io::ErrorKind::NotFound => return Ok(Standing::Nothing),
        Err(fault) => return Err(fault.into()),
    };
    if !metadata.is_file() {
        let name = path.file_name().unwrap_or_default().to_string_lossy();
        return Err(Refusal::NoFile(name.into_owned()));
    }
    let same = metadata.len() == content.len() as u64 && fs::read(path)? == content;
    Ok(if same {
        Standing::Same
    } else {
        Standing::Other
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn parts(text: &str) -> Vec<(String, String)> {
        ["a.md", "a.json"]
            .map(|name| (name.to_owned(), text.to_owned()))
            .into()
    }

    #[test]
    fn what_is_filed_changes_only_on_purpose() {
        let folder = tempfile::tempdir().unwrap();
        let careful = Cabinet::open(folder.path(), false).unwrap();
        assert_eq!(careful.file(&parts("one")).unwrap(), Filed::New);
        assert_eq!(careful.file(&parts("one")).unwrap(), Filed::Same);
        assert!(
            matches!(careful.file(&parts("two")), Err(Refusal::Differs(names)) if names.len() == 2)
        );
        assert_eq!(
            fs::read_to_string(folder.path().join("a.md")).unwrap(),
            "one"
        );
        drop(careful);
        let replacing = Cabinet::open(folder.path(), true).unwrap();
        assert_eq!(replacing.file(&parts("two")).unwrap(), Filed::Replaced);
        assert_eq!(
            fs::read_to_string(folder.path().join("a.md")).unwrap(),
            "two"
        );
    }

    #[test]
    fn a_missing_part_is_added() {
        let folder = tempfile::tempdir().unwrap();
        let cabinet = Cabinet::open(folder.path(), false).unwrap();
        cabinet.file(&parts("one")).unwrap();
        fs::remove_file(folder.path().join("a.json")).unwrap();
        assert_eq!(cabinet.file(&parts("one")).unwrap(), Filed::New);
        assert!(folder.path().join("a.json").exists());
    }

    #[cfg(unix)]
    #[test]
    fn links_are_not_followed_and_not_replaced() {
        let folder = tempfile::tempdir().unwrap();
        let outside = tempfile::NamedTempFile::new().unwrap();
        std::os::unix::fs::symlink(outside.path(), folder.path().join("a.md")).unwrap();
        let cabinet = Cabinet::open(folder.path(), true).unwrap();
        assert!(matches!(cabinet.file(&parts("x")), Err(Refusal::NoFile(_))));
        assert!(!folder.path().join("a.json").exists());
        assert_eq!(fs::read(outside.path()).unwrap(), b"");
    }

    #[cfg(unix)]
    #[test]
    fn one_run_at_a_time() {
        let folder = tempfile::tempdir().unwrap();
        let first = Cabinet::open(folder.path(), false).unwrap();
        assert!(Cabinet::open(folder.path(), false).is_err());
        drop(first);
        assert!(Cabinet::open(folder.path(), false).is_ok());
    }
}
