//! Numbers as people read them.

use crate::kernel::exact::Exact;
use crate::record::{Amount, CountRange};
use crate::report::round::{Toward, as_written, significant};

/// A fraction in per cent, or in parts per million below 0.01 %.
pub fn fraction(value: &Exact) -> String {
    if !value.is_zero() && below(value, 1, 10_000) {
        format!("{} ppm", plain(&(value * &Exact::from(1_000_000u64))))
    } else {
        format!("{} %", plain(&(value * &Exact::from(100u64))))
    }
}

pub fn fraction_rounded(value: &Exact, toward: Toward) -> String {
    if !value.is_zero() && below(value, 1, 10_000) {
        format!(
            "{} ppm",
            significant(&(value * &Exact::from(1_000_000u64)), 4, toward)
        )
    } else {
        format!(
            "{} %",
            significant(&(value * &Exact::from(100u64)), 4, toward)
        )
    }
}

/// The exact decimal where it is short, else four digits.
pub fn plain(value: &Exact) -> String {
    let text = value.to_string();
    if text.contains('/') || text.len() > 10 {
        significant(value, 4, Toward::Nearest)
    } else if value.is_whole() {
        value.to_u64().map_or(text, grouped)
    } else {
        text
    }
}

pub fn below(value: &Exact, numerator: i64, denominator: i64) -> bool {
    Exact::fraction(numerator, denominator).is_some_and(|limit| *value < limit)
}

/// An amount of units.
pub fn amount_text(amount: Amount) -> String {
    match amount {
        Amount::Count(count) => grouped(count),
        Amount::Real(real) => {
            as_written(real).map_or_else(|| "∞".to_owned(), |exact| plain(&exact))
        }
    }
}

/// A whole number with thin groups of three from five digits on.
pub fn grouped(number: u64) -> String {
    let digits = number.to_string();
    if digits.len() < 5 {
        return digits;
    }
    let mut out = String::new();
    for (at, digit) in digits.chars().enumerate() {
        if at > 0 && (digits.len() - at).is_multiple_of(3) {
            out.push('\u{202F}');
        }
        out.push(digit);
    }
    out
}

pub fn numbers(range: CountRange) -> String {
    match (range.from, range.to) {
        (None, None) => "any number of".to_owned(),
        (None, Some(most)) => format!("{} or fewer", grouped(most)),
        (Some(least), None) => format!("{} or more", grouped(least)),
        (Some(from), Some(to)) if from == to => format!("exactly {}", grouped(from)),
        (Some(from), Some(to)) => format!("{} to {}", grouped(from), grouped(to)),
    }
}

/// The usual English plural of a one-word or compound noun; units with digits or signs have none.
pub fn plural(unit: &str) -> Option<String> {
    let plain = unit.len() > 1
        && unit
            .chars()
            .all(|c| c.is_alphabetic() || matches!(c, ' ' | '-'));
    if !plain {
        return None;
    }
    let sibilant = ["s", "x", "z", "ch", "sh"]
        .iter()
        .any(|end| unit.ends_with(end));
    if sibilant {
        return Some(format!("{unit}es"));
    }
    match unit.strip_suffix('y') {
        Some(stem) if !stem.ends_with(['a', 'e', 'i', 'o', 'u']) => Some(format!("{stem}ies")),
        _ => Some(format!("{unit}s")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn plurals() {
        for (one, many) in [
            ("pouch", "pouches"),
            ("unit", "units"),
            ("assembly", "assemblies"),
            ("tray", "trays"),
        ] {
            assert_eq!(plural(one).as_deref(), Some(many));
        }
        assert_eq!(plural("m²"), None);
        assert_eq!(plural("m"), None);
    }

    #[test]
    fn large_counts_are_grouped() {
        assert_eq!(grouped(1000), "1000");
        assert_eq!(grouped(60000), "60\u{202F}000");
        assert_eq!(grouped(1234567), "1\u{202F}234\u{202F}567");
    }

    #[test]
    fn fractions_for_people() {
        let value = |text: &str| fraction(&text.parse().unwrap());
        assert_eq!(value("0.05"), "5 %");
        assert_eq!(value("0.00005"), "50 ppm");
        assert_eq!(value("0.0002"), "0.02 %");
        assert_eq!(value("0"), "0 %");
    }
}
