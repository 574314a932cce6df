//! The figures of a solution that rules speak of.

use crate::family::AmountKind;
use crate::kernel::exact::Exact;
use crate::kernel::region::Region;
use crate::language::plan::{AcceptWhen, Plan};
use crate::problem::{AmountRequest, Observation, Problem, Shape};
use crate::solving::{Form, Silent, Solution, form_of, solve};
use crate::space::Value;

use super::conduct::judged_by_people;

/// Figures of a solution, in the units of the plan.
#[derive(Clone, Debug, PartialEq)]
pub struct Facts {
    /// The amount of inspection: units, opportunity, or nonconforming units at which inspection stops.
    pub amount: Exact,
    /// Whether units are counted, so that one more is the next amount.
    pub counted_in_units: bool,
    /// Units in the lot, of a finite lot or of lots that are sorted.
    pub lot_size: Option<u64>,
    /// Whether the law is that of a finite lot.
    pub finite_lot: bool,
    /// The size, rounded up to a double.
    pub size: f64,
    /// Whether the size is at most the level.
    pub within_level: bool,
    /// The critical region in words.
    pub reject_when: String,
    /// Whether the null lies on both sides of the alternative.
    pub equivalence: bool,
    /// Whether the null holds the smallest parameter value.
    pub null_holds_best: bool,
    /// Whether the null holds the largest parameter value.
    pub null_holds_worst: bool,
    /// Whether the lot is released only when nothing at all is found.
    pub releases_only_at_zero: bool,
    /// How each requirement fares.
    pub requirements: Vec<RequirementFact>,
    /// The next larger amount, if it would no longer do.
    pub next_fails: Option<Exact>,
    /// From here on every larger amount does, where a search went beyond the amount.
    pub every_from: Option<Exact>,
    /// A smaller amount that meets what the given one does not.
    pub smaller_that_does: Option<Exact>,
    /// The first larger amount at which a given region keeps the level.
    pub region_keeps_level_from: Option<Exact>,
    /// The size if inspection missed one nonconforming unit in five, where people judge and no errors are declared.
    pub size_with_misses: Option<f64>,
}

/// How a requirement fares.
#[derive(Clone, Debug, PartialEq)]
pub struct RequirementFact {
    /// Its set, in words.
    pub where_words: String,
    /// The power required.
    pub at_least: f64,
    /// The power attained, rounded down to a double.
    pub attained: f64,
    /// Whether it is met.
    pub met: bool,
}

impl Facts {
    /// The facts of a solved plan. Solves neighbouring problems where a rule needs their figures.
    pub fn of(plan: &Plan, problem: &Problem, solution: &Solution) -> Self {
        let kind = problem.family.registration().amount_kind;
        let holds =
            |end: Option<&Value>| end.is_some_and(|end| problem.null.closure().contains(end));
        Self {
            amount: solution.amount.clone(),
            counted_in_units: kind == AmountKind::Units,
            lot_size: lot_size(problem),
            finite_lot: problem.family.registration().finite_lot,
            size: solution.size.value.upper(),
            within_level: solution.within_level,
            reject_when: solution
                .region
                .in_words(problem.family.registration().statistic, solution.outcomes),
            equivalence: matches!(problem.shape, Shape::Around { .. }),
            null_holds_best: holds(problem.space.infimum()),
            null_holds_worst: holds(problem.space.supremum()),
            releases_only_at_zero: releases_only_at_zero(problem, solution),
            requirements: requirements(problem, solution),
            next_fails: next_fails(problem, solution),
            every_from: solution
                .search
                .as_ref()
                .and_then(|search| search.every_from.clone())
                .filter(|from| *from > solution.amount),
            smaller_that_does: smaller_that_does(problem, solution),
            region_keeps_level_from: region_keeps_level_from(problem, solution),
            size_with_misses: judged_by_people(plan)
                .then(|| size_with_misses(problem, solution))
                .flatten(),
        }
    }

    /// The amount as it is written: decimals as decimals.
    pub fn amount_in_words(&self) -> String {
        self.amount.to_string()
    }
}

fn lot_size(problem: &Problem) -> Option<u64> {
    if problem.family.registration().finite_lot {
        problem.family.most().to_u64()
    } else {
        problem.rectified_lot
    }
}

fn releases_only_at_zero(problem: &Problem, solution: &Solution) -> bool {
    if problem.family.registration().statistic != "x" || !solution.stages.is_empty() {
        return false;
    }
    let (low, high) = solution.outcomes;
    let released = match problem.accept_when {
        AcceptWhen::NullRejected => solution.region.clone(),
        AcceptWhen::NullRetained => solution.region.complement().within(low, high),
    };
    released == Region::between(0, 0)
}

fn requirements(problem: &Problem, solution: &Solution) -> Vec<RequirementFact> {
    problem
        .requirements
        .iter()
        .zip(&solution.requirements)
        .map(|(wanted, outcome)| RequirementFact {
            where_words: wanted.set.in_words(problem.family.parameter()),
            at_least: wanted.at_least.to_f64(),
            attained: outcome.attained.value.lower(),
            met: outcome.met,
        })
        .collect()
}

/// The same problem with its power looked at nowhere but at one end of the null: neighbours need no table.
fn neighbour(problem: &Problem) -> Problem {
    let mut neighbour = problem.clone();
    neighbour.points = [problem.null.infimum(), problem.null.supremum()]
        .into_iter()
        .flatten()
        .filter_map(Value::finite)
        .take(1)
        .cloned()
        .collect();
    neighbour.rectified_lot = None;
    neighbour
}

/// A neighbour's solution; a figure that its second computation contradicts is not spoken of.
fn twice_solved(neighbour: &Problem) -> Option<Solution> {
    solve(neighbour, &Silent)
        .ok()
        .filter(|solved| solved.double_entry.disagreement.is_none())
}

fn step(problem: &Problem) -> Exact {
    match &problem.amount {
        AmountRequest::Smallest { step } => step.clone(),
        AmountRequest::Given(_) => Exact::one(),
    }
}

/// The next amount, if a plan that does now would not do there. A region that is given stays the same, and its size is
/// then the only question.
fn next_fails(problem: &Problem, solution: &Solution) -> Option<Exact> {
    let does = solution.within_level && solution.requirements.iter().all(|each| each.met);
    if !does || problem.requirements.is_empty() || !problem.stages.is_empty() {
        return None;
    }
    let next = &solution.amount + &step(problem);
    if next > problem.family.most() {
        return None;
    }
    let mut larger = neighbour(problem);
    larger.amount = AmountRequest::Given(next.clone());
    let solved = twice_solved(&larger)?;
    let fails = !solved.within_level || solved.requirements.iter().any(|each| !each.met);
    fails.then_some(next)
}

fn smaller_that_does(problem: &Problem, solution: &Solution) -> Option<Exact> {
    let unmet = solution.requirements.iter().any(|each| !each.met);
    // Other shapes are searched amount by amount: too long for a remark.
    let one_sided = matches!(problem.shape, Shape::Below { .. } | Shape::Above { .. });
    let derived = one_sided && problem.given_region.is_none() && problem.stages.is_empty();
    if !unmet || !derived || !matches!(problem.amount, AmountRequest::Given(_)) {
        return None;
    }
    let first = first_that_does(problem)?;
    (first < solution.amount).then_some(first)
}

fn region_keeps_level_from(problem: &Problem, solution: &Solution) -> Option<Exact> {
    let region = problem.given_region.as_ref()?;
    let counts_units = problem.family.registration().amount_kind == AmountKind::Units;
    // More units only make a region of large counts likelier, and other regions are searched amount by amount.
    let falls = form_of(region, (0, None)) == Form::LowerTail;
    if solution.within_level || !falls || !counts_units {
        return None;
    }
    let mut level_only = neighbour(problem);
    level_only.requirements.clear();
    let first = first_that_does(&level_only)?;
    (first > solution.amount).then_some(first)
}

fn first_that_does(problem: &Problem) -> Option<Exact> {
    let mut searched = neighbour(problem);
    searched.amount = AmountRequest::Smallest { step: Exact::one() };
    twice_solved(&searched).map(|solved| solved.amount)
}

/// The size of the same region if one nonconforming unit in five passed.
fn size_with_misses(problem: &Problem, solution: &Solution) -> Option<f64> {
    if problem.observation != Observation::Perfect
        || !problem.stages.is_empty()
        || problem.family.registration().finite_lot
    {
        return None;
    }
    let fifth = Exact::fraction(1, 5)?;
    let misses = (fifth.clone(), fifth);
    let mut blurred = neighbour(problem);
    blurred.observation = match problem.family.registration().amount_kind {
        AmountKind::Opportunity => Observation::OfNonconformities { misses },
        _ => Observation::OfUnits {
            misses,
            false_alarms: (Exact::zero(), Exact::zero()),
        },
    };
    blurred.requirements.clear();
    blurred.given_region = Some(solution.region.clone());
    blurred.amount = AmountRequest::Given(solution.amount.clone());
    let size = twice_solved(&blurred)?.size.value.upper();
    (size > solution.size.value.upper()).then_some(size)
}
