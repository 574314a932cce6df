//! Nulls of any other shape: points are added in the order of their likelihood ratios while the proved size stays at
//! most α; then every point left out is tried once more, so that in the end none can be added.

use crate::kernel::region::{Range, Region};
use crate::space::{LineSet, Value};

use super::extremum::supremum_against;
use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::Operating;

/// Most outcomes the general solver orders.
const MOST_OUTCOMES: u64 = 5_000;
/// Outcomes less probable than this under every null and alternative point tried are left out of an endless support.
const NEGLIGIBLE: f64 = 1e-18;

/// The critical region of a general null.
pub fn region(operating: &Operating<'_>, alpha: &Level) -> Result<Region, Obstacle> {
    let problem = operating.problem;
    let null = problem.observation.image(&problem.null);
    let alternative = problem.observation.image(&problem.alternative);
    let order = by_likelihood_ratio(operating, &null, &alternative)?;
    let fits = |region: &Region| within(operating, region, &null, alpha);
    let longest = super::operating::last_true(0, 0, order.len() as u64, |taken| {
        fits(&collected(&order[..taken as usize]))
    })?
    .unwrap_or(0) as usize;
    let mut region = collected(&order[..longest]);
    for &outcome in &order[longest..] {
        let larger = region.union(&Region::between(outcome, outcome));
        if !surely_too_large(operating, &larger, &null, alpha) && fits(&larger)? {
            region = larger;
        }
    }
    Ok(region)
}

fn collected(outcomes: &[u64]) -> Region {
    Region::union_of(outcomes.iter().map(|&count| Range {
        from: count,
        to: Some(count),
    }))
}

/// A quick no: already one end of the null is above the level.
fn surely_too_large(
    operating: &Operating<'_>,
    region: &Region,
    null: &LineSet,
    alpha: &Level,
) -> bool {
    null.pieces().iter().any(|piece| {
        [&piece.low().at, &piece.high().at]
            .iter()
            .any(|end| operating.rejection(region, end).lower() > alpha.above())
    })
}

/// Whether the proved size is at most the level; where the enclosure straddles it, a supremum at an end is decided
/// exactly, and any other counts as too large.
fn within(
    operating: &Operating<'_>,
    region: &Region,
    null: &LineSet,
    alpha: &Level,
) -> Result<bool, Obstacle> {
    if region.is_empty() {
        return Ok(true);
    }
    let size = supremum_against(operating, region, null, alpha);
    if let Some(order) = alpha.against(size.value) {
        return Ok(order != std::cmp::Ordering::Greater);
    }
    let at_an_end = null
        .pieces()
        .iter()
        .any(|piece| piece.low().at == size.at || piece.high().at == size.at);
    if at_an_end && size.value.relative_width() < 1e-11 {
        operating.is_at_most(region, &size.at, alpha)
    } else {
        Ok(false)
    }
}

/// The outcomes with the largest sup over the alternative of the likelihood, relative to that over the null, first.
fn by_likelihood_ratio(
    operating: &Operating<'_>,
    null: &LineSet,
    alternative: &LineSet,
) -> Result<Vec<u64>, Obstacle> {
    let (first, last) = outcomes(operating, null, alternative)?;
    let mut rated: Vec<(f64, u64)> = (first..=last)
        .map(|count| {
            let under_null = largest_likelihood(operating, null, count);
            let under_alternative = largest_likelihood(operating, alternative, count);
            let ratio = if under_null > 0.0 {
                under_alternative / under_null
            } else {
                f64::INFINITY
            };
            (ratio, count)
        })
        .collect();
    rated.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
    Ok(rated.into_iter().map(|(_, count)| count).collect())
}

/// All outcomes, or of an endless support those that are not negligible at any finite end of the sets.
fn outcomes(
    operating: &Operating<'_>,
    null: &LineSet,
    alternative: &LineSet,
) -> Result<(u64, u64), Obstacle> {
    let (first, last) = operating.outcomes();
    let last = match last {
        Some(last) => last,
        None => {
            let level = Level::new(
                crate::kernel::exact::Exact::from_f64(NEGLIGIBLE)
                    .unwrap_or_else(crate::kernel::exact::Exact::zero),
            );
            let mut farthest = first;
            for piece in null.pieces().iter().chain(alternative.pieces()) {
                for end in [&piece.low().at, &piece.high().at] {
                    if end.finite().is_some()
                        && let Some(count) = operating.smallest_upper_tail(end, &level)?
                    {
                        farthest = farthest.max(count);
                    }
                }
            }
            farthest
        }
    };
    if last - first > MOST_OUTCOMES {
        return Err(Obstacle::NotProved {
            question: format!(
                "the best region among {} outcomes for a null of this shape (at most {MOST_OUTCOMES})",
                last - first + 1
            ),
        });
    }
    Ok((first, last))
}

/// sup of P(statistic = count) over a set: likelihoods are unimodal, so it is at the most likely value, if the set holds
/// it, or else at an end.
fn largest_likelihood(operating: &Operating<'_>, set: &LineSet, count: u64) -> f64 {
    let outcome = Region::between(count, count);
    let likelihood = |at: &Value| operating.single(&outcome, at).middle();
    let most_likely = operating
        .problem
        .family
        .most_likely(count, &operating.amount);
    if set.contains(&most_likely) {
        return likelihood(&most_likely);
    }
    set.pieces()
        .iter()
        .flat_map(|piece| [&piece.low().at, &piece.high().at])
        .map(likelihood)
        .fold(0.0, f64::max)
}
