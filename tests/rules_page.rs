//! The page about the rules and the registry say the same.

#![allow(clippy::unwrap_used)]

use assize::language::diagnostic::CautionGrade;
use assize::rule::{RULES, WAITING};

const PAGE: &str = include_str!("../docs/rules.md");

#[test]
fn every_rule_has_its_section() {
    let mut sections = PAGE.split("\n### ").skip(1);
    for rule in RULES {
        let section = sections.next().unwrap();
        let (heading, body) = section.split_once('\n').unwrap();
        assert_eq!(heading, format!("{} · {}", rule.number, rule.title));
        let letter = CautionGrade::letter(rule.grade);
        let grade = format!("Grade {letter}, `{}`", rule.code);
        assert!(
            body.trim_start().starts_with(&grade),
            "{}: {grade}",
            rule.number
        );
    }
    assert_eq!(sections.count(), 0, "no section without a rule");
}

#[test]
fn every_waiting_rule_is_listed() {
    for rule in WAITING {
        let row = format!("| {} | {} | {} |", rule.number, rule.title, rule.waits_for);
        assert!(PAGE.contains(&row), "{row}");
    }
}
