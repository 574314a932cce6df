//! Whatever the text, reading it gives located findings and never a panic.

#![allow(clippy::unwrap_used)]

use assize::language::expression::parse_text;
use assize::language::read::read;
use assize::language::render::render;
use assize::language::source::Source;
use proptest::prelude::*;

const GOOD: [&str; 2] = [
    include_str!("plans/good-design.yaml"),
    include_str!("plans/good-every-key.yaml"),
];

/// Pieces that mean something to YAML, to the plan language or to a terminal.
const PIECES: [&str; 44] = [
    "{", "}", "[", "]", ",", ": ", "- ", "? ", "#", " #", "&a ", "*a", "!!str ", "| ", ">", "'",
    "\"", "\\", "%", "@", "`", "\n", "\r\n", "\t", "  ", "---\n", "...\n", "<<: ", "~", "null",
    "NaN", "1e999", "-", "smallest", "p", "≥", "\u{202e}", "\u{feff}", "\u{0}", "滅", "e\u{301}",
    "(", "P(", "=>",
];

/// One change of a text, at places given as shares of its length.
#[derive(Clone, Debug)]
enum Change {
    Insert(f64, usize),
    Remove(f64, usize),
    Repeat(f64, usize, f64),
    SwapLines(f64, f64),
    Indent(f64, usize),
    Cut(f64),
}

fn change() -> impl Strategy<Value = Change> {
    let place = 0.0..1.0f64;
    prop_oneof![
        4 => (place.clone(), 0..PIECES.len()).prop_map(|(at, piece)| Change::Insert(at, piece)),
        3 => (place.clone(), 1..12usize).prop_map(|(at, length)| Change::Remove(at, length)),
        2 => (place.clone(), 1..80usize, place.clone()).prop_map(|(at, length, to)| Change::Repeat(at, length, to)),
        2 => (place.clone(), place.clone()).prop_map(|(a, b)| Change::SwapLines(a, b)),
        2 => (place.clone(), 0..6usize).prop_map(|(at, blanks)| Change::Indent(at, blanks)),
        1 => place.prop_map(Change::Cut),
    ]
}

fn apply(text: &str, change: &Change) -> String {
    let mut characters: Vec<char> = text.chars().collect();
    let place = |share: f64, length: usize| ((length as f64 * share) as usize).min(length);
    match *change {
        Change::Insert(at, piece) => {
            let at = place(at, characters.len());
            characters.splice(at..at, PIECES[piece].chars());
        }
        Change::Remove(at, length) => {
            let at = place(at, characters.len());
            characters.drain(at..(at + length).min(characters.len()));
        }
        Change::Repeat(at, length, to) => {
            let at = place(at, characters.len());
            let piece = characters[at..(at + length).min(characters.len())].to_vec();
            let to = place(to, characters.len());
            characters.splice(to..to, piece);
        }
        Change::SwapLines(a, b) => {
            let mut lines: Vec<&str> = text.split('\n').collect();
            let (a, b) = (place(a, lines.len() - 1), place(b, lines.len() - 1));
            lines.swap(a, b);
            return lines.join("\n");
        }
        Change::Indent(at, blanks) => {
            let mut lines: Vec<String> = text.split('\n').map(str::to_owned).collect();
            let at = place(at, lines.len() - 1);
            lines[at] = format!("{}{}", " ".repeat(blanks), lines[at].trim_start());
            return lines.join("\n");
        }
        Change::Cut(at) => characters.truncate(place(at, characters.len())),
    }
    characters.into_iter().collect()
}

/// What holds for every text.
fn holds(text: &str) {
    let reading = read(text);
    let source = Source::new(text);
    let mut before = (0, 0);
    for found in &reading.diagnostics {
        let (line, column, width) = (found.span.line, found.span.column, found.span.width);
        assert!((1..=source.line_count()).contains(&line), "{found:?}");
        let length = source.line(line).len();
        assert!((1..=length + 1).contains(&column), "{found:?}");
        assert!(width >= 1 && column + width <= length + 2, "{found:?}");
        assert!((line, column) >= before, "out of order: {found:?}");
        before = (line, column);
        assert!(
            !found.message.is_empty() && found.help.is_some(),
            "{found:?}"
        );
        let shown = render(found, "plan.yaml", &source);
        assert!(
            !shown.contains(|c: char| c.is_control() && c != '\n'),
            "{shown:?}"
        );
    }
    let errors = reading.diagnostics.iter().any(|found| found.is_error());
    assert_eq!(reading.plan.is_none(), errors, "{text}");
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(4096))]

    #[test]
    fn mangled_plans_give_located_findings(
        which in 0..GOOD.len(),
        changes in proptest::collection::vec(change(), 1..6),
    ) {
        let mut text = GOOD[which].to_owned();
        for change in &changes {
            text = apply(&text, change);
        }
        holds(&text);
    }

    #[test]
    fn any_text_gives_located_findings(text in "\\PC{0,60}(\n\\PC{0,40}){0,4}") {
        holds(&text);
    }

    #[test]
    fn any_pieces_make_no_expression_panic(pieces in proptest::collection::vec(piece(), 0..24)) {
        let text = pieces.concat();
        if let Err(fault) = parse_text(&text) {
            let length = text.chars().count();
            prop_assert!(fault.start <= length, "{fault:?} in {text:?}");
            prop_assert!(!fault.message.is_empty() && !fault.help.is_empty());
        }
    }

    #[test]
    fn mangled_expressions_give_located_faults(
        text in expression(3),
        changes in proptest::collection::vec(change(), 1..4),
    ) {
        let mut mangled = text;
        for change in &changes {
            mangled = apply(&mangled, change);
        }
        if let Err(fault) = parse_text(&mangled) {
            prop_assert!(fault.start <= mangled.chars().count(), "{fault:?} in {mangled:?}");
        }
        holds(&GOOD[0].replace("p >= 5 %", &mangled));
    }

    #[test]
    fn every_expression_of_the_grammar_is_read(text in expression(4)) {
        let read = parse_text(&text);
        prop_assert!(read.is_ok(), "{text}: {read:?}");
    }

    #[test]
    fn numbers_keep_every_digit(digits in "[1-9][0-9]{0,30}", places in 0..25usize) {
        let text = format!("p <= 0.{}{digits}", "0".repeat(places));
        let shown = format!("{:?}", parse_text(&text).unwrap());
        let kept = digits.trim_end_matches('0');
        prop_assert!(shown.contains(&format!("0.{}{kept}", "0".repeat(places))), "{text}: {shown}");
    }
}

fn piece() -> impl Strategy<Value = String> {
    prop_oneof![
        proptest::sample::select(vec![
            "p", "lambda", "X", "P", "P(", "median", "quantile", "inf", "and", "or", "not", "(",
            ")", "<", "<=", "≤", "=", "=>", "+", "-", "*", "/", ",", "%", "ppm", " ", "{", "∞",
        ])
        .prop_map(str::to_owned),
        "[0-9.eE+-]{1,6}",
        "\\PC{1,3}",
    ]
}

fn number() -> impl Strategy<Value = String> {
    prop_oneof![
        "[0-9]{1,4}",
        "[0-9]{0,2}\\.[0-9]{1,5}",
        "[1-9]e-?[1-5]?[0-9]",
        "[0-9]{1,3} ?%",
        "[0-9]{1,3} ?ppm",
        "[0-9]{1,3}/[1-9]{1,3}",
    ]
}

fn side() -> impl Strategy<Value = String> {
    prop_oneof![
        number(),
        "-[1-9]",
        Just("inf".to_owned()),
        Just("-inf".to_owned()),
        "[a-z]{2}[0-9]".prop_filter("a keyword", |name| name != "inf"),
        (number(), "[a-z]q[0-9]").prop_map(|(number, name)| format!("{number} * {name}")),
        ("[a-z]q[0-9]", "[a-z]w[0-9]").prop_map(|(a, b)| format!("{a} - {b} + 0.5")),
        ("[a-z]q[0-9]", "[a-z]w[0-9]").prop_map(|(a, b)| format!("{a} / {b}")),
        Just("P(X < 12.0 or X > 12.5)".to_owned()),
        Just("median(X)".to_owned()),
        Just("quantile(X, 0.9)".to_owned()),
    ]
}

fn chain() -> impl Strategy<Value = String> {
    let rising = proptest::sample::select(vec!["<", "<=", "≤", "="]);
    let falling = proptest::sample::select(vec![">", ">=", "≥", "="]);
    prop_oneof![
        (side(), rising.clone(), side()).prop_map(|(a, r, b)| format!("{a} {r} {b}")),
        (side(), rising.clone(), side(), rising, side())
            .prop_map(|(a, r, b, s, c)| format!("{a} {r} {b} {s} {c}")),
        (side(), falling.clone(), side(), falling, side())
            .prop_map(|(a, r, b, s, c)| format!("{a}{r}{b} {s} {c}")),
    ]
}

fn expression(depth: u32) -> impl Strategy<Value = String> {
    chain().prop_recursive(depth, 24, 3, |inner| {
        prop_oneof![
            (inner.clone(), inner.clone()).prop_map(|(a, b)| format!("{a} or {b}")),
            (inner.clone(), inner.clone()).prop_map(|(a, b)| format!("({a}) and {b}")),
            inner.prop_map(|inner| format!("( {inner} )")),
        ]
    })
}
