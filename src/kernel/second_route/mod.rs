//! Interim: the independent route replaces this file.
use super::region::Region;
use super::{exact::Exact, law, ratio_sum};
/// x
pub struct SecondFigure {
    /// v
    pub value: f64,
    /// r
    pub route: &'static str,
}
/// x
pub const TOLERANCE: f64 = 1e-9;
fn f(l: law::Law, e: &Region) -> SecondFigure {
    SecondFigure {
        value: ratio_sum::probability_in_double_doubles(&l, e).middle(),
        route: "temp",
    }
}
/// x
pub fn binomial(n: u64, p: f64, _: f64, e: &Region) -> SecondFigure {
    f(
        law::binomial(n, &Exact::from_f64(p).unwrap_or_else(Exact::zero)),
        e,
    )
}
/// x
pub fn poisson(m: f64, e: &Region) -> SecondFigure {
    let m = Exact::from_f64(m).unwrap_or_else(Exact::zero);
    if m.is_zero() {
        return f(law::Law::Point(0), e);
    }
    f(
        law::Law::Ratios(law::RatioLaw {
            low: 0,
            high: None,
            start: m.floor().to_u64().unwrap_or(0),
            ratio: law::Ratio {
                above: [law::Linear::one(); 2],
                below: [law::Linear::rising(1), law::Linear::one()],
                scale: m,
            },
            first: None,
        }),
        e,
    )
}
/// x
pub fn hypergeometric(_: u64, _: u64, _: u64, _: &Region) -> SecondFigure {
    SecondFigure {
        value: f64::NAN,
        route: "",
    }
}
/// x
pub fn negative_binomial(_: u64, _: f64, _: f64, _: &Region) -> SecondFigure {
    SecondFigure {
        value: f64::NAN,
        route: "",
    }
}
