//! temporary
use super::region::Region;
/// x
pub struct SecondFigure {
    /// v
    pub value: f64,
    /// r
    pub route: &'static str,
}
/// x
pub const TOLERANCE: f64 = 1e-9;
/// x
pub fn binomial(_: u64, _: f64, _: f64, _: &Region) -> SecondFigure {
    SecondFigure {
        value: f64::NAN,
        route: "",
    }
}
/// x
pub fn poisson(_: f64, _: &Region) -> SecondFigure {
    SecondFigure {
        value: f64::NAN,
        route: "",
    }
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
