//! What `compile` promises about files, and every command about its exit status. Each test has a folder of its own.

#![allow(clippy::unwrap_used)]

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;
use std::process::{Command, Output, Stdio};

use tempfile::TempDir;

/// A plan of few units, whose requirement is met.
fn plan(id: &str, revision: &str) -> String {
    format!(
        r#"assize: 1
plan: {{id: "{id}", revision: "{revision}", title: "Seal integrity"}}
characteristic: {{name: "open seal", counts: "pouches with an open seal", unit: pouch}}
test:
  family: binomial
  parameter_space: 0 <= p <= 1
  null_subset: p >= 5 %
  alpha: 0.05
  sample_size: 93
power:
  - {{where: p <= 0.4 %, at_least: 0.90, because: "last year's average"}}
decision:
  accept_when: null_rejected
"#
    )
}

fn folder_with(plans: &[(&str, &str)]) -> TempDir {
    let folder = tempfile::tempdir().unwrap();
    for (name, text) in plans {
        write(folder.path(), name, text.as_bytes());
    }
    folder
}

fn write(folder: &Path, name: &str, content: &[u8]) {
    let path = folder.join(name);
    fs::create_dir_all(path.parent().unwrap()).unwrap();
    fs::write(path, content).unwrap();
}

fn assize(folder: &Path, arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_assize"))
        .args(arguments)
        .current_dir(folder)
        .stdin(Stdio::null())
        .output()
        .unwrap()
}

fn status(output: &Output) -> i32 {
    output.status.code().unwrap()
}

fn said(output: &Output) -> String {
    String::from_utf8_lossy(&output.stderr).into_owned()
}

/// Names and bytes of the files of a folder.
fn files(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    let entries = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap());
    entries
        .map(|entry| {
            let name = entry.file_name().into_string().unwrap();
            (name, fs::read(entry.path()).unwrap())
        })
        .collect()
}

fn names(folder: &Path) -> Vec<String> {
    files(folder).into_keys().collect()
}

const THREE_AND_SUMS: [&str; 4] = ["SHA256SUMS", "TP-1-A.html", "TP-1-A.json", "TP-1-A.md"];

#[test]
fn the_same_plan_gives_the_same_bytes_whatever_the_place_and_the_number_of_threads() {
    let folder = folder_with(&[
        ("a/one.yaml", &plan("TP-1", "A")),
        ("a/two.yml", &plan("TP-1", "B")),
        ("a/b/three.yaml", &plan("TP-2", "A")),
        ("a/notes.txt", "no plan"),
    ]);
    let here = folder.path();
    assert_eq!(status(&assize(here, &["compile", "a", "--jobs", "1"])), 0);
    assert_eq!(
        status(&assize(
            here,
            &["compile", "./a/../a", "--out", "other", "--jobs", "4"]
        )),
        0
    );
    let first = files(&here.join("reports"));
    assert_eq!(first.len(), 10, "{:?}", first.keys());
    assert_eq!(first, files(&here.join("other")));
}

#[test]
fn a_filed_report_is_left_alone_and_refused_when_it_would_differ() {
    let folder = folder_with(&[("one.yaml", &plan("TP-1", "A"))]);
    let here = folder.path();
    assert_eq!(status(&assize(here, &["compile", "one.yaml"])), 0);
    let filed = files(&here.join("reports"));
    assert_eq!(names(&here.join("reports")), THREE_AND_SUMS);

    assert_eq!(status(&assize(here, &["compile", "one.yaml"])), 0);
    assert_eq!(filed, files(&here.join("reports")));

    write(
        here,
        "one.yaml",
        plan("TP-1", "A").replace("93", "99").as_bytes(),
    );
    let refused = assize(here, &["compile", "one.yaml"]);
    assert_eq!(status(&refused), 2);
    assert!(said(&refused).contains("--replace"), "{}", said(&refused));
    assert_eq!(filed, files(&here.join("reports")));

    assert_eq!(
        status(&assize(here, &["compile", "one.yaml", "--replace"])),
        0
    );
    let replaced = files(&here.join("reports"));
    assert!(
        THREE_AND_SUMS
            .iter()
            .all(|name| replaced[*name] != filed[*name])
    );
}

#[test]
fn the_list_of_hashes_keeps_what_others_filed_and_is_true() {
    let folder = folder_with(&[
        ("1.yaml", &plan("TP-1", "A")),
        ("0.yaml", &plan("TP-0", "A")),
    ]);
    let here = folder.path();
    let other = format!("{}  photograph.jpg\n", "0".repeat(64));
    write(here, "reports/SHA256SUMS", other.as_bytes());
    assert_eq!(status(&assize(here, &["compile", "1.yaml"])), 0);
    assert_eq!(status(&assize(here, &["compile", "0.yaml"])), 0);
    let filed = files(&here.join("reports"));
    let list = String::from_utf8(filed["SHA256SUMS"].clone()).unwrap();
    assert!(list.contains(&other));
    assert_eq!(list.lines().count(), 7);
    for (name, content) in filed.iter().filter(|(name, _)| *name != "SHA256SUMS") {
        assert!(
            list.contains(&assize::record::checksum_line(name, content)),
            "{name}"
        );
    }
    let named: Vec<&str> = list.lines().map(|line| &line[66..]).collect();
    assert!(named.is_sorted(), "{named:?}");
}

#[test]
fn two_plans_that_claim_the_same_files_are_both_refused() {
    let folder = folder_with(&[
        ("a.yaml", &plan("TP-1", "A")),
        ("b.yaml", &plan("tp-1", "a")),
        ("c.yaml", &plan("TP-2", "A")),
    ]);
    let output = assize(folder.path(), &["compile", "."]);
    assert_eq!(status(&output), 2);
    let filed = names(&folder.path().join("reports"));
    assert_eq!(
        filed,
        ["SHA256SUMS", "TP-2-A.html", "TP-2-A.json", "TP-2-A.md"]
    );
}

#[test]
fn the_worst_status_counts_and_all_that_compiles_is_filed() {
    let unmet = plan("TP-2", "A").replace("0.90", "0.99");
    let folder = folder_with(&[
        ("good.yaml", &plan("TP-1", "A")),
        ("unmet.yaml", &unmet),
        ("wrong.yaml", &plan("TP-3", "A").replace("alpha", "alhpa")),
    ]);
    let here = folder.path();
    assert_eq!(
        status(&assize(here, &["compile", "good.yaml", "unmet.yaml"])),
        1
    );
    assert_eq!(status(&assize(here, &["compile", "."])), 2);
    assert_eq!(names(&here.join("reports")).len(), 7);
    for command in ["check", "solve"] {
        assert_eq!(status(&assize(here, &[command, "good.yaml"])), 0);
        assert_eq!(status(&assize(here, &[command, "unmet.yaml"])), 1);
        assert_eq!(status(&assize(here, &[command, "wrong.yaml"])), 2);
    }
}

#[test]
fn an_identifier_never_leads_out_of_the_folder() {
    for id in ["../TP-1", "a/b", "/TP", "..", "TP\\u0000", "TP:1", ""] {
        let folder = folder_with(&[("in/plan.yaml", &plan(id, "A"))]);
        let here = folder.path();
        let output = assize(here, &["compile", "in/plan.yaml", "--out", "in/reports"]);
        assert_eq!(status(&output), 2, "{id}");
        assert_eq!(names_deep(here), ["in/plan.yaml"], "{id}");
    }
}

/// Names of all regular files below a folder, but for an empty list of hashes.
fn names_deep(folder: &Path) -> Vec<String> {
    let mut found = Vec::new();
    let mut folders = vec![folder.to_owned()];
    while let Some(next) = folders.pop() {
        for entry in fs::read_dir(next).unwrap().map(|entry| entry.unwrap()) {
            if entry.file_type().unwrap().is_dir() {
                folders.push(entry.path());
            } else {
                let path = entry.path();
                let below = path.strip_prefix(folder).unwrap();
                found.push(below.to_str().unwrap().to_owned());
            }
        }
    }
    found.sort();
    found
}

#[test]
fn odd_file_names_are_no_obstacle_and_never_reach_the_terminal_raw() {
    let odd = "-a b\u{1b}[31m\u{202e}ü'\";$(x).yaml";
    let folder = folder_with(&[(odd, &plan("TP-1", "A")), ("wrong\n.yaml", "assize: 2\n")]);
    let output = assize(folder.path(), &["compile", "."]);
    assert_eq!(status(&output), 2);
    let all = format!(
        "{}{}",
        said(&output),
        String::from_utf8_lossy(&output.stdout)
    );
    assert!(!all.contains(['\u{1b}', '\u{202e}']), "{all:?}");
    assert!(!all.contains("wrong\n.yaml"), "{all:?}");
    assert_eq!(names(&folder.path().join("reports")), THREE_AND_SUMS);
}

#[test]
fn what_cannot_be_read_is_bad_input_and_is_named() {
    let folder = folder_with(&[("empty/readme.txt", ""), ("good.yaml", &plan("TP-1", "A"))]);
    let here = folder.path();
    write(here, "large.yaml", &vec![b'a'; 2 << 20]);
    write(here, "bytes.yaml", b"assize: 1\nplan: \xff\n");
    fs::create_dir(here.join("folder.yaml")).unwrap();
    for (name, words) in [
        ("missing.yaml", "missing.yaml"),
        ("empty", "no plan"),
        ("folder.yaml", "no plan"),
        ("large.yaml", "error[plan-too-large]"),
        ("bytes.yaml", "bytes.yaml:2:7: error[not-utf-8]"),
    ] {
        for command in ["check", "compile"] {
            let output = assize(here, &[command, name]);
            assert_eq!(status(&output), 2, "{command} {name}");
            assert!(
                said(&output).contains(words),
                "{command} {name}: {}",
                said(&output)
            );
        }
    }
    // One that cannot be read does not keep the other from being filed.
    assert_eq!(
        status(&assize(here, &["compile", "missing.yaml", "good.yaml"])),
        2
    );
    assert_eq!(names(&here.join("reports")), THREE_AND_SUMS);
}

#[test]
fn a_file_where_the_folder_should_be_is_left_alone() {
    let folder = folder_with(&[("a.yaml", &plan("TP-1", "A")), ("reports", "mine")]);
    let here = folder.path();
    let output = assize(here, &["compile", "a.yaml"]);
    assert_eq!(status(&output), 2);
    assert!(said(&output).contains("reports"), "{}", said(&output));
    assert_eq!(fs::read(here.join("reports")).unwrap(), b"mine");
}

#[cfg(unix)]
mod on_unix {
    use super::*;
    use std::os::unix::fs::{PermissionsExt, symlink};

    #[test]
    fn a_link_in_the_place_of_a_report_is_not_written_through() {
        let folder = folder_with(&[("a.yaml", &plan("TP-1", "A")), ("elsewhere", "mine")]);
        let here = folder.path();
        fs::create_dir(here.join("reports")).unwrap();
        symlink(here.join("elsewhere"), here.join("reports/TP-1-A.md")).unwrap();
        for arguments in [
            &["compile", "a.yaml"][..],
            &["compile", "a.yaml", "--replace"],
        ] {
            let output = assize(here, arguments);
            assert_eq!(status(&output), 2, "{arguments:?}");
            assert_eq!(fs::read(here.join("elsewhere")).unwrap(), b"mine");
        }
        assert!(!here.join("reports/TP-1-A.html").exists());
    }

    #[test]
    fn devices_and_endless_files_are_refused_at_once() {
        let folder = tempfile::tempdir().unwrap();
        symlink("/dev/zero", folder.path().join("zero.yaml")).unwrap();
        for name in ["zero.yaml", "/dev/null"] {
            let output = assize(folder.path(), &["compile", name]);
            assert_eq!(status(&output), 2, "{name}");
        }
    }

    /// The superuser may do everything, so there the folder stays writable and the test shows nothing.
    #[test]
    fn a_folder_that_may_not_be_written_gets_no_part_of_a_report() {
        let folder = folder_with(&[("a.yaml", &plan("TP-1", "A")), ("reports/x", "")]);
        let reports = folder.path().join("reports");
        fs::set_permissions(&reports, fs::Permissions::from_mode(0o555)).unwrap();
        let superuser = fs::write(reports.join("probe"), b"").is_ok();
        let output = assize(folder.path(), &["compile", "a.yaml"]);
        fs::set_permissions(&reports, fs::Permissions::from_mode(0o755)).unwrap();
        if !superuser {
            assert_eq!(status(&output), 2);
            assert_eq!(names(&reports), ["x"]);
        }
    }
}

#[test]
fn a_closed_reader_is_no_fault() {
    let folder = folder_with(&[("a.yaml", &plan("TP-1", "A"))]);
    for arguments in [
        &["schema"][..],
        &["man"],
        &["completions", "bash"],
        &["draft", "lot-release"],
        &["solve", "a.yaml"],
        &["solve", "--json", "a.yaml"],
        &["check", "--sarif", "a.yaml"],
        &["compile", "a.yaml"],
    ] {
        let (reader, writer) = std::io::pipe().unwrap();
        drop(reader);
        let output = Command::new(env!("CARGO_BIN_EXE_assize"))
            .args(arguments)
            .current_dir(folder.path())
            .stdout(writer)
            .stderr(Stdio::piped())
            .output()
            .unwrap();
        assert_eq!(status(&output), 0, "{arguments:?}");
        assert!(!said(&output).contains("panicked"), "{arguments:?}");
    }
}

#[test]
fn solve_prints_the_record_that_compile_files() {
    let folder = folder_with(&[("a.yaml", &plan("TP-1", "A"))]);
    let here = folder.path();
    assert_eq!(status(&assize(here, &["compile", "a.yaml"])), 0);
    let printed = assize(here, &["solve", "--json", "a.yaml"]).stdout;
    assert_eq!(files(&here.join("reports"))["TP-1-A.json"], printed);
}

#[test]
fn drafts_go_to_new_files_only() {
    let folder = folder_with(&[("mine.yaml", "mine")]);
    let here = folder.path();
    let kept = assize(here, &["draft", "lot-release", "--out", "mine.yaml"]);
    assert_eq!(status(&kept), 2);
    assert_eq!(fs::read(here.join("mine.yaml")).unwrap(), b"mine");
    let replaced = ["draft", "lot-release", "--out", "mine.yaml", "--replace"];
    assert_eq!(status(&assize(here, &replaced)), 0);
    assert_eq!(status(&assize(here, &["solve", "mine.yaml"])), 0);
    assert_eq!(status(&assize(here, &["draft", "no-such-kind"])), 2);
}

#[test]
fn wrong_usage_is_bad_input() {
    let folder = tempfile::tempdir().unwrap();
    for arguments in [
        &[][..],
        &["compile"],
        &["solve", "a", "b"],
        &["no-such-command"],
    ] {
        assert_eq!(
            status(&assize(folder.path(), arguments)),
            2,
            "{arguments:?}"
        );
    }
}
