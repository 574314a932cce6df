//! Rules on plans: what an auditor, a statistician or the shop floor would hold against a plan that is otherwise well
//! formed. A rule never changes a figure; it speaks as a caution at the block that should change.
//!
//! A rule is one small function and one line of [`RULES`]. Those that need figures of the solution are silent without.

mod claim;
mod conduct;
mod facts;
mod figure;
mod phrases;
mod record_gaps;
mod registry;
mod waiver;

use crate::language::diagnostic::{CautionGrade, Diagnostic, Span};
use crate::language::plan::Plan;

pub use facts::{Facts, RequirementFact};
pub use registry::{RULES, WAITING, WaitingRule};
pub use waiver::{Waived, waived};

/// What a rule looks at.
#[derive(Clone, Copy, Debug)]
pub struct Context<'a> {
    /// The plan.
    pub plan: &'a Plan,
    /// Figures of its solution, where there is one.
    pub facts: Option<&'a Facts>,
}

/// A rule on plans.
#[derive(Clone, Copy, Debug)]
pub struct Rule {
    /// Its number, e.g. `L13`; plans name it so when they waive it.
    pub number: &'static str,
    /// How grave it is.
    pub grade: CautionGrade,
    /// Code in words, e.g. `level-left-unused`.
    pub code: &'static str,
    /// What it asks, in a few words.
    pub title: &'static str,
    /// Looks for a breach.
    find: fn(&Context<'_>) -> Option<Finding>,
}

/// A breach of a rule.
#[derive(Clone, Debug, PartialEq, Eq)]
struct Finding {
    /// The block that should change.
    span: Span,
    /// What is wrong, with the plan's own figures.
    message: String,
    /// What to do.
    help: String,
    /// A milder grade than the rule's, for its harmless forms.
    grade: Option<CautionGrade>,
}

impl Finding {
    fn new(span: Span, message: impl Into<String>, help: impl Into<String>) -> Self {
        Self {
            span,
            message: message.into(),
            help: help.into(),
            grade: None,
        }
    }

    fn graded(mut self, grade: CautionGrade) -> Self {
        self.grade = Some(grade);
        self
    }
}

impl Rule {
    /// The caution, if the plan breaks the rule.
    fn caution(&self, context: &Context<'_>) -> Option<Diagnostic> {
        let found = (self.find)(context)?;
        let grade = found.grade.unwrap_or(self.grade);
        Some(
            Diagnostic::caution(grade, self.code, found.span, found.message)
                .with_help(found.help)
                .with_rule(self.number),
        )
    }
}

/// Applies every rule: cautions for the rules that are broken and not waived, errors for waivers that are no waivers.
/// The order is that of the rules.
pub fn apply(plan: &Plan, facts: Option<&Facts>) -> Vec<Diagnostic> {
    let context = Context { plan, facts };
    let mut found = waiver::errors(plan);
    found.extend(
        RULES
            .iter()
            .filter(|rule| !waiver::is_waived(plan, rule.number))
            .filter_map(|rule| rule.caution(&context)),
    );
    found
}

#[cfg(test)]
mod tests;
