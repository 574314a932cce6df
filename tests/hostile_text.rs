//! Texts that no author writes: each gives a located error, quickly.

#![allow(clippy::unwrap_used)]

use std::time::{Duration, Instant};

use assize::language::locate::MOST_FINDINGS;
use assize::language::read::read;

/// A sound plan.
const SOUND: &str = include_str!("plans/good-design.yaml");

/// Far more than any of these texts needs, even unoptimised on a busy machine; a quadratic reader takes minutes.
const PATIENCE: Duration = Duration::from_secs(20);

/// The first error of a text: code, line, column.
fn first_error(text: &str) -> (&'static str, usize, usize) {
    let begun = Instant::now();
    let reading = read(text);
    assert!(
        begun.elapsed() < PATIENCE,
        "this took {:?}",
        begun.elapsed()
    );
    assert!(reading.plan.is_none());
    assert!(reading.diagnostics.len() <= MOST_FINDINGS + 1);
    let error = reading
        .diagnostics
        .iter()
        .find(|found| found.is_error())
        .unwrap();
    (error.code, error.span.line, error.span.column)
}

/// The sound plan with one value replaced.
fn with(old: &str, new: &str) -> String {
    assert!(SOUND.contains(old), "{old}");
    SOUND.replacen(old, new, 1)
}

#[test]
fn nesting_ends_at_64_levels() {
    let levels = |depth: usize| format!("references: {}a{}", "[".repeat(depth), "]".repeat(depth));
    assert_ne!(first_error(&levels(63)).0, "too-deep");
    assert_eq!(first_error(&levels(64)), ("too-deep", 1, 76));
    for text in [
        format!("{}{}", "[".repeat(5000), "]".repeat(5000)),
        "{a: ".repeat(5000) + &"}".repeat(5000),
        "- ".repeat(5000),
        "? ".repeat(5000),
        (0..700)
            .map(|level| format!("{}a:\n", "  ".repeat(level)))
            .collect(),
    ] {
        assert_eq!(first_error(&text).0, "too-deep", "{}", &text[..40]);
    }
}

#[test]
fn the_file_ends_at_one_mebibyte() {
    let line = |length: usize| with("open seal", &"x".repeat(length));
    assert!(read(&line(500_000)).plan.is_some());
    assert_eq!(first_error(&line(2 << 20)), ("plan-too-large", 1, 1));
}

#[test]
fn large_texts_take_no_longer_than_their_length() {
    for text in [
        format!("references: [{}]", "1,".repeat(500_000)),
        format!(
            "a: {{{}}}",
            (0..80_000)
                .map(|n| format!("k{n}: 1, "))
                .collect::<String>()
        ),
        (0..90_000).map(|n| format!("k{n}: 1\n")).collect(),
        "k: 1\n".repeat(200_000),
        ": ".repeat(500_000),
        format!("a: {}", "x ".repeat(500_000)),
        format!("a: \"{}\"", "\\n".repeat(500_000)),
        format!("a: |\n{}", "  x\n".repeat(250_000)),
        "\u{202e}".repeat(300_000),
        "&a ".repeat(300_000),
        "!".repeat(1 << 20),
        "\"".repeat(1 << 20),
        "#".repeat(1 << 20),
    ] {
        let _ = first_error(&text);
    }
    let expression = format!("p >= 5 %{}", " or p >= 6 %".repeat(80_000));
    assert_eq!(first_error(&with("p >= 5 %", &expression)).0, "set-syntax");
    let digits = "9".repeat(900_000);
    assert_eq!(
        first_error(&with("p >= 5 %", &format!("p >= 0.{digits}"))).0,
        "set-syntax"
    );
    assert_eq!(
        first_error(&with("alpha: 0.05", &format!("alpha: 0.{digits}"))).0,
        "number-too-long"
    );
}

#[test]
fn characters_that_no_plan_may_hold() {
    assert_eq!(
        first_error(&format!("\u{feff}{SOUND}")),
        ("forbidden-character", 1, 1)
    );
    for character in [
        '\0', '\u{7}', '\u{1b}', '\r', '\u{7f}', '\u{85}', '\u{2028}', '\u{2029}', '\u{feff}',
    ] {
        let text = with("open seal", &format!("open{character}seal"));
        assert_eq!(
            first_error(&text),
            ("forbidden-character", 12, 13),
            "{character:?}"
        );
    }
    let text = with("open seal", "open \u{202e}seal");
    let reading = read(&text);
    assert!(reading.plan.is_some());
    assert!(
        reading
            .diagnostics
            .iter()
            .any(|found| found.code == "reordering-character")
    );
}

#[test]
fn sample_sizes_that_are_none() {
    for (text, code) in [
        ("100000000000000000000", "out-of-range"),
        ("1e20", "out-of-range"),
        ("1000000001", "out-of-range"),
        ("0", "out-of-range"),
        ("-1", "out-of-range"),
        ("12.5", "not-whole"),
        ("NaN", "not-a-number"),
        (".nan", "not-a-number"),
        ("inf", "not-a-number"),
        (".inf", "not-a-number"),
        ("-.inf", "not-a-number"),
        ("0x5d", "not-a-number"),
        ("0o135", "not-a-number"),
        ("9_3", "not-a-number"),
        ("ninety", "not-a-number"),
        ("smalest", "unknown-word"),
        ("Smallest", "unknown-word"),
        ("1e-401", "number-too-long"),
    ] {
        let text = with("sample_size: 93", &format!("sample_size: {text}"));
        assert_eq!(first_error(&text), (code, 21, 16), "{text}");
    }
    for text in ["93.0", "9.3e1", "0093", "\"93\"", "1e9"] {
        let text = with("sample_size: 93", &format!("sample_size: {text}"));
        assert!(read(&text).plan.is_some(), "{text}");
    }
}

#[test]
fn identifiers_that_leave_the_folder() {
    for text in [
        "a/b",
        "..",
        "../a",
        "a\\b",
        ".a",
        "-a",
        "a.",
        "\"a b\"",
        "CON",
        "nul.txt",
        "com1",
        "é",
        "\"a\\nb\"",
        "\"a\\0\"",
        "a:b",
        "a*",
        "\"~\\u202e\"",
    ] {
        let text = with("id: TP-0142", &format!("id: {text}"));
        assert_eq!(first_error(&text).0, "bad-identifier", "{text}");
    }
    let long = with("id: TP-0142", &format!("id: {}", "a".repeat(65)));
    assert_eq!(first_error(&long), ("bad-identifier", 3, 7));
    for text in [
        "a", "0142", "no", "NO", "1.0", "a_b-c.d", "console", "com10", "~a",
    ] {
        let text_of_plan = with("id: TP-0142", &format!("id: {text}"));
        assert_eq!(read(&text_of_plan).plan.is_some(), text != "~a", "{text}");
    }
}

#[test]
fn source_text_is_kept_as_it_is_written() {
    let text = with("revision: B", "revision: 010");
    assert_eq!(read(&text).plan.unwrap().revision.value, "010");
    let text = with("title: Seal integrity of pouch lots", "title: NO");
    assert_eq!(read(&text).plan.unwrap().title.value, "NO");
    let text = with("alpha: 0.05", "alpha: 0.0500000000000000000000000001");
    let alpha = read(&text).plan.unwrap().test.alpha.value;
    assert_eq!(alpha.to_string(), "0.0500000000000000000000000001");
}

#[test]
fn markup_is_text_like_any_other() {
    let script = "<script>alert('x')</script> {{ 7 * 7 }} {% raw %} ![](javascript:x) `|` | --- |";
    let text = with("open seal", &format!("\"{script}\""));
    assert_eq!(read(&text).plan.unwrap().characteristic.name.value, script);
}

#[test]
fn expressions_in_quotes_and_blocks_are_located() {
    for (written, column) in [
        ("'p => 5 %'", 19),
        ("\"p => 5 %\"", 19),
        ("p => 5 %", 18),
        ("\"\\x70 => 5 %\"", 16),
    ] {
        let text = with("p >= 5 %", written);
        assert_eq!(first_error(&text), ("set-syntax", 19, column), "{written}");
    }
    let text = with("p >= 5 %", ">-\n    p => 5 %");
    assert_eq!(first_error(&text), ("set-syntax", 20, 7));
    let text = with("p >= 5 %", "|\n    p >= 5 %\n    or p = > 1");
    assert_eq!(first_error(&text), ("set-syntax", 21, 12));
    let text = with("p >= 5 %", "p >= 5 %\n    or p => 1");
    assert_eq!(first_error(&text), ("set-syntax", 19, 16));
}

#[test]
fn line_ends_of_other_systems_change_nothing() {
    let reading = read(&SOUND.replace('\n', "\r\n"));
    let plan = reading.plan.unwrap();
    assert_eq!(
        plan.declared["plan"]["purpose"],
        "Why this test exists and what depends on it."
    );
    assert_eq!(plan.test.alpha.span.line, 20);
}
