//! Waived rules. A waiver needs a rule that exists and a reason that somebody can read; it silences the caution and is
//! filed with the record.

use super::registry::{RULES, WAITING};
use super::{Context, Facts};
use crate::language::diagnostic::Diagnostic;
use crate::language::plan::{Plan, WaivedRule};
use crate::language::suggestion::nearest;

/// A reason shorter than this says nothing.
const SHORTEST_REASON: usize = 10;

/// A rule that the plan waives.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Waived {
    /// Its number.
    pub rule: &'static str,
    /// The written reason.
    pub because: String,
    /// Whether the rule would have spoken.
    pub applies: bool,
}

/// The rules that a plan waives, in the plan's order.
pub fn waived(plan: &Plan, facts: Option<&Facts>) -> Vec<Waived> {
    let context = Context { plan, facts };
    plan.waivers
        .iter()
        .filter_map(|waiver| {
            let rule = RULES.iter().find(|rule| rule.number == waiver.rule.value)?;
            Some(Waived {
                rule: rule.number,
                because: waiver.because.clone(),
                applies: rule.caution(&context).is_some(),
            })
        })
        .collect()
}

pub(super) fn is_waived(plan: &Plan, number: &str) -> bool {
    plan.waivers
        .iter()
        .any(|waiver| waiver.rule.value == number)
}

/// Waivers of rules that do not exist, and waivers without a reason.
pub(super) fn errors(plan: &Plan) -> Vec<Diagnostic> {
    plan.waivers
        .iter()
        .flat_map(|waiver| [unknown(waiver), unreasoned(waiver)])
        .flatten()
        .collect()
}

fn unknown(waiver: &WaivedRule) -> Option<Diagnostic> {
    let name = waiver.rule.value.as_str();
    if RULES.iter().any(|rule| rule.number == name) {
        return None;
    }
    let help = if let Some(waiting) = WAITING.iter().find(|rule| rule.number == name) {
        format!("{name} waits for {}; remove the waiver", waiting.waits_for)
    } else if let Some(rule) = by_other_name(name) {
        format!("did you mean `{}` ({})?", rule.0, rule.1)
    } else {
        "rules have numbers from L01 to L33; docs/rules.md lists them".to_owned()
    };
    let shown: String = name.chars().take(40).collect();
    Some(
        Diagnostic::error(
            "unknown-rule",
            waiver.rule.span,
            format!("there is no rule `{shown}` to waive"),
        )
        .with_help(help),
    )
}

/// The number and code of the rule that a misspelt number or a code in words means.
fn by_other_name(name: &str) -> Option<(&'static str, &'static str)> {
    let by = |meant: &str| {
        RULES
            .iter()
            .find(|rule| rule.number == meant || rule.code == meant)
            .map(|rule| (rule.number, rule.code))
    };
    let numbers = RULES.iter().map(|rule| rule.number);
    let codes = RULES.iter().map(|rule| rule.code);
    nearest(name, codes)
        .or_else(|| nearest(name, numbers))
        .and_then(by)
}

fn unreasoned(waiver: &WaivedRule) -> Option<Diagnostic> {
    let letters = waiver
        .because
        .chars()
        .filter(|c| c.is_alphanumeric())
        .count();
    (letters < SHORTEST_REASON).then(|| {
        Diagnostic::error(
            "waiver-without-reason",
            waiver.rule.span,
            format!(
                "the waiver of {} gives no reason",
                waiver.rule.value.chars().take(40).collect::<String>()
            ),
        )
        .with_help(
            "say in a sentence why the rule does not apply to this plan; the report prints it",
        )
    })
}
