//! Exact numbers. A plan holds decimals, and `0.1 + 0.2 = 0.3` must hold in it: so every bound, level and requirement is a
//! rational number until the moment a probability is enclosed.

use std::fmt;
use std::str::FromStr;

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Pow, Signed, ToPrimitive, Zero};

/// An exact rational number.
#[derive(Clone, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Exact(BigRational);

/// Longest decimal text and largest decimal exponent read: far beyond any plan, and small enough that no input can make
/// the arithmetic slow.
const MOST_DIGITS: usize = 400;
const MOST_EXPONENT: i64 = 400;
/// Numbers other than zero lie between 10⁻⁶⁰ and 10⁶⁰ in magnitude: products and quotients of a few of them stay far
/// from the ends of the doubles.
const MOST_MAGNITUDE: u32 = 60;

/// Why a text is not a number.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum NotANumber {
    /// The text is not a decimal number.
    Malformed,
    /// The number has more digits or a larger exponent than any plan needs.
    TooLong,
}

impl Exact {
    /// Zero.
    pub fn zero() -> Self {
        Self(BigRational::zero())
    }

    /// One.
    pub fn one() -> Self {
        Self(BigRational::one())
    }

    /// A whole number.
    pub fn whole(value: i64) -> Self {
        Self(BigRational::from_integer(BigInt::from(value)))
    }

    /// `numerator / denominator`; zero denominators have no value.
    pub fn fraction(numerator: i64, denominator: i64) -> Option<Self> {
        (denominator != 0).then(|| {
            Self(BigRational::new(
                BigInt::from(numerator),
                BigInt::from(denominator),
            ))
        })
    }

    /// The exact value of a finite double; infinities and NaN have none.
    pub fn from_f64(value: f64) -> Option<Self> {
        BigRational::from_float(value).map(Self)
    }

    /// The rational number inside.
    pub fn as_rational(&self) -> &BigRational {
        &self.0
    }

    /// Wraps a rational number.
    pub fn from_rational(value: BigRational) -> Self {
        Self(value)
    }

    /// The nearest double (ties to even); overflow gives an infinity.
    pub fn to_f64(&self) -> f64 {
        self.0.to_f64().unwrap_or(f64::NAN)
    }

    /// The whole number, if it is one and fits.
    pub fn to_u64(&self) -> Option<u64> {
        self.0
            .is_integer()
            .then(|| self.0.to_integer().to_u64())
            .flatten()
    }

    /// Whether it is a whole number.
    pub fn is_whole(&self) -> bool {
        self.0.is_integer()
    }

    /// Whether it is negative.
    pub fn is_negative(&self) -> bool {
        self.0.is_negative()
    }

    /// Whether it is zero.
    pub fn is_zero(&self) -> bool {
        self.0.is_zero()
    }

    /// The largest whole number not above it.
    pub fn floor(&self) -> Self {
        Self(self.0.floor())
    }

    /// The smallest whole number not below it.
    pub fn ceil(&self) -> Self {
        Self(self.0.ceil())
    }

    /// The quotient; division by zero has no value.
    pub fn checked_div(&self, other: &Self) -> Option<Self> {
        (!other.is_zero()).then(|| Self(&self.0 / &other.0))
    }

    /// The number half way between two.
    pub fn midpoint(&self, other: &Self) -> Self {
        Self((&self.0 + &other.0) / BigInt::from(2))
    }
}

impl From<u64> for Exact {
    fn from(value: u64) -> Self {
        Self(BigRational::from_integer(BigInt::from(value)))
    }
}

macro_rules! operation {
    ($name:ident, $method:ident, $operator:tt) => {
        impl std::ops::$name<&Exact> for &Exact {
            type Output = Exact;
            fn $method(self, other: &Exact) -> Exact {
                Exact(&self.0 $operator &other.0)
            }
        }
    };
}
operation!(Add, add, +);
operation!(Sub, sub, -);
operation!(Mul, mul, *);

impl std::ops::Neg for &Exact {
    type Output = Exact;
    fn neg(self) -> Exact {
        Exact(-&self.0)
    }
}

/// Reads a decimal number (`12`, `-0.05`, `1e-6`, `.5`), optionally followed by `%` or `ppm`. No digit is lost.
impl FromStr for Exact {
    type Err = NotANumber;

    fn from_str(text: &str) -> Result<Self, NotANumber> {
        let text = text.trim();
        let (number, scale) = if let Some(rest) = text.strip_suffix('%') {
            (rest.trim_end(), 100)
        } else if let Some(rest) = text.strip_suffix("ppm") {
            (rest.trim_end(), 1_000_000)
        } else {
            (text, 1)
        };
        let value = decimal(number)? / BigInt::from(scale);
        let most = BigRational::from_integer(BigInt::from(10).pow(MOST_MAGNITUDE));
        let magnitude = value.abs();
        if !magnitude.is_zero() && (magnitude > most || magnitude.recip() > most) {
            return Err(NotANumber::TooLong);
        }
        Ok(Self(value))
    }
}

fn decimal(text: &str) -> Result<BigRational, NotANumber> {
    if text.len() > MOST_DIGITS {
        return Err(NotANumber::TooLong);
    }
    let (mantissa, exponent) = match text.find(['e', 'E']) {
        Some(at) => {
            let exponent: i64 = text[at + 1..].parse().map_err(|_| NotANumber::Malformed)?;
            (&text[..at], exponent)
        }
        None => (text, 0),
    };
    if exponent.abs() > MOST_EXPONENT {
        return Err(NotANumber::TooLong);
    }
    let (negative, unsigned) = match mantissa.strip_prefix('-') {
        Some(rest) => (true, rest),
        None => (false, mantissa.strip_prefix('+').unwrap_or(mantissa)),
    };
    let (whole, fraction) = unsigned.split_once('.').unwrap_or((unsigned, ""));
    let digits = format!("{whole}{fraction}");
    if digits.is_empty() || !digits.bytes().all(|b| b.is_ascii_digit()) {
        return Err(NotANumber::Malformed);
    }
    let magnitude: BigInt = digits.parse().map_err(|_| NotANumber::Malformed)?;
    let signed = if negative { -magnitude } else { magnitude };
    let shift = exponent - fraction.len() as i64;
    let power = BigInt::from(10).pow(shift.unsigned_abs());
    Ok(if shift >= 0 {
        BigRational::from_integer(signed * power)
    } else {
        BigRational::new(signed, power)
    })
}

/// Terminating decimals print as decimals, all others as `numerator/denominator`: what is printed is always the exact
/// value.
impl fmt::Display for Exact {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match decimal_places(self.0.denom()) {
            Some(0) => write!(out, "{}", self.0.numer()),
            Some(places) => {
                let scaled = (&self.0 * BigInt::from(10).pow(places)).to_integer();
                let digits = scaled.abs().to_string();
                let padded = format!("{digits:0>width$}", width = places as usize + 1);
                let (whole, fraction) = padded.split_at(padded.len() - places as usize);
                let sign = if self.is_negative() { "-" } else { "" };
                write!(out, "{sign}{whole}.{fraction}")
            }
            None => write!(out, "{}/{}", self.0.numer(), self.0.denom()),
        }
    }
}

impl fmt::Debug for Exact {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, out)
    }
}

/// How many decimal places `1/denominator` needs, if it terminates within what a reader can bear.
fn decimal_places(denominator: &BigInt) -> Option<u32> {
    let mut rest = denominator.clone();
    let mut twos = 0u32;
    let mut fives = 0u32;
    while (&rest % 2u8).is_zero() {
        rest /= 2u8;
        twos += 1;
    }
    while (&rest % 5u8).is_zero() {
        rest /= 5u8;
        fives += 1;
    }
    let places = twos.max(fives);
    (rest.is_one() && places <= MOST_EXPONENT as u32).then_some(places)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn exact(text: &str) -> Exact {
        text.parse().unwrap()
    }

    #[test]
    fn decimals_add_up() {
        assert_eq!(&exact("0.1") + &exact("0.2"), exact("0.3"));
    }

    #[test]
    fn percent_and_ppm_scale_exactly() {
        assert_eq!(exact("5 %"), Exact::fraction(1, 20).unwrap());
        assert_eq!(exact("1350ppm"), Exact::fraction(27, 20_000).unwrap());
        assert_eq!(exact("2.5e-3"), exact("0.0025"));
    }

    #[test]
    fn prints_what_it_is() {
        for text in ["0.05", "-12.5", "0", "1000000", "0.000123"] {
            assert_eq!(exact(text).to_string(), text);
        }
        assert_eq!(Exact::fraction(11, 240).unwrap().to_string(), "11/240");
    }

    #[test]
    fn refuses_what_is_no_number() {
        for text in [
            "", ".", "-", "1e", "nan", "inf", "1_000", "0x10", "1..2", "١",
        ] {
            assert_eq!(text.parse::<Exact>(), Err(NotANumber::Malformed), "{text}");
        }
        assert_eq!("1e999".parse::<Exact>(), Err(NotANumber::TooLong));
        assert_eq!("1e-61".parse::<Exact>(), Err(NotANumber::TooLong));
        assert_eq!("9".repeat(500).parse::<Exact>(), Err(NotANumber::TooLong));
    }
}
