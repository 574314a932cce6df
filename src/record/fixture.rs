//! Records made by hand for tests. Their figures were computed with SciPy 1.17.1 (`scipy.stats.binom`, double
//! precision, `binom.cdf(1, 93, p)`); the envelope adds the boundary term with the weight that brings the size to the
//! level. The ends of an enclosure are the neighbouring doubles.

use std::collections::BTreeMap;

use super::*;

/// p, probability of at most 1 nonconforming among 93, envelope at level 0.05.
const POUCHES: [(f64, f64, f64); 21] = [
    (0.0, 1.0, 1.0),
    (0.005, 0.9206112641191568, 0.920627592871434),
    (0.01, 0.7616213883302889, 0.7616626850306213),
    (0.015, 0.5925297532126172, 0.5925883659679004),
    (0.02, 0.44270793246058304, 0.44277350855135456),
    (0.025, 0.321320611020858, 0.3213849408932337),
    (0.03, 0.22813262485286645, 0.22819064555386123),
    (0.035, 0.15915682929403752, 0.15920617328208966),
    (0.04, 0.10944584853946919, 0.1094860197420512),
    (0.045, 0.07434868724439184, 0.07438029869937167),
    (0.05, 0.04997579524261633, 0.05),
    (0.055, 0.03328120230092338, 0.03329932123301208),
    (0.06, 0.021979111232077415, 0.021992417302641096),
    (0.065, 0.014405343641460337, 0.014414955247166576),
    (0.07, 0.009375710794123497, 0.009382553959606436),
    (0.075, 0.006062705928301636, 0.006067515792890335),
    (0.08, 0.003896605087624066, 0.003899946921878598),
    (0.085, 0.0024900567166597156, 0.002492354293555538),
    (0.09, 0.0015825450059744105, 0.0015841094656155335),
    (0.095, 0.0010005256887991294, 0.001001581486135843),
    (0.1, 0.0006293772495549496, 0.0006300838615457185),
];

fn at(value: f64) -> Point {
    BTreeMap::from([("p".to_owned(), value)])
}

fn around(value: f64, risk: bool) -> Bounds {
    let (lower, upper) = (value.next_down().max(0.0), value.next_up().min(1.0));
    Bounds {
        value: if risk { upper } else { lower },
        lower,
        upper,
    }
}

fn row((p, rejects, envelope): (f64, f64, f64)) -> PowerRow {
    let null = p >= 0.05;
    let bounds = around(rejects, null);
    PowerRow {
        at: at(p),
        subset: if null { "null" } else { "alternative" }.to_owned(),
        value: bounds.value,
        lower: bounds.lower,
        upper: bounds.upper,
        envelope: Some(envelope),
        lot_accepted: bounds,
        expected_sample_size: None,
    }
}

/// Seal integrity of pouches: 93 units, at most 1 with an open seal, the null is "5 % or more".
pub fn pouches() -> Record {
    let size = around(0.049_975_795_242_616_33, true);
    let attained = around(0.946_117_841_626_022_6, false);
    let text = "assize: 1\nplan:\n  id: TP-0142\n".to_owned();
    Record {
        assize: Program {
            version: "0.1.0".to_owned(),
            language: 1,
        },
        plan: PlanIdentity {
            id: "TP-0142".to_owned(),
            revision: "B".to_owned(),
            title: "Seal integrity of pouch lots".to_owned(),
            sha256: sha256_hex(text.as_bytes()),
            text,
        },
        characteristic: Characteristic {
            name: "open seal".to_owned(),
            counts: Some("pouches with an open seal".to_owned()),
            measures: None,
            unit: Some("pouch".to_owned()),
            hazard: Some("loss of sterile barrier".to_owned()),
        },
        problem: ProblemStatement {
            family: "binomial".to_owned(),
            parameter: "p".to_owned(),
            parameter_space: "0 <= p <= 1".to_owned(),
            null_subset: "0.05 <= p <= 1".to_owned(),
            alternative: "0 <= p < 0.05".to_owned(),
            alpha: 0.05,
            shape: "one-sided".to_owned(),
        },
        design: Design {
            kind: "single".to_owned(),
            sample_size: Some(Amount::Count(93)),
            stop_at_nonconforming: None,
            lot_size: None,
            stages: Vec::new(),
        },
        critical_region: CriticalRegion {
            statistic: "x".to_owned(),
            reject_when: "x <= 1".to_owned(),
            retain_when: "x >= 2".to_owned(),
            intervals: vec![CountRange {
                from: Some(0),
                to: Some(1),
            }],
            source: "derived".to_owned(),
        },
        optimality: Optimality {
            claim: "uniformly most powerful".to_owned(),
            theorem: "Karlin and Rubin (1956)".to_owned(),
            scope: "Among tests of level equal to the size of this one.".to_owned(),
        },
        size: Size {
            value: size.value,
            lower: size.lower,
            upper: size.upper,
            at: at(0.05),
            attained: true,
            how:
                "The likelihood ratio is monotone in x, so the rejection probability falls with p."
                    .to_owned(),
            within_level: true,
        },
        power: POUCHES.into_iter().map(row).collect(),
        requirements: vec![RequirementResult {
            where_set: "0 <= p <= 0.004".to_owned(),
            at_least: 0.9,
            attained,
            at: at(0.004),
            how: "The power falls with p.".to_owned(),
            met: true,
            because: Some("process average of the last year".to_owned()),
        }],
        acceptance: BTreeMap::from([
            (
                "probability_0.95_at".to_owned(),
                at(0.003_834_438_530_035_643_3),
            ),
            (
                "probability_0.50_at".to_owned(),
                at(0.017_981_081_133_262_015),
            ),
            (
                "probability_0.10_at".to_owned(),
                at(0.041_180_501_017_939_95),
            ),
        ]),
        sample_size_search: Some(SampleSizeSearch {
            smallest: Amount::Count(93),
            every_n_from: Some(Amount::Count(93)),
            proved_to: None,
            every_n_how: None,
            one_less_fails_because:
                "with 92 units the region x <= 1 has a size of 0.05214, more than 0.05".to_owned(),
        }),
        rectification: None,
        retest: None,
        inspection: None,
        decision: Decision {
            accept_when: "null_rejected".to_owned(),
            if_rejected: Some("Release the lot.".to_owned()),
            if_retained: Some("Hold the lot and open a nonconformance.".to_owned()),
        },
        cautions: vec![Caution {
            rule: Some("L02".to_owned()),
            grade: "E".to_owned(),
            code: "no-method".to_owned(),
            message: "Nothing says how a pouch is judged.".to_owned(),
        }],
        waivers: vec![Waiver {
            rule: "L19".to_owned(),
            because: "A machine judges.".to_owned(),
            applies: true,
        }],
        declared: declared(),
        cross_check: CrossCheck {
            second_route: "statrs 0.19, binomial distribution function".to_owned(),
            largest_relative_difference: 3.1e-14,
            figures: 43,
            widest_relative_enclosure: 4.4e-16,
            tolerance: 1e-9,
            rests_on: "IEEE addition and multiplication with counted rounding errors".to_owned(),
        },
        seal: None,
    }
}

fn declared() -> serde_json::Map<String, serde_json::Value> {
    let blocks = serde_json::json!({
        "plan": {
            "purpose": "Shows that the sealing line keeps the sterile barrier.\n\n- one lot at a time",
            "date": "2026-11-30",
            "prepared_by": "Packaging engineering",
            "supersedes": {"revision": "A"},
        },
        "requirement": {"id": "PKG-17", "text": "Seals shall be closed all round."},
        "population": {"scope": "lot", "lot": "One day of one sealing line."},
        "sampling": {"how": "At random from a numbered list."},
        "measurement": {"method": "TM-031, dye penetration"},
        "assumptions": [
            {"assumption": "Seals fail independently.", "evidence": "Control chart of 2026.", "if_it_fails": "Sample each head."},
            {"assumption": "Dye finds every open seal."},
        ],
        "rationale": "Severity class 3 asks for 95 % against 5 %.",
        "references": ["RM-9, risk analysis"],
        "approvals": [{"role": "Quality unit", "name": "", "meaning": "Approved for use"}],
        "change": {"what": "At most 1 instead of 0.", "why": "Too many good lots failed.", "data": "before"},
    });
    match blocks {
        serde_json::Value::Object(map) => map,
        _ => serde_json::Map::new(),
    }
}
