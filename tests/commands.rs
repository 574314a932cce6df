//! The console transcripts under `tests/commands`: a command, all that it prints, and its exit status (`? 2`). A folder
//! `NAME.in` beside `NAME.md` holds the files at hand; a folder `NAME.out` says that the commands write, and holds what
//! must be there in the end. `TRYCMD=overwrite cargo test --test commands` accepts what has changed: read the diff.

#[test]
fn transcripts() {
    trycmd::TestCases::new().case("tests/commands/*.md");
}
