//! Files that are there whole or not at all: written beside their place, brought to the disk, then renamed.

use std::fs::{self, File};
use std::io::{self, Write};
use std::path::Path;

use tempfile::{Builder, NamedTempFile};

/// How files in the making are called, so that what a power cut left behind is known again.
const PREFIX: &str = ".assize-";
const SUFFIX: &str = ".partial";

/// A file that is on the disk but not yet in its place. Dropped, it vanishes.
pub struct Prepared {
    file: NamedTempFile,
    name: String,
}

/// Writes a file beside its place.
///
/// # Errors
/// Whatever the file system says: no space, no permission.
pub fn prepare(folder: &Path, name: &str, content: &[u8]) -> io::Result<Prepared> {
    let mut builder = Builder::new();
    builder.prefix(PREFIX).suffix(SUFFIX);
    // Temporary files are for their owner only; a report is for everybody whom the user's mask lets read.
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        builder.permissions(fs::Permissions::from_mode(0o666));
    }
    let mut file = builder.tempfile_in(folder)?;
    file.write_all(content)?;
    file.as_file().sync_all()?;
    Ok(Prepared {
        file,
        name: name.to_owned(),
    })
}

impl Prepared {
    /// Puts the file in its place, over an older one. Renaming leaves either the old or the new file, never a mixture.
    pub fn put(self, folder: &Path) -> io::Result<()> {
        self.file.persist(folder.join(&self.name))?;
        Ok(())
    }

    /// Puts the file in its place unless there is one already.
    fn put_new(self, folder: &Path) -> io::Result<()> {
        self.file.persist_noclobber(folder.join(&self.name))?;
        Ok(())
    }
}

/// Brings the names in a folder to the disk.
pub fn settle(folder: &Path) -> io::Result<()> {
    // Only there can a folder be opened like a file.
    if cfg!(unix) {
        File::open(folder)?.sync_all()?;
    }
    Ok(())
}

/// Writes a whole file, over an older one.
///
/// # Errors
/// Whatever the file system says; an older file is then untouched.
pub fn write_whole(folder: &Path, name: &str, content: &[u8]) -> io::Result<()> {
    prepare(folder, name, content)?.put(folder)?;
    settle(folder)
}

/// Writes a whole file where there is none.
///
/// # Errors
/// `AlreadyExists` if there is one, or whatever the file system says.
pub fn write_new(folder: &Path, name: &str, content: &[u8]) -> io::Result<()> {
    prepare(folder, name, content)?.put_new(folder)?;
    settle(folder)
}

/// Removes what an interrupted run left behind. Only for a folder that no other run is writing to.
pub fn sweep(folder: &Path) -> io::Result<()> {
    for entry in fs::read_dir(folder)? {
        let entry = entry?;
        let name = entry.file_name();
        let left_behind = name
            .to_str()
            .is_some_and(|name| name.starts_with(PREFIX) && name.ends_with(SUFFIX));
        if left_behind && entry.file_type()?.is_file() {
            fs::remove_file(entry.path())?;
        }
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names(folder: &Path) -> Vec<String> {
        let mut names: Vec<String> = fs::read_dir(folder)
            .unwrap()
            .map(|entry| entry.unwrap().file_name().into_string().unwrap())
            .collect();
        names.sort();
        names
    }

    #[test]
    fn a_file_not_put_in_its_place_leaves_nothing() {
        let folder = tempfile::tempdir().unwrap();
        write_whole(folder.path(), "a", b"old").unwrap();
        let prepared = prepare(folder.path(), "a", b"new").unwrap();
        assert_eq!(names(folder.path()).len(), 2);
        drop(prepared);
        assert_eq!(names(folder.path()), ["a"]);
        assert_eq!(fs::read(folder.path().join("a")).unwrap(), b"old");
    }

    #[test]
    fn what_exists_is_kept_unless_written_over_on_purpose() {
        let folder = tempfile::tempdir().unwrap();
        write_new(folder.path(), "a", b"one").unwrap();
        let fault = write_new(folder.path(), "a", b"two").unwrap_err();
        assert_eq!(fault.kind(), io::ErrorKind::AlreadyExists);
        assert_eq!(fs::read(folder.path().join("a")).unwrap(), b"one");
        write_whole(folder.path(), "a", b"three").unwrap();
        assert_eq!(fs::read(folder.path().join("a")).unwrap(), b"three");
        assert_eq!(names(folder.path()), ["a"]);
    }

    #[test]
    fn only_what_an_interrupted_run_left_is_swept() {
        let folder = tempfile::tempdir().unwrap();
        for name in [".assize-x1.partial", ".assize-notes", "a.partial"] {
            fs::write(folder.path().join(name), b"").unwrap();
        }
        sweep(folder.path()).unwrap();
        assert_eq!(names(folder.path()), [".assize-notes", "a.partial"]);
    }

    #[cfg(unix)]
    #[test]
    fn others_may_read_a_report() {
        use std::os::unix::fs::PermissionsExt;
        let folder = tempfile::tempdir().unwrap();
        fs::write(folder.path().join("usual"), b"").unwrap();
        write_whole(folder.path(), "report", b"").unwrap();
        let mode = |name: &str| {
            let metadata = fs::metadata(folder.path().join(name)).unwrap();
            metadata.permissions().mode()
        };
        assert_eq!(mode("report"), mode("usual"));
    }
}
