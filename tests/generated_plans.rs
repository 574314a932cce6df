//! Plans that are written correctly and may mean anything: contradictory, extreme, pointless. Each compiles or is refused
//! with located findings; none makes the program panic or contradict itself.

#![allow(clippy::unwrap_used)]

use assize::language::source::Source;
use assize::{Silent, compile};
use proptest::prelude::*;

/// A value of a probability, of a count or of a rate, as an author might write it.
fn value(family: &str) -> BoxedStrategy<String> {
    match family {
        "hypergeometric" => prop_oneof![(0..45i64).prop_map(|d| d.to_string()), Just("2.5".to_owned()), Just("-1".to_owned())].boxed(),
        "poisson" => prop_oneof![
            4 => (0..400i64).prop_map(|v| format!("{}.{:02}", v / 100, v % 100)),
            1 => proptest::sample::select(vec!["0", "1e-9", "inf", "25", "-1"]).prop_map(str::to_owned),
        ]
        .boxed(),
        _ => prop_oneof![
            4 => (0..1000i64).prop_map(|v| format!("{}.{} %", v / 10, v % 10)),
            1 => (0..500i64).prop_map(|v| format!("{v} ppm")),
            1 => proptest::sample::select(vec!["0", "1", "1/3", "1e-300", "2", "-0.1", "inf", "0.999999999999999999"])
                .prop_map(str::to_owned),
        ]
        .boxed(),
    }
}

fn parameter(family: &str) -> &'static str {
    match family {
        "hypergeometric" => "D",
        "poisson" => "lambda",
        _ => "p",
    }
}

fn part(family: &'static str) -> BoxedStrategy<String> {
    let name = parameter(family);
    let sign = || proptest::sample::select(vec!["<", "<=", ">", ">=", "="]);
    let rising = || proptest::sample::select(vec!["<", "<="]);
    prop_oneof![
        3 => (sign(), value(family)).prop_map(move |(sign, value)| format!("{name} {sign} {value}")),
        2 => (value(family), rising(), rising(), value(family))
            .prop_map(move |(a, r, s, b)| format!("{a} {r} {name} {s} {b}")),
    ]
    .boxed()
}

fn set(family: &'static str) -> BoxedStrategy<String> {
    prop_oneof![
        3 => part(family),
        1 => (part(family), part(family)).prop_map(|(a, b)| format!("{a} or {b}")),
        1 => (part(family), part(family)).prop_map(|(a, b)| format!("{a} and {b}")),
    ]
    .boxed()
}

/// The line with the sample size, and what else the family needs.
fn amount(family: &'static str) -> BoxedStrategy<String> {
    match family {
        "hypergeometric" => (1..50i64, 1..45i64)
            .prop_map(|(lot, size)| format!("  lot_size: {lot}\n  sample_size: {size}\n"))
            .boxed(),
        "poisson" => (1..200i64)
            .prop_map(|size| format!("  sample_size: {}.{}\n", size / 10, size % 10))
            .boxed(),
        "negative_binomial" => (1..6i64)
            .prop_map(|stop| format!("  stop_at: {{nonconforming: {stop}}}\n"))
            .boxed(),
        _ => (1..120i64)
            .prop_map(|size| format!("  sample_size: {size}\n"))
            .boxed(),
    }
}

fn extra(family: &'static str) -> BoxedStrategy<String> {
    let statistic = if family == "negative_binomial" {
        "n"
    } else {
        "x"
    };
    prop_oneof![
        6 => Just(String::new()),
        1 => proptest::sample::select(vec!["equal", "joint", "unbiased"]).prop_map(|tails| format!("  tails: {tails}\n")),
        2 => (0..12i64, 0..30i64, proptest::sample::select(vec!["<=", ">=", "=", "<"]))
            .prop_map(move |(a, b, sign)| format!("  critical_region: {statistic} {sign} {a} or {statistic} = {b}\n")),
        1 => (0..100i64, 0..100i64)
            .prop_map(|(a, b)| format!("  inspection: {{misses: {a} %, false_alarms: {{from: 0, to: {b} %}}}}\n")),
        1 => (0..4i64).prop_map(|times| format!("  retest: {{times: {times}}}\n")),
        1 => (1..500i64).prop_map(|lot| format!("  rectification: {{lot_size: {lot}}}\n")),
        1 => (1..40i64, 1..40i64, 0..5i64, 0..5i64).prop_map(move |(a, b, c, d)| format!(
            "  stages:\n    - {{size: {a}, retain_null: {statistic} >= {c}, reject_null: {statistic} <= {d}}}\n    - {{size: {b}}}\n"
        )),
    ]
    .boxed()
}

fn space(family: &'static str) -> BoxedStrategy<String> {
    let whole = match family {
        "hypergeometric" => "0 <= D <= 40",
        "poisson" => "lambda >= 0",
        _ => "0 <= p <= 1",
    };
    prop_oneof![6 => Just(whole.to_owned()), 1 => set(family)].boxed()
}

fn plan() -> impl Strategy<Value = String> {
    let families = ["binomial", "hypergeometric", "poisson", "negative_binomial"];
    proptest::sample::select(families.to_vec()).prop_flat_map(|family| {
        let requirement = (set(family), 1..100i64)
            .prop_map(|(set, power)| format!("  - {{where: \"{set}\", at_least: {power} %}}\n"));
        let level = prop_oneof![
            Just("0.05".to_owned()),
            (1..100i64).prop_map(|level| format!("{level} %")),
            Just("1e-12".to_owned()),
        ];
        let outcome = proptest::sample::select(vec!["null_rejected", "null_retained"]);
        (
            (space(family), set(family), level),
            (amount(family), extra(family)),
            proptest::collection::vec(requirement, 0..3),
            outcome,
        )
            .prop_map(move |((space, null, level), (amount, extra), requirements, outcome)| {
                let power = if requirements.is_empty() {
                    String::new()
                } else {
                    format!("power:\n{}", requirements.concat())
                };
                format!(
                    "assize: 1\nplan: {{id: T-1, revision: A, title: \"any\"}}\ncharacteristic: {{name: \"any\"}}\n\
                     test:\n  family: {family}\n  parameter_space: \"{space}\"\n  null_subset: \"{null}\"\n  \
                     alpha: {level}\n{amount}{extra}{power}decision: {{accept_when: {outcome}}}\n"
                )
            })
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(600))]

    #[test]
    #[ignore = "minutes, and some plans are slow: run with `cargo test --test generated_plans -- --ignored` after every change to solving"]
    fn any_plan_compiles_or_is_refused(text in plan()) {
        let begun = std::time::Instant::now();
        let compilation = compile(&text, &Silent);
        prop_assert!(begun.elapsed().as_secs() < 20, "{:?}\n{text}", begun.elapsed());
        prop_assert!(compilation.is_ok(), "{:?}\n{text}", compilation.err());
        let compilation = compilation.unwrap();
        let source = Source::new(&text);
        for found in &compilation.diagnostics {
            prop_assert!(!found.is_error() || found.help.is_some(), "{:?}", found);
            prop_assert_eq!(found.span, source.clip(found.span), "{:?}", found);
        }
        let errors = compilation.diagnostics.iter().any(|found| found.is_error());
        prop_assert_eq!(compilation.record.is_none(), errors, "{}", text);
    }
}
