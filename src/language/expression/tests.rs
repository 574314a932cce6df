//! Tests of set expressions.

use super::*;
use crate::kernel::exact::Exact;
use crate::language::set::{Relation, Side};

/// An expression written back in one fixed form, so that tests can be read.
fn plain(expression: &SetExpression) -> String {
    let joined = |parts: &[SetExpression], word: &str| {
        let parts: Vec<String> = parts.iter().map(plain).collect();
        format!("({})", parts.join(word))
    };
    match expression {
        SetExpression::And(parts) => joined(parts, " and "),
        SetExpression::Or(parts) => joined(parts, " or "),
        SetExpression::Chain { first, rest } => {
            let mut text = side(&first.value);
            for (relation, next) in rest {
                let sign = match relation {
                    Relation::Less => "<",
                    Relation::LessOrEqual => "<=",
                    Relation::Greater => ">",
                    Relation::GreaterOrEqual => ">=",
                    Relation::Equal => "=",
                };
                text.push_str(&format!(" {sign} {}", side(&next.value)));
            }
            text
        }
    }
}

fn side(side: &Side) -> String {
    match side {
        Side::Linear { constant, terms } => {
            let mut parts: Vec<String> = terms
                .iter()
                .map(|(coefficient, name)| format!("{coefficient}*{name}"))
                .collect();
            if terms.is_empty() || !constant.is_zero() {
                parts.push(constant.to_string());
            }
            parts.join("+")
        }
        Side::Infinity { negative } => if *negative { "-inf" } else { "inf" }.to_owned(),
        Side::Ratio(above, below) => format!("{above}/{below}"),
        Side::Probability(event) => format!("P[{}]", plain(event)),
        Side::Median => "median".to_owned(),
        Side::Quantile(order) => format!("quantile {order}"),
    }
}

fn read(text: &str) -> String {
    match parse_text(text) {
        Ok(expression) => plain(&expression),
        Err(fault) => format!("at {}: {} ({})", fault.start, fault.message, fault.help),
    }
}

#[test]
fn every_shape_of_the_grammar() {
    for (text, expected) in [
        ("0 <= p <= 1", "0 <= 1*p <= 1"),
        ("0≤p≤100%", "0 <= 1*p <= 1"),
        ("p >= 5 %", "1*p >= 0.05"),
        ("p>=1350ppm", "1*p >= 0.00135"),
        ("lambda < inf", "1*lambda < inf"),
        ("-inf < mu < inf", "-inf < 1*mu < inf"),
        ("p1 - p2 <= 0.1", "1*p1+-1*p2 <= 0.1"),
        ("2 * p - p + 0.1 >= 0.3", "1*p+0.1 >= 0.3"),
        ("p - p = 0", "0 = 0"),
        ("lambda1 / lambda2 <= 2", "lambda1/lambda2 <= 2"),
        ("D/N >= 1/20", "D/N >= 0.05"),
        ("p < 1 % or p > 5 %", "(1*p < 0.01 or 1*p > 0.05)"),
        (
            "p = 0 or 0.1 < p and p < 0.2",
            "(1*p = 0 or (0.1 < 1*p and 1*p < 0.2))",
        ),
        (
            "(p = 0 or 0.1 < p) and p < 0.2",
            "((1*p = 0 or 0.1 < 1*p) and 1*p < 0.2)",
        ),
        (
            "P(X < 12.0 or X > 12.5) >= 0.01",
            "P[(1*X < 12 or 1*X > 12.5)] >= 0.01",
        ),
        ("median(X) >= 3.1", "median >= 3.1"),
        ("quantile(X, 0.9) >= 90 %", "quantile 0.9 >= 0.9"),
        ("x <= 1e0", "1*x <= 1"),
        ("−1 < mu", "-1 < 1*mu"),
    ] {
        assert_eq!(read(text), expected, "{text}");
    }
}

#[test]
fn numbers_are_exact() {
    let Ok(SetExpression::Chain { rest, .. }) =
        parse_text("p <= 0.1000000000000000055511151231257827")
    else {
        panic!("this is a chain");
    };
    let Side::Linear { constant, .. } = &rest[0].1.value else {
        panic!("a number stands there");
    };
    assert_ne!(*constant, "0.1".parse::<Exact>().unwrap());
}

#[test]
fn places_are_those_of_the_sides() {
    let Ok(SetExpression::Chain { first, rest }) = parse_text("0.5 %  <= p1 - p2") else {
        panic!("this is a chain");
    };
    assert_eq!((first.span.column, first.span.width), (1, 5));
    assert_eq!((rest[0].1.span.column, rest[0].1.span.width), (11, 7));
}

#[test]
fn slips_are_named_where_they_stand() {
    for (text, start, help) in [
        ("p => 5 %", 2, "write `>=`"),
        ("p =< 5 %", 2, "write `<=`"),
        ("p == 5 %", 2, "write `=`"),
        ("p != 5 %", 2, "write two comparisons"),
        ("p ≠ 5 %", 2, "write two comparisons"),
        ("p < = 5 %", 2, "without a space"),
        ("p < 1 % && p > 0", 8, "write `and`"),
        ("p < 1 % || p > 2 %", 8, "write `or`"),
        ("p < 1 % OR p > 2 %", 8, "write `or`"),
        ("p <= 0,05", 6, "decimal mark as a point"),
        ("p <= 1,000", 6, "decimal mark as a point"),
        ("2p <= 1", 1, "write a product with `*`"),
        ("p * 2 <= 1", 2, "write the number first"),
        ("p <= 5 ppb", 7, "the only units"),
        ("λ <= 5", 0, "write `lambda`"),
        ("p <= ∞", 5, "write `inf`"),
        ("p in [0, 1]", 5, "chain"),
        ("p in (0, 1)", 2, "write comparisons"),
        ("theta in {good, bad}", 9, "single values"),
        ("p", 1, "compare with"),
        ("p <=", 4, "finish the comparison"),
        ("<= 5", 0, "write e.g."),
        ("", 0, "finish the comparison"),
        ("0 <= p >= 1", 7, "one way"),
        ("(p <= 1", 0, "close it"),
        ("p <= 1)", 6, "remove it"),
        ("(p1 - p2) <= 1", 8, "write sides without"),
        ("(p) <= 1", 2, "write sides without"),
        ("p <= (1)", 5, "without parentheses"),
        ("p(X > 3) <= 1", 0, "capital P"),
        ("mean(X) <= 1", 0, "the functions are"),
        ("median(Y) <= 1", 7, "write `median(X"),
        ("quantile(X) <= 1", 10, "quantile(X, 0.9)"),
        ("quantile(X, 1) <= 1", 12, "quantile(X, 0.9)"),
        ("p <= 1/0", 7, "e.g. `1/20`"),
        ("p/2 <= 1", 2, "0.5 * p"),
        ("not p <= 1", 0, "opposite"),
        ("p <= 1 p", 7, "join comparisons"),
        ("p <= 1, p >= 0", 6, "`and` or `or`"),
        ("p <= 1..2", 5, "decimal number"),
        ("p <= $5", 5, "comparisons"),
        ("p <= 1e999", 5, "at most 400"),
    ] {
        let fault = parse_text(text).expect_err(text);
        assert_eq!(fault.start, start, "{text}: {}", fault.message);
        assert!(fault.help.contains(help), "{text}: {}", fault.help);
    }
}

#[test]
fn nesting_is_bounded() {
    let nested = |depth: usize| format!("{}p <= 1{}", "(".repeat(depth), ")".repeat(depth));
    assert!(parse_text(&nested(MOST_LEVELS)).is_ok());
    assert!(parse_text(&nested(MOST_LEVELS + 1)).is_err());
    assert!(parse_text(&vec!["(p <= 1)"; 100].join(" or ")).is_ok());
    assert!(parse_text(&"P(".repeat(100_000)).is_err());
    assert!(parse_text(&"p <= 1 or ".repeat(100_000)).is_err());
    assert!(parse_text(&vec!["p <= 1"; 1001].join(" or ")).is_err());
}
