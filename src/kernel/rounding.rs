//! Rounding against the plan. A double is an exact binary fraction; it is expanded exactly and cut towards the side that
//! does not flatter: risks up, powers down. Nothing here passes through floating-point formatting.

use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{One, Pow, Signed, Zero};

use crate::kernel::exact::Exact;

/// To which side a figure is cut.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Toward {
    /// To the next decimal at or above: for risks.
    Up,
    /// To the next decimal at or below: for powers.
    Down,
    /// To the nearest, halves away from zero: for places on an axis, which neither flatter nor warn.
    Nearest,
}

/// More places than a reader can bear: a figure that still cannot be told from its limit is printed as the limit, which
/// it was proved to keep.
const MOST_PLACES: u32 = 9;

/// Probabilities below this, or as near to 1, are printed as bounds: `< 0.0001 %`, `> 99.9999 %`.
fn negligible() -> Exact {
    Exact::fraction(1, 1_000_000).unwrap_or_else(Exact::zero)
}

/// A decimal with a fixed number of places.
///
/// ```
/// use assize::kernel::exact::Exact;
/// use assize::kernel::rounding::{Toward, fixed};
/// let third = Exact::fraction(1, 3).unwrap();
/// assert_eq!(fixed(&third, 3, Toward::Up), "0.334");
/// assert_eq!(fixed(&third, 3, Toward::Down), "0.333");
/// ```
pub fn fixed(value: &Exact, places: u32, toward: Toward) -> String {
    place_point(&scaled(value, places, toward), places)
}

/// `value · 10^places` cut to a whole number.
fn scaled(value: &Exact, places: u32, toward: Toward) -> BigInt {
    let ratio = value.as_rational();
    let shifted = ratio.numer() * BigInt::from(10).pow(places);
    match toward {
        Toward::Up => shifted.div_ceil(ratio.denom()),
        Toward::Down => shifted.div_floor(ratio.denom()),
        Toward::Nearest => {
            let doubled: BigInt = shifted.abs() * 2 + ratio.denom();
            let magnitude = doubled.div_floor(&(ratio.denom() * 2));
            if shifted.is_negative() {
                -magnitude
            } else {
                magnitude
            }
        }
    }
}

fn place_point(scaled: &BigInt, places: u32) -> String {
    let sign = if scaled.is_negative() { "-" } else { "" };
    let digits = scaled.abs().to_string();
    let padded = format!("{digits:0>width$}", width = places as usize + 1);
    let (whole, fraction) = padded.split_at(padded.len() - places as usize);
    if fraction.is_empty() {
        format!("{sign}{whole}")
    } else {
        format!("{sign}{whole}.{fraction}")
    }
}

/// Places needed so that `digits` significant digits of a value are shown.
fn places_for(value: &Exact, digits: u32) -> u32 {
    let mut magnitude = value.as_rational().abs();
    if magnitude.is_zero() {
        return 0;
    }
    let ten = BigInt::from(10);
    let mut places = digits.saturating_sub(1);
    while magnitude < One::one() && places < 400 {
        magnitude *= &ten;
        places += 1;
    }
    while magnitude >= num_rational::BigRational::from_integer(ten.clone()) && places > 0 {
        magnitude /= &ten;
        places -= 1;
    }
    places
}

/// A decimal with so many significant digits at least; whole numbers keep all of theirs. Exact values lose their
/// trailing zeros.
pub fn significant(value: &Exact, digits: u32, toward: Toward) -> String {
    trimmed(value, places_for(value, digits), toward)
}

/// Fixed places, but an exact value without its trailing zeros: `50`, not `50.00`.
fn trimmed(value: &Exact, places: u32, toward: Toward) -> String {
    let text = fixed(value, places, toward);
    let exact = text.parse::<Exact>().is_ok_and(|shown| shown == *value);
    if exact && text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

fn in_percent(probability: &Exact) -> Exact {
    probability * &Exact::from(100u64)
}

/// A risk in per cent, rounded up.
pub fn risk(probability: f64) -> String {
    finite(probability).map_or_else(unknown, |exact| risk_exact(&exact, None))
}

/// A risk that was proved to be at most a stated limit: rounded up, with as many digits as it takes not to print a risk
/// below its limit as the limit, and never above it. The upper end of an enclosure may pass the limit by its last digit.
pub fn risk_within(probability: f64, limit: f64) -> String {
    match (finite(probability), as_written(limit)) {
        (Some(exact), Some(limit)) => risk_exact(&exact.min(limit.clone()), Some(&limit)),
        _ => unknown(),
    }
}

fn risk_exact(probability: &Exact, limit: Option<&Exact>) -> String {
    if probability.is_zero() {
        return "0 %".to_owned();
    }
    if *probability < negligible() {
        return "< 0.0001 %".to_owned();
    }
    let percent = in_percent(probability);
    let mut places = places_for(&percent, 3).max(2);
    let below = limit.filter(|limit| probability < limit).map(in_percent);
    if let Some(below) = below {
        while places < MOST_PLACES
            && reaches(&fixed(&percent, places, Toward::Up), &below, |a, b| a >= b)
        {
            places += 1;
        }
        if reaches(&fixed(&percent, places, Toward::Up), &below, |a, b| a >= b) {
            return format!("{below} %");
        }
    }
    format!("{} %", trimmed(&percent, places, Toward::Up))
}

/// A power in per cent, rounded down: as many digits as it takes to tell it from certainty.
pub fn power(probability: f64) -> String {
    finite(probability).map_or_else(unknown, |exact| power_exact(&exact, None))
}

/// A power that was proved to be at least a stated one: rounded down, with as many digits as it takes not to print it
/// below.
pub fn power_required(probability: f64, required: f64) -> String {
    match (finite(probability), as_written(required)) {
        (Some(exact), Some(required)) => power_exact(&exact.max(required.clone()), Some(&required)),
        _ => unknown(),
    }
}

fn power_exact(probability: &Exact, required: Option<&Exact>) -> String {
    let short = &Exact::one() - probability;
    if short.is_zero() {
        return "100 %".to_owned();
    }
    if short < negligible() && !short.is_negative() {
        return "> 99.9999 %".to_owned();
    }
    let percent = in_percent(probability);
    let mut places = places_for(&in_percent(&short), 2)
        .max(places_for(&percent, 3))
        .clamp(2, 8);
    if let Some(required) = required.filter(|required| probability >= required) {
        let required = in_percent(required);
        while places < MOST_PLACES
            && reaches(&fixed(&percent, places, Toward::Down), &required, |a, b| {
                a < b
            })
        {
            places += 1;
        }
        if reaches(&fixed(&percent, places, Toward::Down), &required, |a, b| {
            a < b
        }) {
            return format!("{required} %");
        }
    }
    format!("{} %", trimmed(&percent, places, Toward::Down))
}

fn reaches(text: &str, limit: &Exact, compare: impl Fn(&Exact, &Exact) -> bool) -> bool {
    text.parse::<Exact>()
        .is_ok_and(|shown| compare(&shown, limit))
}

/// `1 − probability`, exactly; the complement of a power is a risk and the other way round.
pub fn complement(probability: f64) -> Option<Exact> {
    finite(probability).map(|exact| &Exact::one() - &exact)
}

/// The risk of not rejecting where the power is known, rounded up.
pub fn risk_from_power(power: f64) -> String {
    complement(power).map_or_else(unknown, |exact| risk_exact(&exact, None))
}

/// The same where the power was proved to meet a requirement: never printed as more than the requirement allows.
pub fn risk_from_power_within(power: f64, at_least: f64) -> String {
    match (complement(power), as_written(at_least)) {
        (Some(risk), Some(required)) => {
            let allowed = &Exact::one() - &required;
            risk_exact(&risk.min(allowed.clone()), Some(&allowed))
        }
        _ => unknown(),
    }
}

/// The confidence that belongs to a size, rounded down.
pub fn confidence_from_size(size: f64) -> String {
    complement(size).map_or_else(unknown, |exact| power_exact(&exact, None))
}

/// Both ends of an enclosure as decimals of twelve significant digits, the lower rounded down and the upper rounded up.
pub fn enclosure(lower: f64, upper: f64) -> String {
    format!("{} to {}", end(lower, Toward::Down), end(upper, Toward::Up))
}

fn end(value: f64, toward: Toward) -> String {
    let Some(exact) = finite(value) else {
        return unknown();
    };
    let (mantissa, exponent) = normalised(&exact);
    if exponent < -6 {
        format!("{}e{exponent}", significant(&mantissa, 12, toward))
    } else {
        significant(&exact, 12, toward)
    }
}

/// A value as a number in [1, 10) and a power of ten; zero as zero.
fn normalised(value: &Exact) -> (Exact, i32) {
    let ten = BigInt::from(10);
    let mut mantissa = value.as_rational().clone();
    let mut exponent = 0;
    if mantissa.is_zero() {
        return (Exact::zero(), 0);
    }
    while mantissa.abs() < One::one() {
        mantissa *= &ten;
        exponent -= 1;
    }
    while mantissa.abs() >= num_rational::BigRational::from_integer(ten.clone()) {
        mantissa /= &ten;
        exponent += 1;
    }
    (Exact::from_rational(mantissa), exponent)
}

/// A probability to the nearest tenth of a per cent, for descriptions of a picture.
pub fn nearest(probability: f64) -> String {
    finite(probability).map_or_else(unknown, |exact| {
        format!("{} %", fixed(&in_percent(&exact), 1, Toward::Nearest))
    })
}

/// An expected number of units to one place: the nearest where both bounds agree on it, else the upper rounded up.
pub fn expected_amount(lower: f64, upper: f64) -> String {
    let (Some(lower), Some(upper)) = (finite(lower), finite(upper)) else {
        return unknown();
    };
    let nearest = fixed(&upper, 1, Toward::Nearest);
    if fixed(&lower, 1, Toward::Nearest) == nearest {
        nearest
    } else {
        fixed(&upper, 1, Toward::Up)
    }
}

/// A relative difference or width: two significant digits, rounded up, with a power of ten.
pub fn relative(value: f64) -> String {
    let Some(exact) = finite(value) else {
        return unknown();
    };
    if exact.is_zero() {
        return "0".to_owned();
    }
    let (mantissa, exponent) = normalised(&exact);
    format!("{}e{exponent}", significant(&mantissa, 2, Toward::Up))
}

/// The exact decimal that a double was written as: the shortest one that reads back as this double.
pub fn as_written(value: f64) -> Option<Exact> {
    value
        .is_finite()
        .then(|| format!("{value}"))
        .and_then(|text| text.parse().ok())
}

fn finite(value: f64) -> Option<Exact> {
    Exact::from_f64(value)
}

fn unknown() -> String {
    "not finite".to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn shown(text: &str) -> Exact {
        text.trim_end_matches(" %")
            .trim_start_matches(['<', '>', ' '])
            .parse()
            .unwrap()
    }

    proptest! {
        #[test]
        fn printed_risks_are_never_below_the_risk(value in 0.0f64..=1.0) {
            let exact = in_percent(&Exact::from_f64(value).unwrap());
            prop_assert!(shown(&risk(value)) >= exact);
            prop_assert!(shown(&power(value)) <= exact);
        }

        #[test]
        fn small_risks_too(exponent in 1i32..300, digits in 1.0f64..10.0) {
            let value: f64 = format!("{digits}e-{exponent}").parse().unwrap();
            let exact = in_percent(&Exact::from_f64(value).unwrap());
            prop_assert!(shown(&risk(value)) >= exact);
            prop_assert!(shown(&power(value)) <= exact);
            prop_assert!(shown(&power(1.0 - value)) <= in_percent(&Exact::from_f64(1.0 - value).unwrap()));
        }

        #[test]
        fn a_risk_below_its_limit_is_printed_below_it(percent in 1u32..5000, gap in 1e-8f64..1e-2) {
            let limit = f64::from(percent) / 10_000.0;
            let written = in_percent(&as_written(limit).unwrap());
            prop_assert!(shown(&risk_within(limit * (1.0 - gap), limit)) < written);
            for at_limit in [limit, limit.next_up(), limit.next_down()] {
                prop_assert_eq!(shown(&risk_within(at_limit, limit)), written.clone());
            }
        }

        #[test]
        fn a_power_that_suffices_is_printed_as_such(percent in 5000u32..9999, steps in 0u32..2000) {
            let required = f64::from(percent) / 10_000.0;
            let written = in_percent(&as_written(required).unwrap());
            let mut value = required;
            for _ in 0..steps { value = value.next_up(); }
            let printed = shown(&power_required(value, required));
            prop_assert!(printed >= written);
            prop_assert!(printed <= in_percent(&Exact::from_f64(value).unwrap()).max(written.clone()));
            let risk = shown(&risk_from_power_within(value, required));
            prop_assert!(risk <= &Exact::from(100u64) - &written);
        }
    }

    #[test]
    fn figures_a_reader_would_misread() {
        assert_eq!(risk_within(0.04968, 0.05), "4.97 %");
        assert_eq!(risk_within(0.049_999_9, 0.05), "4.99999 %");
        assert_eq!(risk(0.049_999_9), "5.00 %");
        assert_eq!(power(0.99999), "99.99900 %");
        assert_eq!(power(0.999_961), "99.9960 %");
        assert_eq!(power(1.0 - 1e-12), "> 99.9999 %");
        assert_eq!(power(1.0), "100 %");
        assert_eq!(risk(1e-9), "< 0.0001 %");
        assert_eq!(risk(0.0), "0 %");
        assert_eq!(power_required(0.946_117, 0.9), "94.61 %");
        assert_eq!(risk(0.5), "50 %");
    }

    #[test]
    fn enclosures_open_outwards() {
        assert_eq!(enclosure(0.25, 0.25), "0.25 to 0.25");
        let third = 1.0 / 3.0;
        assert_eq!(enclosure(third, third), "0.333333333333 to 0.333333333334");
        assert_eq!(
            enclosure(1e-300, 1e-300),
            "1.00000000000e-300 to 1.00000000001e-300"
        );
    }

    #[test]
    fn halves_go_away_from_zero() {
        let half = Exact::fraction(5, 2).unwrap();
        assert_eq!(fixed(&half, 0, Toward::Nearest), "3");
        assert_eq!(fixed(&-&half, 0, Toward::Nearest), "-3");
    }
}
