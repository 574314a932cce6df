//! The families a plan can name: those this version derives tests for, and those it only knows by name.

/// Families whose tests are derived.
pub const DERIVED: [&str; 4] = ["binomial", "hypergeometric", "poisson", "negative_binomial"];

/// Families that the language can say and this version cannot derive yet, each with the nearest thing that works.
pub const NOT_YET: [(&str, &str); 9] = [
    (
        "normal",
        "count the units beyond the limit and use `family: binomial`",
    ),
    (
        "lognormal",
        "count the units beyond the limit and use `family: binomial`",
    ),
    (
        "exponential",
        "count failures in a fixed total time and use `family: poisson`, with `lambda` per hour",
    ),
    (
        "weibull",
        "test every unit for one whole life, count the failures and use `family: binomial`",
    ),
    (
        "continuous",
        "count the units beyond the limit and use `family: binomial`",
    ),
    (
        "two_binomial",
        "state the reference rate as a number and use `family: binomial` for the new one",
    ),
    (
        "two_poisson",
        "state the reference rate as a number and use `family: poisson` for the new one",
    ),
    (
        "two_normal",
        "count the units beyond the limit and use `family: binomial` for the new one",
    ),
    (
        "table",
        "merge the outcomes into conforming and nonconforming and use `family: binomial`",
    ),
];

/// The nearest thing that works for a family that is only known by name.
pub fn not_yet(family: &str) -> Option<&'static str> {
    NOT_YET
        .iter()
        .find(|(name, _)| *name == family)
        .map(|(_, instead)| *instead)
}
