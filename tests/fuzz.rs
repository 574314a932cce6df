//! Long runs of hostile input against the two readers, on the stable toolchain:
//!
//! ```text
//! ASSIZE_FUZZ_SECONDS=1800 cargo test --test fuzz -- --ignored --nocapture
//! ```
//!
//! Each target starts from its corpus (`tests/plans/*.yaml`, `tests/corpus/expressions.txt`), changes and crosses entries,
//! and keeps what makes the program say something it has not said before: the words of its findings stand in for the
//! paths through its code. A text that breaks a promise is printed in full and written to `target/fuzz`; it then belongs
//! into the corpus, where every ordinary test run reads it again. `ASSIZE_FUZZ_SEED` changes the run, otherwise every run
//! is the same. The test profile is wanted: it checks for overflow.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::collections::BTreeSet;
use std::fs;
use std::panic::{AssertUnwindSafe, catch_unwind, resume_unwind};
use std::path::Path;
use std::time::{Duration, Instant};

use assize::language::expression::parse_text;
use assize::language::read::read;
use assize::language::render::render;
use assize::language::source::Source;

/// Splitmix64 (Steele, Lea, Flood 2014): a few lines, and the same numbers everywhere.
struct Chance(u64);

impl Chance {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut mixed = self.0;
        mixed = (mixed ^ (mixed >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        mixed = (mixed ^ (mixed >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        mixed ^ (mixed >> 31)
    }

    fn below(&mut self, bound: usize) -> usize {
        (self.next() % bound.max(1) as u64) as usize
    }
}

/// One reader under test.
struct Target {
    name: &'static str,
    corpus: Vec<String>,
    /// Pieces that mean something to this reader.
    pieces: &'static [&'static str],
    /// Reads a text, checks what is promised for every text, and tells what was said about it.
    exercise: fn(&str) -> BTreeSet<String>,
    longest: usize,
}

const SIGNS: &[&str] = &[
    "<",
    "<=",
    "≤",
    ">",
    ">=",
    "≥",
    "=",
    "=>",
    "(",
    ")",
    "P(",
    "median(X)",
    "quantile(X, ",
    ",",
    "%",
    " ppm",
    "inf",
    "-",
    "+",
    "*",
    "/",
    " and ",
    " or ",
    "0",
    "1",
    "0.05",
    ".5",
    "1e-400",
    "99999999999999999999",
    "p",
    "X",
    "{",
    "}",
    " ",
    "∞",
    "\u{0}",
    "滅",
];

const PIECES: &[&str] = &[
    "{",
    "}",
    "[",
    "]",
    ",",
    ": ",
    ":",
    "- ",
    "? ",
    "#",
    " #",
    "&a ",
    "*a",
    "!!str ",
    "!",
    "|",
    "|2-\n",
    ">",
    ">+\n",
    "'",
    "\"",
    "\\",
    "\\x00",
    "%",
    "%YAML 1.1\n",
    "@",
    "`",
    "\n",
    "\r\n",
    "\r",
    "\t",
    "  ",
    "    ",
    "---\n",
    "...\n",
    "<<: ",
    "~",
    "null",
    "NaN",
    ".inf",
    "1e999",
    "-1",
    "0",
    "smallest",
    "p >= 5 %",
    "0,05",
    "\u{85}",
    "\u{2028}",
    "\u{202e}",
    "\u{feff}",
    "\u{0}",
    "滅",
    "e\u{301}",
    "family: poisson\n",
    "family: hypergeometric\n",
    "family: normal\n",
    "family: negative_binomial\n",
    "stop_at: {nonconforming: 3}",
    "stages:\n",
    "lot_size: 100\n",
    "power_at: [1, 2]",
    "{from: 0, to: 1, step: 1e-9}",
    "sha256:",
];

fn targets() -> [Target; 2] {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/tests");
    let mut paths: Vec<_> = fs::read_dir(format!("{folder}/plans"))
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .collect();
    paths.sort();
    let plans = paths
        .iter()
        .filter_map(|path| fs::read_to_string(path).ok())
        .collect();
    let expressions = fs::read_to_string(format!("{folder}/corpus/expressions.txt")).unwrap();
    [
        Target {
            name: "plans",
            corpus: plans,
            pieces: PIECES,
            exercise: exercise_plan,
            longest: 6000,
        },
        Target {
            name: "expressions",
            corpus: expressions.lines().map(str::to_owned).collect(),
            pieces: SIGNS,
            exercise: exercise_expression,
            longest: 400,
        },
    ]
}

/// A message without the parts that come from the text, so that saying the same of another text is nothing new.
fn said(message: &str) -> String {
    let mut quoted = false;
    message
        .chars()
        .filter(|c| {
            if *c == '`' {
                quoted = !quoted;
            }
            !quoted && !c.is_ascii_digit()
        })
        .collect()
}

fn exercise_plan(text: &str) -> BTreeSet<String> {
    let reading = read(text);
    let source = Source::new(text);
    let errors = reading.diagnostics.iter().any(|found| found.is_error());
    assert_eq!(
        reading.plan.is_none(),
        errors,
        "a plan if and only if there is no error"
    );
    let mut heard = BTreeSet::new();
    for found in &reading.diagnostics {
        assert!(found.span.line <= source.line_count());
        assert!(found.span.column <= source.line(found.span.line).len() + 1);
        let shown = render(found, "plan.yaml", &source);
        assert!(!shown.contains(|c: char| c.is_control() && c != '\n'));
        heard.insert(format!("{} {}", found.code, said(&found.message)));
        if let Some(help) = &found.help {
            heard.insert(format!("{} {}", found.code, said(help)));
        }
    }
    heard
}

fn exercise_expression(text: &str) -> BTreeSet<String> {
    match parse_text(text) {
        Ok(expression) => {
            let shape: String = format!("{expression:?}")
                .chars()
                .filter(|c| c.is_ascii_uppercase())
                .take(24)
                .collect();
            BTreeSet::from([shape])
        }
        Err(fault) => {
            assert!(fault.start <= text.chars().count());
            BTreeSet::from([format!("{} {}", said(&fault.message), said(&fault.help))])
        }
    }
}

/// A text made from entries of the corpus.
fn mutated(corpus: &[String], pieces: &[&str], longest: usize, chance: &mut Chance) -> String {
    let mut text: Vec<char> = corpus[chance.below(corpus.len())].chars().collect();
    for _ in 0..=chance.below(5) {
        let at = chance.below(text.len() + 1);
        let until = (at + 1 + chance.below(20)).min(text.len());
        match chance.below(6) {
            0 | 1 => {
                let piece = pieces[chance.below(pieces.len())];
                text.splice(at..at, piece.chars());
            }
            2 => {
                text.drain(at..until);
            }
            3 => {
                let piece = pieces[chance.below(pieces.len())];
                text.splice(at..until, piece.chars());
            }
            4 => {
                let other: Vec<char> = corpus[chance.below(corpus.len())].chars().collect();
                let from = chance.below(other.len() + 1);
                let to = (from + chance.below(200)).min(other.len());
                text.splice(at..until, other[from..to].iter().copied());
            }
            _ => {
                let copy: Vec<char> = text[at..until].to_vec();
                let times = 1 + chance.below(8);
                text.splice(at..at, copy.repeat(times));
            }
        }
    }
    text.truncate(longest);
    text.into_iter().collect()
}

/// Exercises a text; one that breaks a promise is kept before the test fails.
fn hold(target: &Target, text: &str) -> BTreeSet<String> {
    match catch_unwind(AssertUnwindSafe(|| (target.exercise)(text))) {
        Ok(heard) => heard,
        Err(broken) => {
            let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("target/fuzz");
            let file = folder.join(format!("{}.txt", target.name));
            let kept = fs::create_dir_all(&folder).and_then(|()| fs::write(&file, text));
            eprintln!(
                "{}: this text broke a promise ({kept:?}): {text:?}",
                target.name
            );
            resume_unwind(broken)
        }
    }
}

/// Keeps a text; when the corpus is full, in the place of another.
fn keep(corpus: &mut Vec<String>, text: String, chance: &mut Chance) {
    const MOST_KEPT: usize = 20_000;
    if corpus.len() < MOST_KEPT {
        corpus.push(text);
    } else {
        let at = chance.below(corpus.len());
        corpus[at] = text;
    }
}

fn run(mut target: Target, budget: Duration) {
    let seed = std::env::var("ASSIZE_FUZZ_SEED")
        .ok()
        .and_then(|seed| seed.parse().ok());
    let mut chance = Chance(seed.unwrap_or(1));
    let mut heard = BTreeSet::new();
    for text in &target.corpus {
        heard.extend(hold(&target, text));
    }
    let (begun, mut tried) = (Instant::now(), 0u64);
    while begun.elapsed() < budget {
        let text = mutated(&target.corpus, target.pieces, target.longest, &mut chance);
        let new: Vec<String> = hold(&target, &text).difference(&heard).cloned().collect();
        if !new.is_empty() {
            heard.extend(new);
            keep(&mut target.corpus, text, &mut chance);
        }
        tried += 1;
    }
    println!(
        "{}: {tried} texts in {} s, {} kept, {} different things said, no promise broken",
        target.name,
        begun.elapsed().as_secs(),
        target.corpus.len(),
        heard.len()
    );
}

fn budget() -> Duration {
    let seconds = std::env::var("ASSIZE_FUZZ_SECONDS")
        .ok()
        .and_then(|text| text.parse().ok());
    Duration::from_secs(seconds.unwrap_or(60))
}

#[test]
fn the_corpus_keeps_every_promise() {
    for target in targets() {
        assert!(target.corpus.len() > 15, "{}", target.name);
        let heard: BTreeSet<String> = target
            .corpus
            .iter()
            .flat_map(|text| hold(&target, text))
            .collect();
        assert!(heard.len() > 15, "{}: {heard:?}", target.name);
    }
}

#[test]
#[ignore = "a long run: see the top of this file"]
fn plans() {
    let [plans, _] = targets();
    run(plans, budget());
}

#[test]
#[ignore = "a long run: see the top of this file"]
fn expressions() {
    let [_, expressions] = targets();
    run(expressions, budget());
}
