//! Reading plans: never more than a plan may hold, never a device, and bytes that are no text are located.

use std::collections::BTreeSet;
use std::fs::{self, File, Metadata};
use std::io::{self, Read};
use std::path::{Path, PathBuf};

use crate::language::diagnostic::{Diagnostic, Span};
use crate::language::render::harmless;
use crate::language::source::{Source, decode};

use super::status::Status;
use super::terminal;

/// The most bytes a plan may have: one mebibyte.
const MOST_BYTES: u64 = 1 << 20;
/// The name that stands for standard input.
const STANDARD_INPUT: &str = "-";

/// Why there is no text.
#[derive(Debug)]
pub enum Unread {
    /// The file cannot be read at all.
    File(String),
    /// It can be read, but not as a plan: a finding with a place, and the text as far as it goes.
    Text(Box<Diagnostic>, String),
}

impl Unread {
    /// Tells it on standard error.
    pub fn tell(&self, name: &str) {
        match self {
            Self::File(reason) => terminal::complain_about(name, reason),
            Self::Text(diagnostic, text) => {
                let shown = terminal::finding(diagnostic, name, &Source::new(text));
                terminal::say(shown.trim_end());
            }
        }
    }

    /// What it means for the exit status.
    pub fn status(&self) -> Status {
        Status::BadInput
    }
}

/// Whether a path stands for standard input.
pub fn is_standard_input(path: &Path) -> bool {
    path == Path::new(STANDARD_INPUT)
}

/// A path as it is shown.
pub fn shown(path: &Path) -> String {
    if is_standard_input(path) {
        return "standard input".to_owned();
    }
    harmless(&path.to_string_lossy())
}

/// The text of a plan; `-` reads standard input.
pub fn read(path: &Path) -> Result<String, Unread> {
    let bytes = if is_standard_input(path) {
        limited(io::stdin().lock())
    } else {
        // Asked before opening: opening a pipe would wait for a writer.
        let metadata = fs::metadata(path).map_err(|fault| unreadable(&fault))?;
        regular(&metadata)?;
        File::open(path).and_then(limited)
    };
    let bytes = bytes.map_err(|fault| unreadable(&fault))?;
    if bytes.len() as u64 > MOST_BYTES {
        return Err(Unread::Text(Box::new(too_large()), String::new()));
    }
    match decode(&bytes) {
        Ok(text) => Ok(text.to_owned()),
        Err(diagnostic) => Err(Unread::Text(
            Box::new(diagnostic),
            String::from_utf8_lossy(&bytes).into_owned(),
        )),
    }
}

fn limited(source: impl Read) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    source.take(MOST_BYTES + 1).read_to_end(&mut bytes)?;
    Ok(bytes)
}

fn regular(metadata: &Metadata) -> Result<(), Unread> {
    if metadata.is_dir() {
        return Err(Unread::File(
            "this is a folder; `compile` takes folders, this command takes plans".to_owned(),
        ));
    }
    if !metadata.is_file() {
        return Err(Unread::File(
            "this is not a regular file; a plan must be one".to_owned(),
        ));
    }
    Ok(())
}

fn unreadable(fault: &io::Error) -> Unread {
    Unread::File(format!("cannot be read: {fault}"))
}

fn too_large() -> Diagnostic {
    let first = Span {
        line: 1,
        column: 1,
        width: 1,
    };
    Diagnostic::error(
        "plan-too-large",
        first,
        "this file has more than 1 MiB, which no plan needs",
    )
    .with_help("keep data and attachments in files of their own and name them in `references`")
}

/// What was asked for on the command line.
pub struct Gathered {
    /// The files, in a fixed order.
    pub paths: Vec<PathBuf>,
    /// Folders that hold no plan or cannot be read, and what is wrong with each.
    pub troubles: Vec<(String, String)>,
}

impl Gathered {
    /// Tells what is wrong on standard error.
    pub fn tell(&self) {
        for (name, what) in &self.troubles {
            terminal::complain_about(name, what);
        }
    }

    /// What it means for the exit status so far.
    pub fn status(&self) -> Status {
        if self.troubles.is_empty() {
            Status::Fine
        } else {
            Status::BadInput
        }
    }
}

/// Files as they are named, folders with all the plans below them in the order of their names. A file that is reached
/// twice is taken once.
pub fn gather(asked: &[PathBuf]) -> Gathered {
    let mut paths = Vec::new();
    let mut troubles = Vec::new();
    for path in asked {
        let is_folder = !is_standard_input(path) && path.is_dir();
        if !is_folder {
            paths.push(path.clone());
            continue;
        }
        let before = paths.len();
        if let Err(fault) = below(path, &mut paths) {
            troubles.push((shown(path), format!("the folder cannot be read: {fault}")));
        } else if paths.len() == before {
            let name = shown(path);
            let what = "no plan in this folder (*.yaml or *.yml)".to_owned();
            troubles.push((name, what));
        }
    }
    let mut seen = BTreeSet::new();
    paths.retain(|path| seen.insert(path.canonicalize().unwrap_or_else(|_| path.clone())));
    Gathered { paths, troubles }
}

/// The plans below a folder, sorted. Folders whose name begins with a dot are the tools' own, and a link to a folder may
/// lead round in a circle: neither is entered.
fn below(folder: &Path, found: &mut Vec<PathBuf>) -> io::Result<()> {
    let mut entries = fs::read_dir(folder)?.collect::<Result<Vec<_>, _>>()?;
    entries.sort_by_key(fs::DirEntry::file_name);
    for entry in entries {
        let path = entry.path();
        if entry.file_type()?.is_dir() {
            if !entry.file_name().as_encoded_bytes().starts_with(b".") {
                below(&path, found)?;
            }
        } else if is_plan(&path) && !path.is_dir() {
            found.push(path);
        }
    }
    Ok(())
}

fn is_plan(path: &Path) -> bool {
    path.extension()
        .is_some_and(|end| end == "yaml" || end == "yml")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn write(folder: &Path, name: &str, bytes: &[u8]) -> PathBuf {
        let path = folder.join(name);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(&path, bytes).unwrap();
        path
    }

    #[test]
    fn folders_are_searched_in_order_and_nothing_is_taken_twice() {
        let folder = tempfile::tempdir().unwrap();
        let at = |name: &str| write(folder.path(), name, b"assize: 1\n");
        let (b, a) = (at("b.yaml"), at("sub/a.yml"));
        at("notes.txt");
        at(".hidden/c.yaml");
        let asked = [folder.path().to_owned(), b.clone()];
        assert_eq!(gather(&asked).paths, [b, a]);
    }

    #[test]
    fn a_folder_without_plans_is_told() {
        let folder = tempfile::tempdir().unwrap();
        let gathered = gather(&[folder.path().to_owned()]);
        assert_eq!(gathered.troubles.len(), 1);
        assert_eq!(gathered.status(), Status::BadInput);
    }

    #[test]
    fn a_plan_may_have_one_mebibyte_and_no_more() {
        let folder = tempfile::tempdir().unwrap();
        let most = usize::try_from(MOST_BYTES).unwrap();
        let fits = write(folder.path(), "fits.yaml", &vec![b'#'; most]);
        let beyond = write(folder.path(), "beyond.yaml", &vec![b'#'; most + 1]);
        assert_eq!(read(&fits).unwrap().len(), most);
        assert!(
            matches!(read(&beyond), Err(Unread::Text(found, _)) if found.code == "plan-too-large")
        );
    }

    #[test]
    fn bytes_that_are_no_text_are_located() {
        let folder = tempfile::tempdir().unwrap();
        let path = write(folder.path(), "a.yaml", b"assize: 1\n\xff");
        let Err(Unread::Text(found, _)) = read(&path) else {
            panic!("read as text");
        };
        assert_eq!((found.code, found.span.line), ("not-utf-8", 2));
    }

    #[test]
    fn what_is_no_file_is_told() {
        let folder = tempfile::tempdir().unwrap();
        assert!(matches!(read(folder.path()), Err(Unread::File(_))));
        assert!(matches!(
            read(&folder.path().join("missing.yaml")),
            Err(Unread::File(_))
        ));
        #[cfg(unix)]
        assert!(matches!(read(Path::new("/dev/null")), Err(Unread::File(_))));
    }
}
