//! What the sentences are about: the counted units, the parameter, and how its values are said.

use crate::kernel::exact::Exact;
use crate::record::{Amount, CountRange, Record};
use crate::report::escape::inline;
use crate::report::round::{Toward, as_written, significant};

use super::quantity::{amount_text, fraction, fraction_rounded, grouped, numbers, plain, plural};
use super::sets::{End, Piece, Speech, pieces};

/// What a parameter value means.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Meaning {
    /// A fraction of the units of a process.
    Fraction,
    /// A fraction of the units of one lot.
    FractionOfLot,
    /// A number of units in one lot.
    CountInLot,
    /// A mean number per unit of opportunity.
    Rate,
    /// Something this edition has no sentence for.
    Other,
}

/// The nouns of a plan.
pub struct Subject<'a> {
    record: &'a Record,
    /// What the parameter means.
    pub meaning: Meaning,
}

impl<'a> Subject<'a> {
    /// The subject of a record.
    pub fn new(record: &'a Record) -> Self {
        let meaning = match (
            record.problem.family.as_str(),
            record.problem.parameter.as_str(),
        ) {
            ("binomial" | "negative_binomial", "p") => Meaning::Fraction,
            ("hypergeometric", "D") => Meaning::CountInLot,
            ("hypergeometric", "p") => Meaning::FractionOfLot,
            ("poisson", _) => Meaning::Rate,
            _ => Meaning::Other,
        };
        Self { record, meaning }
    }

    /// What is counted, in the plural: `pouches with an open seal`.
    pub fn counted(&self) -> String {
        match &self.record.characteristic.counts {
            Some(counts) => inline(counts),
            None if self.meaning == Meaning::Rate => format!("occurrences of {}", self.name()),
            None => format!("units with {}", self.name()),
        }
    }

    /// The name of the characteristic.
    pub fn name(&self) -> String {
        inline(&self.record.characteristic.name)
    }

    /// One of what is counted, if it can be told from the plural: `pouch with an open seal`.
    pub fn counted_one(&self) -> Option<String> {
        let counts = self.record.characteristic.counts.as_deref()?;
        let unit = self.record.characteristic.unit.as_deref()?;
        let rest = counts.strip_prefix(plural(unit)?.as_str())?;
        // `hubs that leak` would want another verb.
        let has_verb = [" that ", " which ", " who "]
            .iter()
            .any(|word| rest.starts_with(word));
        ((rest.is_empty() || rest.starts_with(' ')) && !has_verb)
            .then(|| inline(&format!("{unit}{rest}")))
    }

    /// `no pouch with an open seal`, `1 pouch …`, `2 pouches …`.
    pub fn some_counted(&self, number: u64) -> String {
        match (number, self.counted_one()) {
            (0, Some(one)) => format!("no {one}"),
            (0, None) => format!("no {}", self.counted()),
            (1, Some(one)) => format!("1 {one}"),
            (1, None) => format!("1 of the {}", self.counted()),
            _ => format!("{} {}", grouped(number), self.counted()),
        }
    }

    /// Units of test: `93 pouches`, `34 m²`.
    pub fn units(&self, amount: Amount) -> String {
        let number = amount_text(amount);
        let Some(unit) = self.record.characteristic.unit.as_deref() else {
            return match self.meaning {
                Meaning::Rate => format!("{number} units of opportunity"),
                _ if number == "1" => "1 unit".to_owned(),
                _ => format!("{number} units"),
            };
        };
        // Short units of measure (m, kg, mL) have no plural.
        let measure = self.meaning == Meaning::Rate && unit.chars().count() < 4;
        if number == "1" || measure {
            return format!("{number} {}", inline(unit));
        }
        match plural(unit) {
            Some(many) => format!("{number} {}", inline(&many)),
            None if self.meaning == Meaning::Rate => format!("{number} {}", inline(unit)),
            None => format!("{number} units ({})", inline(unit)),
        }
    }

    /// An outcome: `at most 1 pouch with an open seal is found`, `209 or more boards were inspected`.
    pub fn found(&self, ranges: &[CountRange]) -> String {
        let inspected = self.record.critical_region.statistic == "n";
        let said: Vec<String> = ranges
            .iter()
            .map(|range| {
                if inspected {
                    numbers(*range)
                } else {
                    self.some(*range)
                }
            })
            .collect();
        let said = said.join(", or ");
        let one = matches!(
            ranges,
            [CountRange {
                from: None,
                to: Some(0 | 1)
            }] | [CountRange {
                from: Some(1),
                to: Some(1)
            }]
        ) && self.counted_one().is_some();
        if inspected {
            format!("{said} {} were inspected", self.unit_plural())
        } else {
            format!("{said} {} found", if one { "is" } else { "are" })
        }
    }

    fn some(&self, range: CountRange) -> String {
        match (range.from, range.to) {
            (None, Some(0)) => self.some_counted(0),
            (None, Some(1)) if self.counted_one().is_none() => format!("0 or 1 {}", self.counted()),
            (None, Some(most)) => format!("at most {}", self.some_counted(most)),
            (Some(from), Some(to)) if from == to => format!("exactly {}", self.some_counted(from)),
            _ => format!("{} {}", numbers(range), self.counted()),
        }
    }

    /// Units of test without a number: `pouches`.
    pub fn unit_plural(&self) -> String {
        self.record
            .characteristic
            .unit
            .as_deref()
            .and_then(plural)
            .map_or_else(|| "units".to_owned(), |many| inline(&many))
    }

    /// The parameter in words: `the fraction of pouches with an open seal`.
    pub fn parameter(&self) -> String {
        let counted = self.counted();
        match self.meaning {
            Meaning::Fraction => format!("the fraction of {counted}"),
            Meaning::FractionOfLot => format!("the fraction of {counted} in the lot"),
            Meaning::CountInLot => format!("the number of {counted} in the lot"),
            Meaning::Rate => match &self.record.characteristic.unit {
                Some(unit) => format!("the mean number of {counted} per {}", inline(unit)),
                None => format!("the mean number of {counted} per unit of opportunity"),
            },
            Meaning::Other => inline(&self.record.problem.parameter),
        }
    }

    /// A set as a clause: `the fraction of pouches with an open seal is 5 % or more`.
    pub fn clause(&self, set: &str) -> String {
        let value = |value: &Exact| self.value(value);
        let speech = Speech {
            value: &value,
            least: Some(Exact::zero()),
            greatest: self.greatest(),
            counted: self.meaning == Meaning::CountInLot,
        };
        match speech.set(set) {
            Some(said) => format!("{} is {said}", self.parameter()),
            None => format!("{} lies in `{set}`", self.parameter()),
        }
    }

    /// What is judged: the lot, or the process where the plan says that the claim is about the process.
    pub fn judged(&self) -> &'static str {
        let scope = self
            .record
            .declared
            .get("population")
            .and_then(|block| block.get("scope"));
        match scope.and_then(serde_json::Value::as_str) {
            Some("process") => "process",
            _ => "lot",
        }
    }

    /// Whether the parameter takes only so many values, evenly spaced.
    pub fn is_lattice(&self) -> bool {
        matches!(self.meaning, Meaning::CountInLot | Meaning::FractionOfLot)
    }

    /// The single end that separates a one-sided set from the rest: `5 %`.
    pub fn boundary(&self, set: &str) -> Option<String> {
        let inner = |end: &End, outermost: Option<Exact>| Some(&end.value) != outermost.as_ref();
        let all = pieces(set);
        let [Piece::Between(low, high)] = all.as_slice() else {
            return None;
        };
        let low = low.as_ref().filter(|end| inner(end, Some(Exact::zero())));
        let high = high.as_ref().filter(|end| inner(end, self.greatest()));
        match (low, high) {
            (Some(end), None) | (None, Some(end)) => Some(self.value_in_place(&end.value)),
            _ => None,
        }
    }

    fn greatest(&self) -> Option<Exact> {
        match self.meaning {
            Meaning::Fraction | Meaning::FractionOfLot => Some(Exact::one()),
            Meaning::CountInLot => self.record.design.lot_size.map(Exact::from),
            Meaning::Rate | Meaning::Other => None,
        }
    }

    /// A parameter value for people: `5 %`, `50 ppm`, `11 of 240 (4.58 %)`, `12`, `0.5`.
    pub fn value(&self, value: &Exact) -> String {
        match self.meaning {
            Meaning::Fraction => fraction(value),
            Meaning::FractionOfLot => match self.units_of_lot(value) {
                Some(of_lot) => format!("{of_lot} ({})", fraction(value)),
                None => fraction(value),
            },
            _ => plain(value),
        }
    }

    /// A value with where it is counted: `12 in the lot`, `0.5 per m²`.
    fn value_in_place(&self, value: &Exact) -> String {
        let said = self.value(value);
        match (self.meaning, &self.record.characteristic.unit) {
            (Meaning::CountInLot, _) => format!("{said} in the lot"),
            (Meaning::Rate, Some(unit)) => format!("{said} per {}", inline(unit)),
            _ => said,
        }
    }

    /// A point in symbols: `p = 5 %`.
    pub fn point(&self, value: f64) -> String {
        format!(
            "`{}` = {}",
            self.record.problem.parameter,
            self.figure(value)
        )
    }

    /// `11 of 240`, where a fraction of the lot is a whole number of units.
    fn units_of_lot(&self, value: &Exact) -> Option<String> {
        let lot = self.record.design.lot_size?;
        let count = (value * &Exact::from(lot)).to_u64()?;
        Some(format!("{} of {}", grouped(count), grouped(lot)))
    }

    /// A double of the record as the exact value that was meant.
    pub fn meant(&self, value: f64) -> Option<Exact> {
        if self.meaning == Meaning::FractionOfLot {
            // The record holds the double nearest to D/N; the lattice value itself was meant.
            let lot = Exact::from(self.record.design.lot_size?);
            let count = &Exact::from_f64(value)? * &lot;
            let nearest = (&count + &Exact::fraction(1, 2)?).floor();
            return nearest.checked_div(&lot);
        }
        as_written(value)
    }

    /// A parameter value of the record for people.
    ///
    /// The record holds infinities as the largest double.
    pub fn figure(&self, value: f64) -> String {
        match self.meant(value).filter(|_| value.abs() < f64::MAX) {
            Some(exact) => self.value(&exact),
            None if value > 0.0 => "∞".to_owned(),
            None => "−∞".to_owned(),
        }
    }

    /// A parameter value that was computed and not written, with four digits, cut to the stated side.
    pub fn computed(&self, value: f64, toward: Toward) -> String {
        let Some(exact) = self.meant(value) else {
            return self.figure(value);
        };
        match self.meaning {
            Meaning::Fraction => fraction_rounded(&exact, toward),
            Meaning::FractionOfLot | Meaning::CountInLot => self.value(&exact),
            _ => significant(&exact, 4, toward),
        }
    }
}

/// The tested coordinate of a point of the record.
pub fn coordinate(record: &Record, point: &crate::record::Point) -> Option<f64> {
    point
        .get(&record.problem.parameter)
        .or_else(|| point.values().next())
        .copied()
}
