//! A smooth line through computed points. The points are figures of the record; what lies between two of them is drawn,
//! not computed, and never leaves the rectangle that the two span: M. Steffen, "A simple method for monotonic
//! interpolation in one dimension", Astronomy and Astrophysics 239 (1990) 443–450.

use super::scale::coordinate;

/// A place on paper.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Place {
    /// To the right.
    pub x: f64,
    /// Downwards.
    pub y: f64,
}

/// The path of a smooth line; a single place gives a line of no length.
pub fn path(places: &[Place]) -> String {
    let Some(first) = places.first() else {
        return String::new();
    };
    let mut out = format!("M{} {}", coordinate(first.x), coordinate(first.y));
    let slopes = slopes(places);
    for (pair, slope) in places.windows(2).zip(slopes.windows(2)) {
        let [from, to] = pair else { continue };
        let [leaving, arriving] = slope else { continue };
        let third = (to.x - from.x) / 3.0;
        out.push_str(&format!(
            "C{} {} {} {} {} {}",
            coordinate(from.x + third),
            coordinate(from.y + leaving * third),
            coordinate(to.x - third),
            coordinate(to.y - arriving * third),
            coordinate(to.x),
            coordinate(to.y)
        ));
    }
    out
}

/// The slope at each place, chosen so that no overshoot is possible.
fn slopes(places: &[Place]) -> Vec<f64> {
    let widths: Vec<f64> = places
        .windows(2)
        .map(|pair| pair[1].x - pair[0].x)
        .collect();
    let secants: Vec<f64> = places
        .windows(2)
        .zip(&widths)
        .map(|(pair, width)| {
            if *width > 0.0 {
                (pair[1].y - pair[0].y) / width
            } else {
                0.0
            }
        })
        .collect();
    (0..places.len())
        .map(|at| {
            let before = at.checked_sub(1).and_then(|at| secants.get(at));
            match (before, secants.get(at)) {
                (Some(before), Some(after)) => inner(*before, *after, widths[at - 1], widths[at]),
                (Some(only), None) | (None, Some(only)) => *only,
                (None, None) => 0.0,
            }
        })
        .collect()
}

fn inner(before: f64, after: f64, width_before: f64, width_after: f64) -> f64 {
    if before * after <= 0.0 {
        return 0.0;
    }
    let parabola = (before * width_after + after * width_before) / (width_before + width_after);
    let size = before.abs().min(after.abs()).min(0.5 * parabola.abs());
    2.0 * size.copysign(before)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        /// Between two places the control points stay between their heights: so does the line.
        #[test]
        fn lines_never_overshoot(heights in proptest::collection::vec(0.0f64..300.0, 2..12)) {
            let places: Vec<Place> = heights.iter().enumerate().map(|(at, y)| Place { x: at as f64 * 10.0, y: *y }).collect();
            for (pair, slope) in places.windows(2).zip(slopes(&places).windows(2)) {
                let third = (pair[1].x - pair[0].x) / 3.0;
                let (low, high) = (pair[0].y.min(pair[1].y) - 1e-9, pair[0].y.max(pair[1].y) + 1e-9);
                let controls = [pair[0].y + slope[0] * third, pair[1].y - slope[1] * third];
                prop_assert!(controls.iter().all(|y| (low..=high).contains(y)), "{controls:?}");
            }
        }
    }

    #[test]
    fn a_path_goes_through_its_places() {
        let places = [Place { x: 0.0, y: 1.0 }, Place { x: 3.0, y: 4.0 }];
        assert_eq!(path(&places), "M0 1C1 2 2 3 3 4");
        assert_eq!(path(&[]), "");
    }
}
