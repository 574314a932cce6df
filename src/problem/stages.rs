//! Staged and sequential designs as posed: cumulative amounts with the counts that end inspection.

use crate::family::{AmountKind, Family};
use crate::kernel::exact::Exact;
use crate::kernel::region::{Range, Region};
use crate::language::diagnostic::{Diagnostic, Located};
use crate::language::plan::{SequentialRequest, StageRequest, Test};
use crate::language::set::SetExpression;

use super::critical_region::counts_of;
use super::observation::Observation;
use super::sets::{self, Vocabulary};
use super::shape::Shape;

/// Most looks of a sequential design.
const MOST_LOOKS: u64 = 2_000;

/// One stage: inspection is complete up to an amount, and the count over all stages so far is looked at.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Stage {
    /// Amount inspected when the stage is complete.
    pub cumulative: Exact,
    /// Counts at which the null is rejected; `None` at the last stage asks for the largest tail that fits the level.
    pub reject: Option<Region>,
    /// Counts at which the null is retained.
    pub retain: Region,
}

/// The stages of a plan, if it has any.
pub(super) fn stages(
    test: &Test,
    shape: &Shape,
    observation: &Observation,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Vec<Stage> {
    posed(test, shape, observation, family, problems).unwrap_or_default()
}

fn posed(
    test: &Test,
    shape: &Shape,
    observation: &Observation,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<Vec<Stage>> {
    let span = match (&test.sequential, test.stages.first()) {
        (Some(sequential), None) => sequential.span,
        (None, Some(first)) => first.size.span,
        (Some(sequential), Some(_)) => {
            problems.push(
                Diagnostic::error(
                    "two-designs",
                    sequential.span,
                    "a plan has `stages` or `sequential`, not both",
                )
                .with_help("keep the one that inspection will follow"),
            );
            return None;
        }
        (None, None) => return None,
    };
    let rejects_small = match shape {
        Shape::Below { .. } => true,
        Shape::Above { .. } => false,
        _ => {
            problems.push(
                Diagnostic::error(
                    "not-yet-derived",
                    span,
                    "staged designs are derived for one-sided nulls only",
                )
                .with_help("the nearest plan that works has a one-sided null, or one `sample_size` and no stages"),
            );
            return None;
        }
    };
    if test.retest_times.is_some() || test.critical_region.is_some() || test.sample_size.is_some() {
        problems.push(
            Diagnostic::error(
                "two-designs",
                span,
                "a staged design states its own sizes and limits: `sample_size`, `critical_region` and `retest` have no place beside it",
            )
            .with_help("leave them out; a further try is a further stage"),
        );
        return None;
    }
    match &test.sequential {
        Some(sequential) => ratio_test(sequential, test, (shape, observation), family, problems),
        None => declared(&test.stages, rejects_small, family, problems),
    }
}

fn declared(
    requests: &[StageRequest],
    rejects_small: bool,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<Vec<Stage>> {
    let mut cumulative = Exact::zero();
    let mut stages = Vec::with_capacity(requests.len());
    for (index, request) in requests.iter().enumerate() {
        cumulative = &cumulative + &request.size.value;
        let reject = limit(request.reject_null.as_ref(), family, problems)?;
        let retain = limit(request.retain_null.as_ref(), family, problems)?;
        let last = index + 1 == requests.len();
        let place = request
            .reject_null
            .as_ref()
            .or(request.retain_null.as_ref())
            .map_or(request.size.span, |limit| limit.span);
        let both = (
            reject.clone().unwrap_or_default(),
            retain.clone().unwrap_or_default(),
        );
        if !both.0.intersection(&both.1).is_empty() {
            problems.push(Diagnostic::error(
                "stage-limits-overlap",
                place,
                "some counts both retain and reject the null at this stage",
            ));
            return None;
        }
        let (lower, upper) = if rejects_small {
            (&both.0, &both.1)
        } else {
            (&both.1, &both.0)
        };
        if !is_lower(lower) || !is_upper(upper) {
            problems.push(
                Diagnostic::error(
                    "stage-limits-turned",
                    place,
                    "the limits of this stage do not follow the null: one outcome must end inspection at small counts and the other at large ones",
                )
                .with_help(if rejects_small {
                    "here small counts speak against the null: write `reject_null: x <= …` and `retain_null: x >= …`"
                } else {
                    "here large counts speak against the null: write `retain_null: x <= …` and `reject_null: x >= …`"
                }),
            );
            return None;
        }
        let endless = family.registration().amount_kind == AmountKind::Opportunity;
        if endless && !last && upper.is_empty() {
            problems.push(
                Diagnostic::error(
                    "not-yet-derived",
                    request.size.span,
                    "this stage lets inspection go on at any large count, which is not derived for counts without end",
                )
                .with_help("give the count from which this stage ends inspection"),
            );
            return None;
        }
        stages.push(match (last, reject, retain) {
            (false, reject, retain) => Stage {
                cumulative: cumulative.clone(),
                reject: Some(reject.unwrap_or_default()),
                retain: retain.unwrap_or_default(),
            },
            // At the last stage every count decides: what is not given is the rest.
            (true, None, Some(retain)) => Stage {
                cumulative: cumulative.clone(),
                reject: Some(retain.complement()),
                retain,
            },
            (true, reject, _) => Stage {
                cumulative: cumulative.clone(),
                retain: reject
                    .as_ref()
                    .map_or_else(Region::empty, Region::complement),
                reject,
            },
        });
    }
    if cumulative > family.most() {
        let span = requests.last()?.size.span;
        problems.push(
            Diagnostic::error(
                "sample-larger-than-lot",
                span,
                format!(
                    "all stages together take {cumulative} of a lot of {}",
                    family.most()
                ),
            )
            .with_help("take fewer units in all stages together"),
        );
        return None;
    }
    Some(stages)
}

fn is_lower(region: &Region) -> bool {
    matches!(region.ranges(), [] | [Range { from: 0, .. }])
}

fn is_upper(region: &Region) -> bool {
    matches!(region.ranges(), [] | [Range { to: None, .. }])
}

fn limit(
    set: Option<&Located<SetExpression>>,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<Option<Region>> {
    match set {
        None => Some(None),
        Some(set) => counts_of(set, family.registration(), problems).map(Some),
    }
}

/// The limits of Wald's ratio test between the null end and one point of the alternative, cut off at the last look.
fn ratio_test(
    request: &Located<SequentialRequest>,
    test: &Test,
    (shape, observation): (&Shape, &Observation),
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<Vec<Stage>> {
    let (end, rejects_small) = match shape {
        Shape::Below { end } => (end, true),
        Shape::Above { end } => (end, false),
        _ => return None,
    };
    let vocabulary = Vocabulary {
        name: family.parameter(),
        others: family.registration().parameters,
        family: family.registration().name,
    };
    let against = sets::solve(&request.value.against, &vocabulary)
        .map_err(|found| problems.extend(found))
        .ok()?;
    let point = against
        .as_point()
        .filter(|point| family.domain().contains(point))
        .map(|point| observation.images(point).0)
        .filter(|point| (point < end) == rejects_small && point != end);
    let looks = request.value.stop_by.to_u64();
    let (Some(point), Some(looks)) = (point, looks.filter(|&looks| looks <= MOST_LOOKS)) else {
        problems.push(
            Diagnostic::error(
                "sequential-cannot-start",
                request.span,
                format!(
                    "`against` must be one value on the far side of the null's end {end}, and `stop_by` a whole number of at most {MOST_LOOKS}"
                ),
            )
            .with_help(format!("for example `against: {} = …`", family.parameter())),
        );
        return None;
    };
    let alpha = test.alpha.value.to_f64();
    let beta = request.value.beta.to_f64();
    let to_reject = libm::log((1.0 - beta) / alpha);
    let to_retain = libm::log(beta / (1.0 - alpha));
    let Some(increments) = family.log_likelihood_ratio(&point, end) else {
        problems.push(
            Diagnostic::error(
                "not-yet-derived",
                request.span,
                format!(
                    "the ratio test is not derived for `{}`",
                    family.registration().name
                ),
            )
            .with_help("use `stages`, or `family: binomial`"),
        );
        return None;
    };
    let mut stages = Vec::with_capacity(looks as usize);
    for look in 1..=looks {
        stages.push(look_at(
            look,
            look == looks,
            increments,
            (to_reject, to_retain),
            rejects_small,
            family.registration().amount_kind,
        ));
    }
    Some(stages)
}

/// The limits at one look: the log likelihood ratio is `count · x + unit · n`.
fn look_at(
    look: u64,
    last: bool,
    (count, unit): (f64, f64),
    (to_reject, to_retain): (f64, f64),
    rejects_small: bool,
    kind: AmountKind,
) -> Stage {
    let drift = unit * look as f64;
    let (reject_at, retain_at) = ((to_reject - drift) / count, (to_retain - drift) / count);
    let most = if kind == AmountKind::Units {
        look
    } else {
        u64::MAX
    };
    let tail = |bound: f64, lower: bool| {
        if lower {
            Region::at_most((bound >= 0.0).then_some(bound.floor() as u64))
        } else if bound.ceil() > most as f64 {
            Region::empty()
        } else {
            Region::at_least(Some(bound.ceil().max(0.0) as u64))
        }
    };
    let reject = tail(reject_at, rejects_small);
    let retain = if last {
        reject.complement()
    } else {
        tail(retain_at, !rejects_small)
    };
    Stage {
        cumulative: Exact::from(look),
        reject: Some(reject),
        retain,
    }
}
