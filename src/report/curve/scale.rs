//! From figures to places on paper: an axis, its ticks, and coordinates as text. Coordinates have one decimal and pass
//! through whole numbers, so that every platform writes the same bytes.

use crate::kernel::exact::Exact;
use crate::report::round::as_written;

/// A linear axis.
#[derive(Clone, Copy, Debug)]
pub struct Axis {
    least: f64,
    span: f64,
    start: f64,
    length: f64,
}

impl Axis {
    /// An axis on which `least` stands at `start` and `greatest` at `end`.
    pub fn new(least: f64, greatest: f64, start: f64, end: f64) -> Self {
        let span = greatest - least;
        Self {
            least,
            span: if span > 0.0 { span } else { 1.0 },
            start,
            length: end - start,
        }
    }

    /// The place of a value; values beyond the ends are put at the ends.
    pub fn place(&self, value: f64) -> f64 {
        let share = ((value - self.least) / self.span).clamp(0.0, 1.0);
        self.start + share * self.length
    }

    /// Whether a value lies between the ends.
    pub fn holds(&self, value: f64) -> bool {
        value >= self.least && value <= self.least + self.span
    }
}

/// A coordinate with one decimal.
pub fn coordinate(value: f64) -> String {
    let tenths = (value * 10.0).round();
    if tenths.is_nan() || tenths.abs() > 1e9 {
        return "0".to_owned();
    }
    let tenths = tenths as i64;
    let sign = if tenths < 0 { "-" } else { "" };
    let (whole, rest) = (tenths.abs() / 10, tenths.abs() % 10);
    match rest {
        0 => format!("{sign}{whole}"),
        _ => format!("{sign}{whole}.{rest}"),
    }
}

/// Round values between two ends, about as many as wanted: multiples of 1, 2 or 5 times a power of ten. On an axis of
/// whole numbers they are whole.
pub fn ticks(least: f64, greatest: f64, wanted: u64, whole: bool) -> Vec<Exact> {
    let (Some(least), Some(greatest)) = (as_written(least), as_written(greatest)) else {
        return Vec::new();
    };
    let Some(rough) = (&greatest - &least).checked_div(&Exact::from(wanted.max(1))) else {
        return Vec::new();
    };
    if rough <= Exact::zero() {
        return vec![least];
    }
    let mut step = round_step(&rough);
    if whole && step < Exact::one() {
        step = Exact::one();
    }
    let Some(first) = least.checked_div(&step).map(|steps| &steps.ceil() * &step) else {
        return Vec::new();
    };
    let mut found = Vec::new();
    let mut tick = first;
    while tick <= greatest && found.len() < 64 {
        found.push(tick.clone());
        tick = &tick + &step;
    }
    found
}

/// The least of 1, 2, 5 times a power of ten that is not below a value.
fn round_step(rough: &Exact) -> Exact {
    let ten = Exact::from(10u64);
    let mut power = Exact::one();
    while power > *rough {
        match power.checked_div(&ten) {
            Some(less) => power = less,
            None => break,
        }
    }
    while &power * &ten <= *rough {
        power = &power * &ten;
    }
    [1u64, 2, 5, 10]
        .into_iter()
        .map(|factor| &power * &Exact::from(factor))
        .find(|step| step >= rough)
        .unwrap_or(power)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn shown(least: f64, greatest: f64, whole: bool) -> Vec<String> {
        ticks(least, greatest, 6, whole)
            .iter()
            .map(ToString::to_string)
            .collect()
    }

    #[test]
    fn ticks_are_round() {
        assert_eq!(
            shown(0.0, 0.1, false),
            ["0", "0.02", "0.04", "0.06", "0.08", "0.1"]
        );
        assert_eq!(
            shown(0.0, 1.0, false),
            ["0", "0.2", "0.4", "0.6", "0.8", "1"]
        );
        assert_eq!(shown(0.0, 3.0, true), ["0", "1", "2", "3"]);
        assert_eq!(
            shown(0.0, 0.0003, false),
            [
                "0", "0.00005", "0.0001", "0.00015", "0.0002", "0.00025", "0.0003"
            ]
        );
        assert_eq!(shown(2.0, 2.0, false), ["2"]);
    }

    #[test]
    fn coordinates_have_one_decimal() {
        assert_eq!(coordinate(12.34), "12.3");
        assert_eq!(coordinate(-0.04), "0");
        assert_eq!(coordinate(-0.06), "-0.1");
        assert_eq!(coordinate(7.0), "7");
        assert_eq!(coordinate(f64::NAN), "0");
    }
}
