//! Cautions and waivers as they are filed.

use crate::language::diagnostic::{Diagnostic, Grade};
use crate::rule::Waived;

use super::content::{Caution, Waiver};

/// The cautions among the findings about a plan, in their order, what is wrong and what to do as two sentences.
pub fn cautions(diagnostics: &[Diagnostic]) -> Vec<Caution> {
    diagnostics
        .iter()
        .filter_map(|found| {
            let Grade::Caution(grade) = found.grade else {
                return None;
            };
            let mut message = sentence(&found.message);
            if let Some(help) = &found.help {
                message.push(' ');
                message.push_str(&sentence(help));
            }
            Some(Caution {
                rule: found.rule.map(str::to_owned),
                grade: grade.letter().to_owned(),
                code: found.code.to_owned(),
                message,
            })
        })
        .collect()
}

/// Begins with a capital and ends with a stop.
fn sentence(text: &str) -> String {
    let mut letters = text.chars();
    let first = letters.next().map(char::to_uppercase);
    let mut sentence: String = first.into_iter().flatten().chain(letters).collect();
    if !sentence.ends_with(['.', '?', '!']) {
        sentence.push('.');
    }
    sentence
}

/// The waived rules with their reasons.
pub fn waivers(waived: &[Waived]) -> Vec<Waiver> {
    waived
        .iter()
        .map(|waived| Waiver {
            rule: waived.rule.to_owned(),
            because: waived.because.clone(),
            applies: waived.applies,
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::diagnostic::{CautionGrade, Span};

    #[test]
    fn a_caution_reads_as_two_sentences_and_errors_are_left_out() {
        let span = Span {
            line: 1,
            column: 1,
            width: 1,
        };
        let found = [
            Diagnostic::caution(CautionGrade::Grave, "some-code", span, "étude is missing")
                .with_help("add it")
                .with_rule("L01"),
            Diagnostic::error("other-code", span, "no"),
        ];
        let filed = cautions(&found);
        assert_eq!(filed.len(), 1);
        assert_eq!(filed[0].message, "Étude is missing. Add it.");
        assert_eq!(filed[0].grade, "E");
        assert_eq!(filed[0].rule.as_deref(), Some("L01"));
    }
}
