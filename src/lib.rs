//! **assize** compiles a declarative test plan into a sealed audit report.
//!
//! The whole journey of a plan is on this page: text → plan → problem → solution → record. Each step is a pure function;
//! files, clocks and terminals live in [`command`].

pub mod command;
pub mod family;
pub mod kernel;
pub mod language;
pub mod problem;
pub mod record;
pub mod report;
pub mod rule;
pub mod solving;
pub mod space;

use language::diagnostic::{CautionGrade, Diagnostic, Span};
use language::plan::Plan;
use problem::{Problem, pose};
use record::Record;
use rule::Facts;
use solving::{Obstacle, Solution, solve};

pub use solving::{Progress, Silent};

/// Everything one plan compiles to.
#[derive(Clone, Debug)]
pub struct Compilation {
    /// The sealed record; absent exactly if some diagnostic is an error.
    pub record: Option<Record>,
    /// Errors and cautions, in the order of the text.
    pub diagnostics: Vec<Diagnostic>,
}

/// A contradiction inside the program: nothing was filed, and the figures must not be used.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct InternalError(pub String);

impl std::fmt::Display for InternalError {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(out, "internal error: {}", self.0)
    }
}

impl std::error::Error for InternalError {}

/// Compiles the text of a plan. Bad plans give diagnostics; an error means that the program contradicts itself.
pub fn compile(text: &str, progress: &dyn Progress) -> Result<Compilation, InternalError> {
    let reading = language::read::read(text);
    let mut diagnostics = reading.diagnostics;
    let record = match reading.plan {
        Some(plan) => record_of(&plan, &mut diagnostics, progress)?,
        None => {
            // One run tells all: sets that were read are held against each other, whatever else is wrong.
            if let Some(Err(found)) = reading.doubtful.filter(has_its_lot).map(|plan| pose(&plan)) {
                diagnostics.extend(found);
                diagnostics.dedup();
            }
            None
        }
    };
    diagnostics.sort_by_key(|found| found.span);
    Ok(Compilation {
        record,
        diagnostics,
    })
}

/// Whether the lot that the family's parameter refers to is known.
fn has_its_lot(plan: &Plan) -> bool {
    let finite = family::registration(&plan.test.family.value).is_some_and(|f| f.finite_lot);
    !finite || plan.test.lot_size.is_some()
}

/// All findings about a plan, those that need solving included.
pub fn check(text: &str, progress: &dyn Progress) -> Result<Vec<Diagnostic>, InternalError> {
    compile(text, progress).map(|compilation| compilation.diagnostics)
}

fn record_of(
    plan: &Plan,
    diagnostics: &mut Vec<Diagnostic>,
    progress: &dyn Progress,
) -> Result<Option<Record>, InternalError> {
    let solved = solved(plan, diagnostics, progress)?;
    let facts = solved
        .as_ref()
        .map(|(problem, solution)| Facts::of(plan, problem, solution));
    diagnostics.extend(rule::apply(plan, facts.as_ref()));
    diagnostics.sort_by_key(|found| found.span);
    let Some((problem, solution)) = solved else {
        return Ok(None);
    };
    if diagnostics.iter().any(Diagnostic::is_error) {
        return Ok(None);
    }
    let mut record = record::build(plan, &problem, &solution);
    record.cautions = record::cautions(diagnostics);
    record.waivers = record::waivers(&rule::waived(plan, facts.as_ref()));
    record::seal(&mut record)
        .map_err(|fault| InternalError(format!("the record cannot be sealed: {fault}")))?;
    Ok(Some(record))
}

/// The problem and its solution; without them, the diagnostics say why.
fn solved(
    plan: &Plan,
    diagnostics: &mut Vec<Diagnostic>,
    progress: &dyn Progress,
) -> Result<Option<(Problem, Solution)>, InternalError> {
    let problem = match pose(plan) {
        Ok(problem) => problem,
        Err(found) => {
            diagnostics.extend(found);
            return Ok(None);
        }
    };
    if problem.points_left_out > 0 {
        diagnostics.push(points_left_out(plan, &problem));
    }
    let solution = match solve(&problem, progress) {
        Ok(solution) => solution,
        Err(obstacle) => {
            diagnostics.push(in_words(&obstacle, &problem));
            return Ok(None);
        }
    };
    if let Some(disagreement) = &solution.double_entry.disagreement {
        return Err(InternalError(format!(
            "two computations of a probability disagree: {disagreement}"
        )));
    }
    Ok(Some((problem, solution)))
}

fn points_left_out(plan: &Plan, problem: &Problem) -> Diagnostic {
    let span = plan
        .blocks
        .iter()
        .find(|(name, _)| name == "report")
        .map_or(plan.start, |(_, span)| *span);
    Diagnostic::caution(
        CautionGrade::Information,
        "points-left-out",
        span,
        format!(
            "{} of the points asked for in `power_at` are no values that `{}` can take here; they are left out",
            problem.points_left_out,
            problem.family.parameter()
        ),
    )
    .with_help("a finite lot has whole numbers of nonconforming units only; other points must lie in the parameter space")
}

/// What stands in the way, as a diagnostic.
fn in_words(obstacle: &Obstacle, problem: &Problem) -> Diagnostic {
    let at =
        |code: &'static str, span: Span, message: String| Diagnostic::error(code, span, message);
    match obstacle {
        Obstacle::LevelUnreachable {
            rule,
            smallest,
            halved,
            needed,
        } => {
            let held = if *halved {
                format!("each tail to half of {}", problem.alpha)
            } else {
                format!("the size to {}", problem.alpha)
            };
            let help = match needed {
                Some(needed) => format!("the level can be kept from {needed} on"),
                None => "raise alpha, enlarge the sample, or shrink the null subset".to_owned(),
            };
            at(
                "level-unreachable",
                problem.amount_span,
                format!(
                    "no region that rejects anything holds {held}: the nearest, {rule}, has size {smallest:.6}"
                ),
            )
            .with_help(if *halved {
                format!("{help}; `tails: joint` shares the level freely")
            } else {
                help
            })
        }
        Obstacle::ImpossibleRegion => at(
            "empty-critical-region",
            problem.region_span,
            "no count of this critical region can occur at this sample size".to_owned(),
        )
        .with_help("state counts from zero to the sample size"),
        Obstacle::SearchExhausted { limit, failing } => at(
            "no-sample-size",
            problem.amount_span,
            format!("no amount up to {limit} will do; {failing}"),
        )
        .with_help(
            "widen the gap between the null subset and the requirements, or ask for less power",
        ),
        Obstacle::NotProved { question } => at(
            "not-proved",
            problem.region_span,
            format!("a question is left open: {question}"),
        )
        .with_help(
            "change the level or the requirement in its last digit, or use a smaller sample",
        ),
        Obstacle::NoLargestRegion => at(
            "no-largest-region",
            problem.region_span,
            "every bounded region fits this null, and none is largest".to_owned(),
        )
        .with_help("state the region with `critical_region`"),
        Obstacle::SampleBeyondLot { amount, lot } => at(
            "sample-larger-than-lot",
            problem.amount_span,
            format!("inspection takes up to {amount} units, and a lot has {lot}"),
        )
        .with_help("sort larger lots, or inspect fewer units"),
        Obstacle::NoRectification => at(
            "not-yet-derived",
            problem.region_span,
            "outgoing quality is derived only where lots are released at small counts".to_owned(),
        )
        .with_help(
            "leave `rectification` out, or state the null so that small counts release the lot",
        ),
        Obstacle::Stopped => at(
            "stopped",
            problem.amount_span,
            "solving was stopped before it was done".to_owned(),
        ),
    }
}
