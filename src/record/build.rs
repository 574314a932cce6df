//! From a solution to its record: figures are copied, never computed.

use std::collections::BTreeMap;

use sha2::{Digest, Sha256};

use crate::family::{AmountKind, Family};
use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::region::Region;
use crate::language::plan::{AcceptWhen, Plan};
use crate::problem::{Observation, Problem};
use crate::solving::{Placed, PowerPoint, Search, Solution, SolvedStage};
use crate::space::Value;

use super::content::*;

/// Version of the plan language that this program reads.
pub const LANGUAGE: u32 = 1;

/// The record of a solved plan, without cautions, waivers and seal.
pub fn build(plan: &Plan, problem: &Problem, solution: &Solution) -> Record {
    Record {
        assize: Program {
            version: env!("CARGO_PKG_VERSION").to_owned(),
            language: LANGUAGE,
        },
        plan: PlanIdentity {
            id: plan.id.value.clone(),
            revision: plan.revision.value.clone(),
            title: plan.title.value.clone(),
            sha256: hexadecimal(&Sha256::digest(plan.text.as_bytes())),
            text: plan.text.clone(),
        },
        characteristic: characteristic(plan),
        problem: statement(problem),
        design: design(problem, solution),
        critical_region: critical_region(plan, problem, solution),
        optimality: Optimality {
            claim: solution.optimality.claim.to_owned(),
            theorem: solution.optimality.theorem.clone(),
            scope: solution.optimality.scope.clone(),
        },
        size: size(problem, solution),
        power: solution
            .power
            .iter()
            .map(|point| power_row(problem, point))
            .collect(),
        requirements: requirements(problem, solution),
        acceptance: solution
            .acceptance
            .iter()
            .map(|(probability, at)| {
                let point = [(problem.family.parameter().to_owned(), *at)].into();
                (format!("probability_{probability}_at"), point)
            })
            .collect(),
        sample_size_search: solution
            .search
            .as_ref()
            .map(|search| sample_size_search(problem, search)),
        rectification: solution.rectification.as_ref().map(|found| Rectification {
            lot_size: found.lot_size,
            aoql: Located {
                value: found.aoql.upper(),
                lower: found.aoql.lower(),
                upper: found.aoql.upper(),
                at: point(problem.family.as_ref(), &found.aoql_at),
            },
            rows: found
                .rows
                .iter()
                .map(|row| RectificationRow {
                    at: point(problem.family.as_ref(), &row.at),
                    aoq: Bounds::of_risk(row.outgoing),
                    ati: Bounds::of_risk(row.inspected),
                })
                .collect(),
        }),
        retest: solution.size_of_one_try.map(|single| Retest {
            times: u64::from(problem.tries) - 1,
            size_of_one_try: Bounds::of_risk(single),
        }),
        inspection: inspection(&problem.observation),
        decision: Decision {
            accept_when: match plan.decision.accept_when.value {
                AcceptWhen::NullRejected => "null_rejected",
                AcceptWhen::NullRetained => "null_retained",
            }
            .to_owned(),
            if_rejected: plan.decision.if_rejected.clone(),
            if_retained: plan.decision.if_retained.clone(),
        },
        cautions: Vec::new(),
        waivers: Vec::new(),
        declared: plan.declared.clone(),
        cross_check: cross_check(solution),
        seal: None,
    }
}

/// Bytes as lower-case hexadecimal digits.
pub fn hexadecimal(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

fn characteristic(plan: &Plan) -> Characteristic {
    let declared = &plan.characteristic;
    let text = |field: &Option<crate::language::diagnostic::Located<String>>| {
        field.as_ref().map(|text| text.value.clone())
    };
    Characteristic {
        name: declared.name.value.clone(),
        counts: text(&declared.counts),
        measures: text(&declared.measures),
        unit: text(&declared.unit),
        hazard: text(&declared.hazard),
    }
}

fn statement(problem: &Problem) -> ProblemStatement {
    let parameter = problem.family.parameter();
    ProblemStatement {
        family: problem.family.registration().name.to_owned(),
        parameter: parameter.to_owned(),
        parameter_space: problem.space.in_words(parameter),
        null_subset: problem.null.in_words(parameter),
        alternative: problem.alternative.in_words(parameter),
        alpha: problem.alpha.to_f64(),
        shape: problem.shape.in_words().to_owned(),
    }
}

fn amount_of(problem: &Problem, amount: &Exact) -> Amount {
    match problem.family.registration().amount_kind {
        AmountKind::Opportunity if !amount.is_whole() => Amount::Real(amount.to_f64()),
        _ => amount
            .to_u64()
            .map_or_else(|| Amount::Real(amount.to_f64()), Amount::Count),
    }
}

fn design(problem: &Problem, solution: &Solution) -> Design {
    let waits = problem.family.registration().amount_kind == AmountKind::Nonconforming;
    let staged = !solution.stages.is_empty();
    Design {
        kind: if staged { "staged" } else { "single" }.to_owned(),
        sample_size: (!waits && !staged).then(|| amount_of(problem, &solution.amount)),
        stop_at_nonconforming: waits.then(|| solution.amount.to_u64()).flatten(),
        lot_size: problem
            .family
            .lattice()
            .and_then(|_| problem.family.most().to_u64()),
        stages: solution
            .stages
            .iter()
            .map(|stage| Stage {
                cumulative_size: amount_of(problem, &stage.amount),
                retain_null: limit(problem, stage, &stage.retain),
                reject_null: limit(problem, stage, &stage.reject),
            })
            .collect(),
    }
}

/// Counts of a stage that can occur there, as one range.
fn limit(problem: &Problem, stage: &SolvedStage, region: &Region) -> Option<CountRange> {
    let counted = problem.family.registration().amount_kind == AmountKind::Units;
    let most = counted.then(|| stage.amount.to_u64()).flatten();
    let cut = region.within(0, most);
    ranges(&cut).first().copied()
}

fn critical_region(plan: &Plan, problem: &Problem, solution: &Solution) -> CriticalRegion {
    let statistic = problem.family.registration().statistic;
    let outcomes = solution.outcomes;
    let retained = solution.region.complement();
    let staged = |region: fn(&SolvedStage) -> &Region| staged_words(solution, statistic, region);
    let (reject_when, retain_when) = if solution.stages.is_empty() {
        (
            solution.region.in_words(statistic, outcomes),
            retained.in_words(statistic, outcomes),
        )
    } else {
        (staged(|stage| &stage.reject), staged(|stage| &stage.retain))
    };
    let given = problem.given_region.is_some()
        || (!plan.test.stages.is_empty()
            && problem.stages.iter().all(|stage| stage.reject.is_some()));
    CriticalRegion {
        statistic: statistic.to_owned(),
        reject_when,
        retain_when,
        intervals: ranges(&solution.region),
        source: if given { "given" } else { "derived" }.to_owned(),
    }
}

/// The limits of all stages; neighbouring stages with the same limit share one clause.
fn staged_words(
    solution: &Solution,
    statistic: &str,
    region: fn(&SolvedStage) -> &Region,
) -> String {
    let mut clauses: Vec<(String, &Exact, &Exact)> = Vec::new();
    for stage in &solution.stages {
        let words = region(stage).in_words(statistic, (0, None));
        match clauses.last_mut() {
            Some(clause) if clause.0 == words => clause.2 = &stage.amount,
            _ => clauses.push((words, &stage.amount, &stage.amount)),
        }
    }
    let parts: Vec<String> = clauses
        .into_iter()
        .filter(|(words, ..)| words != "none")
        .map(|(words, from, to)| {
            if from == to {
                format!("{words} after {from}")
            } else {
                format!("{words} after {from} to {to}")
            }
        })
        .collect();
    parts.join("; ")
}

fn ranges(region: &Region) -> Vec<CountRange> {
    region
        .ranges()
        .iter()
        .map(|range| CountRange {
            from: Some(range.from),
            to: range.to,
        })
        .collect()
}

fn point(family: &dyn Family, at: &Value) -> Point {
    BTreeMap::from([(family.parameter().to_owned(), finite(at))])
}

/// JSON has no infinities: a supremum approached at infinity is reported at the largest double.
fn finite(at: &Value) -> f64 {
    at.to_f64().clamp(f64::MIN, f64::MAX)
}

fn size(problem: &Problem, solution: &Solution) -> Size {
    let found: &Placed = &solution.size;
    Size {
        value: found.value.upper(),
        lower: found.value.lower(),
        upper: found.value.upper(),
        at: point(problem.family.as_ref(), &found.at),
        attained: found.attained,
        how: found.how.clone(),
        within_level: solution.within_level,
    }
}

fn power_row(problem: &Problem, found: &PowerPoint) -> PowerRow {
    let rejection = found.rejection;
    let accepted = match problem.accept_when {
        AcceptWhen::NullRejected => rejection,
        AcceptWhen::NullRetained => found.retention,
    };
    PowerRow {
        at: point(problem.family.as_ref(), &found.at),
        subset: if found.in_null { "null" } else { "alternative" }.to_owned(),
        value: if found.in_null {
            rejection.upper()
        } else {
            rejection.lower()
        },
        lower: rejection.lower(),
        upper: rejection.upper(),
        envelope: found.envelope,
        lot_accepted: released(accepted, found.in_null, problem.accept_when),
        expected_sample_size: found.expected_amount.map(Bounds::of_risk),
    }
}

/// Releasing a lot is a risk where the lot is bad and a merit where it is good: which is which, the decision says.
fn released(accepted: Enclosure, in_null: bool, accept_when: AcceptWhen) -> Bounds {
    let bad = in_null == (accept_when == AcceptWhen::NullRejected);
    if bad {
        Bounds::of_risk(accepted)
    } else {
        Bounds::of_power(accepted)
    }
}

fn requirements(problem: &Problem, solution: &Solution) -> Vec<RequirementResult> {
    problem
        .requirements
        .iter()
        .zip(&solution.requirements)
        .map(|(wanted, outcome)| RequirementResult {
            where_set: wanted.set.in_words(problem.family.parameter()),
            at_least: wanted.at_least.to_f64(),
            attained: Bounds::of_power(outcome.attained.value),
            at: point(problem.family.as_ref(), &outcome.attained.at),
            how: outcome.attained.how.clone(),
            met: outcome.met,
            because: wanted.because.clone(),
        })
        .collect()
}

fn sample_size_search(problem: &Problem, search: &Search) -> SampleSizeSearch {
    let amount = |found: &Exact| amount_of(problem, found);
    SampleSizeSearch {
        smallest: amount(&search.smallest),
        every_n_from: search.every_from.as_ref().map(amount),
        proved_to: search.proved_to.as_ref().map(amount),
        every_n_how: search.every_from.as_ref().map(|_| search.how.to_owned()),
        one_less_fails_because: search.one_less.clone(),
    }
}

fn inspection(observation: &Observation) -> Option<InspectionErrors> {
    let pair = |rates: &(Exact, Exact)| [rates.0.to_f64(), rates.1.to_f64()];
    match observation {
        Observation::Perfect => None,
        Observation::OfUnits {
            misses,
            false_alarms,
        } => Some(InspectionErrors {
            misses: pair(misses),
            false_alarms: pair(false_alarms),
            observed: "a unit is called nonconforming with probability f + p(1 - m - f), m the misses and f the false alarms".to_owned(),
        }),
        Observation::OfNonconformities { misses } => Some(InspectionErrors {
            misses: pair(misses),
            false_alarms: [0.0, 0.0],
            observed: "nonconformities are seen at the rate lambda(1 - m), m the misses".to_owned(),
        }),
    }
}

fn cross_check(solution: &Solution) -> CrossCheck {
    let entry = &solution.double_entry;
    CrossCheck {
        second_route: entry.routes.iter().copied().collect::<Vec<_>>().join("; "),
        largest_relative_difference: entry.largest_difference,
        figures: entry.figures,
        widest_relative_enclosure: entry.widest,
        tolerance: crate::kernel::second_route::TOLERANCE,
        rests_on: "IEEE 754 additions, multiplications and divisions with counted rounding errors; no transcendental function enters a bound".to_owned(),
    }
}
