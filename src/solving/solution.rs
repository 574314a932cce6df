//! A whole solution: region, proved size, power with envelope, requirements, acceptance, sample size and double entry.

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::region::Region;
use crate::language::plan::{AcceptWhen, Tails};
use crate::problem::{AmountRequest, Problem, Shape, default_points};
use crate::space::{LineSet, Value};

use super::Progress;
use super::acceptance::accepted_with;
use super::double_entry::DoubleEntry;
use super::envelope::envelope;
use super::extremum::{Extremum, Goal};
use super::obstacle::Obstacle;
use super::operating::Operating;
use super::rectification::{Rectified, rectified};
use super::region::{Form, derive};
use super::rule::Rule;
use super::sample_size::{Search, smallest};

/// Acceptance probabilities at which the quality is reported.
const ACCEPTED: [(&str, f64); 3] = [("0.95", 0.95), ("0.50", 0.5), ("0.10", 0.1)];

/// A solved problem.
#[derive(Clone, Debug)]
pub struct Solution {
    /// The amount of inspection.
    pub amount: Exact,
    /// Smallest and largest possible outcome.
    pub outcomes: (u64, Option<u64>),
    /// The critical region within the possible outcomes; of stages, that of the last.
    pub region: Region,
    /// The stages; none for a single sample.
    pub stages: Vec<SolvedStage>,
    /// Its form.
    pub form: Form,
    /// In what sense it is best.
    pub optimality: Optimality,
    /// Its size.
    pub size: Placed,
    /// Whether the size is at most the level.
    pub within_level: bool,
    /// The power at the points of the report.
    pub power: Vec<PowerPoint>,
    /// How each requirement fares, in the order of the plan.
    pub requirements: Vec<RequirementOutcome>,
    /// Probability (as text) and parameter value at which lots are released with it.
    pub acceptance: Vec<(&'static str, f64)>,
    /// The search for the sample size, where one was asked for.
    pub search: Option<Search>,
    /// Size of one try, where several are allowed.
    pub size_of_one_try: Option<Enclosure>,
    /// Outgoing quality where lots that are not released are sorted.
    pub rectification: Option<Rectified>,
    /// The second computation of every figure.
    pub double_entry: DoubleEntry,
}

/// A stage with all its limits.
#[derive(Clone, Debug)]
pub struct SolvedStage {
    /// Amount inspected when the stage is complete.
    pub amount: Exact,
    /// Counts at which the null is rejected.
    pub reject: Region,
    /// Counts at which the null is retained.
    pub retain: Region,
}

/// An extremum with its place as a true parameter value.
#[derive(Clone, Debug)]
pub struct Placed {
    /// The enclosure.
    pub value: Enclosure,
    /// Where it is attained or approached.
    pub at: Value,
    /// What inspection sees there.
    pub observed: Value,
    /// Whether the set holds that value.
    pub attained: bool,
    /// Why it is there.
    pub how: String,
}

/// The power function at one point.
#[derive(Clone, Debug)]
pub struct PowerPoint {
    /// The true parameter value.
    pub at: Value,
    /// What inspection sees there; of several images the one that counts.
    pub observed: Value,
    /// Whether the null holds there.
    pub in_null: bool,
    /// Probability that the null is rejected: at its largest where the null holds, else at its smallest, over what
    /// inspection may see.
    pub rejection: Enclosure,
    /// Probability that it is retained, at the same observed value.
    pub retention: Enclosure,
    /// Expected amount of inspection, for stages.
    pub expected_amount: Option<Enclosure>,
    /// Highest rejection probability of any test of the level, on the largest amount of inspection.
    pub envelope: Option<f64>,
}

/// How a requirement fares.
#[derive(Clone, Debug)]
pub struct RequirementOutcome {
    /// The infimum of the power.
    pub attained: Placed,
    /// Whether it is at least what is required.
    pub met: bool,
}

/// In what sense the region is best.
#[derive(Clone, Debug)]
pub struct Optimality {
    /// The claim.
    pub claim: &'static str,
    /// The theorem.
    pub theorem: String,
    /// Among which tests and under which conditions.
    pub scope: String,
}

/// Solves a problem.
pub fn solve(problem: &Problem, progress: &dyn Progress) -> Result<Solution, Obstacle> {
    let (amount, search) = match &problem.amount {
        AmountRequest::Given(amount) => (amount.clone(), None),
        AmountRequest::Smallest { step } => {
            let search = smallest(problem, step, progress)?;
            (search.smallest.clone(), Some(search))
        }
    };
    if let Some(lot) = problem.rectified_lot
        && amount > Exact::from(lot)
    {
        return Err(Obstacle::SampleBeyondLot { amount, lot });
    }
    let operating = Operating::new(problem, amount);
    let rule = if problem.stages.is_empty() {
        let outcomes = operating.outcomes();
        let region = match &problem.given_region {
            Some(region) => region.within(outcomes.0, outcomes.1),
            None => derive(&operating)?,
        };
        if region.is_empty() {
            return Err(match problem.given_region {
                Some(_) => Obstacle::ImpossibleRegion,
                None => unreachable_level(&operating, progress),
            });
        }
        Rule::single(operating, region)
    } else {
        Rule::staged(operating)?
    };
    let (size, within_level) = rule.size()?;
    let mut requirements = Vec::with_capacity(problem.requirements.len());
    for requirement in &problem.requirements {
        let (infimum, met) = rule.attains(&requirement.set, &requirement.at_least)?;
        requirements.push(RequirementOutcome {
            attained: placed(problem, infimum, &requirement.set),
            met,
        });
    }
    let power = power(&rule, progress)?;
    let rectification = match problem.rectified_lot {
        Some(lot) => match rectified(&rule, lot, &power) {
            Some(found) => Some(found),
            None => return Err(Obstacle::NoRectification),
        },
        None => None,
    };
    let mut solution = Solution {
        rectification,
        outcomes: rule.operating.outcomes(),
        form: rule.form(),
        optimality: optimality(problem),
        size_of_one_try: (problem.tries > 1)
            .then(|| rule.operating.single(&rule.region(), &size.at)),
        size: placed(problem, size, &problem.null),
        within_level,
        power,
        requirements,
        acceptance: acceptance(&rule),
        search,
        double_entry: DoubleEntry::default(),
        amount: rule.operating.amount.clone(),
        region: rule.region(),
        stages: rule.stages().map_or_else(Vec::new, |staged| {
            staged
                .stages()
                .map(|(amount, reject, retain)| SolvedStage {
                    amount: amount.clone(),
                    reject: reject.clone(),
                    retain: retain.clone(),
                })
                .collect()
        }),
    };
    solution.double_entry = DoubleEntry::of(&rule, &solution);
    Ok(solution)
}

/// The extremum with its place in the declared parameter.
fn placed(problem: &Problem, found: Extremum, declared: &LineSet) -> Placed {
    let at = problem
        .observation
        .preimage(&found.at, found.at_lower_end, declared);
    Placed {
        value: found.value,
        attained: declared.contains(&at),
        how: match found.how {
            how if how.starts_with("total positivity") => {
                format!("{how}; {}", problem.family.total_positivity())
            }
            how => how.to_owned(),
        },
        at,
        observed: found.at,
    }
}

fn power(rule: &Rule<'_>, progress: &dyn Progress) -> Result<Vec<PowerPoint>, Obstacle> {
    let points = points(rule.operating.problem);
    let total = points.len() as u64;
    let mut table = Vec::with_capacity(points.len());
    for (done, at) in points.into_iter().enumerate() {
        if !progress.step("points of the power function", done as u64, Some(total)) {
            return Err(Obstacle::Stopped);
        }
        table.push(power_at(rule, at)?);
    }
    Ok(table)
}

fn power_at(rule: &Rule<'_>, at: Value) -> Result<PowerPoint, Obstacle> {
    let problem = rule.operating.problem;
    let in_null = problem.null.contains(&at);
    let (least, most) = problem.observation.images(&at);
    let observed = if least == most {
        least
    } else {
        let goal = if in_null {
            Goal::Supremum
        } else {
            Goal::Infimum
        };
        rule.extremum(&LineSet::between(least, most), goal).at
    };
    Ok(PowerPoint {
        in_null,
        rejection: rule.rejection(&observed),
        retention: rule.retention(&observed),
        expected_amount: rule.expected_amount(&observed),
        envelope: envelope(&rule.operating, &at)?,
        at,
        observed,
    })
}

/// The points of the report: those of the plan that lie in the space, else a grid around all that matters.
fn points(problem: &Problem) -> Vec<Value> {
    if !problem.points.is_empty() {
        return problem.points.iter().cloned().map(Value::Finite).collect();
    }
    let mut ends: Vec<Exact> = Vec::new();
    let mut add = |set: &LineSet| {
        for piece in set.pieces() {
            for end in [&piece.low().at, &piece.high().at] {
                // The ends of the space itself are far from what matters.
                if let Some(value) = end.finite()
                    && problem.space.infimum() != Some(end)
                    && problem.space.supremum() != Some(end)
                {
                    ends.push(value.clone());
                }
            }
        }
    };
    add(&problem.null);
    for requirement in &problem.requirements {
        add(&requirement.set);
    }
    if ends.is_empty() {
        ends.extend(problem.space.infimum().and_then(Value::finite).cloned());
    }
    ends.sort();
    ends.dedup();
    default_points(&problem.space, &ends, problem.family.lattice().as_ref())
}

fn acceptance(rule: &Rule<'_>) -> Vec<(&'static str, f64)> {
    let released_when_rejected = rule.operating.problem.accept_when == AcceptWhen::NullRejected;
    ACCEPTED
        .iter()
        .filter_map(|&(name, probability)| {
            accepted_with(rule, released_when_rejected, probability).map(|at| (name, at))
        })
        .collect()
}

fn optimality(problem: &Problem) -> Optimality {
    if problem.given_region.is_some() {
        return Optimality {
            claim: "none: the region is given by the plan and audited",
            theorem: "none is needed: size and power are computed for the region as it stands"
                .into(),
            scope:
                "the envelope beside each power shows what another test of this level could gain"
                    .into(),
        };
    }
    let family = problem.family.total_positivity();
    if !problem.stages.is_empty() {
        return Optimality {
            claim: "none: the stages are given by the plan; a limit left out is the largest that keeps the level",
            theorem: "none is needed: the size is proved for the stages as they stand".into(),
            scope: "the envelope is that of all tests on the full amount of inspection; stages spend less on average".into(),
        };
    }
    match &problem.shape {
        Shape::Below { .. } | Shape::Above { .. } => Optimality {
            claim: "uniformly most powerful",
            theorem: format!("Karlin–Rubin (1956): monotone likelihood ratio; {family}"),
            scope: "among all tests of level equal to this test's size; at the full level another set can sometimes gain, and the envelope shows how much".into(),
        },
        Shape::Amid { .. } if problem.tails == Tails::Joint => Optimality {
            claim: "maximal: no larger two-tailed region keeps the level",
            theorem: format!("variation diminishing (Karlin 1968): the size over the null is at one of its ends; {family}"),
            scope: "among two-tailed regions; of several maximal ones that whose tail sizes differ least".into(),
        },
        Shape::Amid { .. } => Optimality {
            claim: "each tail is the largest of size at most half the level",
            theorem: format!("each tail is uniformly most powerful on its side at its own size, Karlin–Rubin (1956); {family}"),
            scope: "among pairs of one-sided tests at half the level each".into(),
        },
        Shape::Around { .. } => Optimality {
            claim: "maximal: no larger inner range keeps the level",
            theorem: format!("generalised Neyman–Pearson lemma and variation diminishing (Karlin 1968): best tests for equivalence reject on an inner range; {family}"),
            scope: "among non-randomised inner ranges; of several maximal ones the one with the largest margin over the requirements".into(),
        },
        Shape::General => Optimality {
            claim: "maximal: no outcome can be added without breaking the level",
            theorem: "order of generalised likelihood ratios (Neyman and Pearson 1928), then exact improvement".into(),
            scope: "no claim of best power is made; the envelope shows what any test could gain; the region is fixed by the program's version".into(),
        },
    }
}

/// What the level would need.
fn unreachable_level(operating: &Operating<'_>, progress: &dyn Progress) -> Obstacle {
    let (low, high) = operating.outcomes();
    let problem = operating.problem;
    let null = problem.observation.image(&problem.null);
    let last = high.unwrap_or(low + 1_000).min(low + 5_000);
    let candidates = match &problem.shape {
        Shape::Below { .. } => low..=low,
        Shape::Above { .. } => last..=last,
        // Outcomes far beyond both null points keep any level, and say nothing about the alternative.
        Shape::Around { low: a, high: b } => {
            let near = |end: &Value| {
                let count = problem.family.expected_count(end, &operating.amount);
                (count.min(last as f64) as u64).clamp(low, last)
            };
            near(a)..=near(b)
        }
        _ => low..=last,
    };
    let size_of = |count: u64| {
        let outcome = Region::between(count, count);
        null.pieces()
            .iter()
            .flat_map(|piece| [&piece.low().at, &piece.high().at])
            .map(|end| operating.rejection(&outcome, end).upper())
            .fold(0.0, f64::max)
    };
    let (count, smallest_size) = candidates
        .map(|count| (count, size_of(count)))
        .reduce(|best, other| if other.1 < best.1 { other } else { best })
        .unwrap_or((low, 1.0));
    let mut anything = problem.clone();
    anything.requirements.clear();
    let needed = matches!(problem.amount, AmountRequest::Given(_))
        .then(|| smallest(&anything, &Exact::one(), progress).ok())
        .flatten()
        .map(|search| search.smallest);
    let statistic = problem.family.registration().statistic;
    Obstacle::LevelUnreachable {
        rule: Region::between(count, count).in_words(statistic, (low, high)),
        smallest: smallest_size,
        halved: matches!(problem.shape, Shape::Amid { .. }) && problem.tails == Tails::Equal,
        needed,
    }
}
