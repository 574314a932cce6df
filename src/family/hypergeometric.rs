//! Nonconforming units in a sample drawn without replacement from a lot of N that holds D of them.

use super::{AmountKind, Family, Registration, Settings};
use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::{self, Law};
use crate::kernel::region::Region;
use crate::kernel::second_route::{self, SecondFigure};
use crate::space::{Lattice, LineSet, Value};

pub(super) const REGISTRATION: Registration = Registration {
    name: "hypergeometric",
    parameters: &["D", "p"],
    finite_lot: true,
    amount_kind: AmountKind::Units,
    statistic: "x",
    build: |settings: &Settings| {
        Box::new(Hypergeometric {
            parameter: settings.parameter,
            lot: settings.lot_size,
        })
    },
};

#[derive(Debug)]
struct Hypergeometric {
    parameter: &'static str,
    lot: u64,
}

impl Hypergeometric {
    /// Lattice steps per unit of the parameter: the parameter is a count, or a fraction of the lot.
    fn scale(&self) -> u64 {
        if self.parameter == "D" { 1 } else { self.lot }
    }

    /// D at a value of the parameter; values off the lattice never reach here, and are rounded down.
    fn nonconforming(&self, at: &Value) -> u64 {
        let scaled = at
            .finite()
            .map(|value| (value * &Exact::from(self.scale())).floor());
        scaled
            .and_then(|value| value.to_u64())
            .unwrap_or(0)
            .min(self.lot)
    }
}

impl Family for Hypergeometric {
    fn registration(&self) -> &'static Registration {
        &REGISTRATION
    }

    fn parameter(&self) -> &'static str {
        self.parameter
    }

    fn statistic_in_words(&self) -> &'static str {
        "nonconforming units in the sample"
    }

    fn domain(&self) -> LineSet {
        let last = if self.parameter == "D" {
            Exact::from(self.lot)
        } else {
            Exact::one()
        };
        LineSet::between(Exact::zero().into(), last.into())
    }

    fn lattice(&self) -> Option<Lattice> {
        Some(Lattice {
            last: self.lot,
            scale: self.scale(),
        })
    }

    fn most(&self) -> Exact {
        Exact::from(self.lot)
    }

    fn law(&self, at: &Value, amount: &Exact) -> Law {
        law::hypergeometric(
            self.lot,
            self.nonconforming(at),
            super::count(amount).min(self.lot),
        )
    }

    fn slope(&self, _count: u64, _at: &Value, _amount: &Exact) -> Option<Enclosure> {
        None
    }

    fn steepest(&self, _count: u64, _amount: &Exact) -> Value {
        Exact::zero().into()
    }

    /// The largest D with x(N+1) ≥ D·n, from the ratio of the likelihoods of D and D − 1.
    fn most_likely(&self, count: u64, amount: &Exact) -> Value {
        let sample = u128::from(super::count(amount).max(1));
        let most = u128::from(count) * (u128::from(self.lot) + 1) / sample;
        let index = (most.min(u128::from(self.lot))) as u64;
        self.lattice()
            .map_or_else(|| Exact::from(index).into(), |lattice| lattice.value(index))
    }

    fn expected_count(&self, at: &Value, amount: &Exact) -> f64 {
        self.nonconforming(at) as f64 * amount.to_f64() / self.lot as f64
    }

    fn second_route(&self, at: &Value, amount: &Exact, event: &Region) -> SecondFigure {
        second_route::hypergeometric(
            self.lot,
            self.nonconforming(at),
            super::count(amount).min(self.lot),
            event,
        )
    }

    /// The units of an earlier stage are a random sample of those of all stages so far.
    fn earlier(&self, count: u64, later: &Exact, earlier: &Exact) -> Option<Law> {
        Some(law::hypergeometric(
            super::count(later),
            count,
            super::count(earlier),
        ))
    }

    /// A further stage is drawn from what is left of the lot.
    fn second_route_further(
        &self,
        at: &Value,
        (inspected, found): (&Exact, u64),
        further: &Exact,
        event: &Region,
    ) -> SecondFigure {
        second_route::hypergeometric(
            self.lot.saturating_sub(super::count(inspected)),
            self.nonconforming(at).saturating_sub(found),
            super::count(further),
            event,
        )
    }

    fn log_likelihood_ratio(&self, _one: &Value, _other: &Value) -> Option<(f64, f64)> {
        None
    }

    fn divergence(&self, _mean: f64, _at: &Value) -> Option<f64> {
        None
    }

    /// P(X = x) = C(n, x)·C(N−n, D−x)/C(N, D): factors of x and of D alone, and C(N−n, D−x), the coefficients of
    /// (1+z)^(N−n), a Pólya frequency sequence.
    fn total_positivity(&self) -> &'static str {
        "C(N-n, D-x) is a Pólya frequency sequence in D-x, hence totally positive (Karlin 1968, ch. 8)"
    }
}
