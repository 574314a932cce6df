//! Single probabilities by Loader's saddle-point form ("Fast and Accurate Computation of Binomial Probabilities", 2000):
//! Stirling's formula with its error term, and deviances that do not cancel. Uses `libm` for logarithm and exponential.

use std::f64::consts::PI;

/// ln n! − ln(√(2πn)·(n/e)ⁿ) for n = 1 … 15, computed with mpmath 1.3 at 40 digits.
const STIRLING_ERRORS: [f64; 15] = [
    0.08106146679532726,
    0.0413406959554093,
    0.02767792568499834,
    0.020790672103765093,
    0.016644691189821193,
    0.013876128823070748,
    0.01189670994589177,
    0.010411265261972096,
    0.009255462182712733,
    0.00833056343336287,
    0.007573675487951841,
    0.00694284010720953,
    0.006408994188004207,
    0.0059513701127588475,
    0.005554733551962801,
];

/// The error of Stirling's formula, ln n! − ln(√(2πn)·(n/e)ⁿ), for n ≥ 1.
fn stirling_error(n: u64) -> f64 {
    if let Some(&known) = usize::try_from(n)
        .ok()
        .and_then(|n| STIRLING_ERRORS.get(n.wrapping_sub(1)))
    {
        return known;
    }
    // Bernoulli's series; from n = 16 on its first neglected term is below 1e-17.
    let n = n as f64;
    let square = n * n;
    let series = 1.0 / 12.0
        - (1.0 / 360.0
            - (1.0 / 1260.0
                - (1.0 / 1680.0 - (1.0 / 1188.0 - 691.0 / 360_360.0 / square) / square) / square)
                / square)
            / square;
    series / n
}

/// The deviance x·ln(x/m) + m − x for positive x and m, without cancellation near x = m.
fn deviance(x: f64, m: f64) -> f64 {
    let difference = x - m;
    if difference.abs() >= 0.1 * (x + m) {
        return x * libm::log(x / m) + m - x;
    }
    let v = difference / (x + m);
    let mut sum = difference * v;
    let mut term = 2.0 * x * v;
    let square = v * v;
    for j in 1..1000 {
        term *= square;
        let next = sum + term / f64::from(2 * j + 1);
        if next == sum {
            break;
        }
        sum = next;
    }
    sum
}

/// P(X = x) for X ~ Binomial(n, p), q = 1 − p given apart so that neither loses digits.
pub fn binomial(x: u64, n: u64, p: f64, q: f64) -> f64 {
    if x > n {
        return 0.0;
    }
    if p <= 0.0 || q <= 0.0 {
        let certain = if p <= 0.0 { 0 } else { n };
        return f64::from(u8::from(x == certain));
    }
    let whole = n as f64;
    if x == 0 {
        return libm::exp(
            whole
                * if p < 0.5 {
                    libm::log1p(-p)
                } else {
                    libm::log(q)
                },
        );
    }
    if x == n {
        return libm::exp(
            whole
                * if q < 0.5 {
                    libm::log1p(-q)
                } else {
                    libm::log(p)
                },
        );
    }
    let (hits, rest) = (x as f64, (n - x) as f64);
    let exponent = stirling_error(n)
        - stirling_error(x)
        - stirling_error(n - x)
        - deviance(hits, whole * p)
        - deviance(rest, whole * q);
    libm::exp(exponent) * (whole / (2.0 * PI * hits * rest)).sqrt()
}

/// P(X = x) for X ~ Poisson(mean).
pub fn poisson(x: u64, mean: f64) -> f64 {
    if mean <= 0.0 {
        return f64::from(u8::from(x == 0));
    }
    if x == 0 {
        return libm::exp(-mean);
    }
    let count = x as f64;
    libm::exp(-stirling_error(x) - deviance(count, mean)) / (2.0 * PI * count).sqrt()
}

/// P(X = x) for a sample of `sample` from a lot of `lot` with `nonconforming`: a quotient of three binomial
/// probabilities with the sampling fraction.
pub fn hypergeometric(x: u64, lot: u64, nonconforming: u64, sample: u64) -> f64 {
    let (rest, others) = (sample.checked_sub(x), lot - nonconforming);
    let Some(rest) = rest.filter(|&rest| rest <= others && x <= nonconforming) else {
        return 0.0;
    };
    let p = sample as f64 / lot as f64;
    let q = (lot - sample) as f64 / lot as f64;
    binomial(x, nonconforming, p, q) * binomial(rest, others, p, q) / binomial(sample, lot, p, q)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn close(value: f64, truth: f64) {
        assert!(
            (value / truth - 1.0).abs() < 2e-13,
            "{value:e} for {truth:e}"
        );
    }

    /// Values by mpmath 1.3 at 40 digits.
    #[test]
    fn terms_agree_with_mpmath() {
        close(binomial(1, 93, 0.05, 0.95), 0.041497758549672664);
        close(binomial(20, 1000, 0.02, 0.98), 0.08973706929554053);
        close(binomial(3, 7, 0.4, 0.6), 0.290304);
        close(binomial(500200, 1000000, 0.5, 0.5), 0.0007365401538234893);
        close(binomial(19000, 1000000, 0.02, 0.98), 1.5893186365450072e-14);
        close(binomial(90, 100, 0.1, 0.9), 6.035731698919778e-78);
        close(poisson(10, 17.0), 0.022999584406166344);
        close(poisson(3, 0.25), 0.00202812703924845);
        close(poisson(1000, 900.0), 5.9269532854189e-05);
        close(poisson(200, 20.0), 4.19972501133591e-124);
        close(hypergeometric(0, 240, 12, 52), 0.049325606755519454);
        close(hypergeometric(3, 1000, 50, 80), 0.2018324568527696);
        close(hypergeometric(40, 10000, 3000, 200), 0.00037473257304284496);
    }

    #[test]
    fn degenerate_parameters_are_certain() {
        assert_eq!(binomial(0, 5, 0.0, 1.0), 1.0);
        assert_eq!(binomial(5, 5, 1.0, 0.0), 1.0);
        assert_eq!(poisson(0, 0.0), 1.0);
        assert_eq!(hypergeometric(3, 10, 2, 5), 0.0);
    }
}
