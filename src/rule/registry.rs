//! The rules, a line each. The numbers are those of the list of rules that `docs/rules.md` explains; a gap is a rule
//! that waits in [`WAITING`].

use super::{Rule, claim, conduct, figure, record_gaps};
use crate::language::diagnostic::CautionGrade::{Grave, Warning};

macro_rules! rules {
    ($($number:literal $grade:ident $code:literal $title:literal $find:path;)*) => {
        &[$(Rule { number: $number, grade: $grade, code: $code, title: $title, find: $find }),*]
    };
}

/// Every rule that is applied, in the order of their numbers.
pub const RULES: &[Rule] = rules! {
    "L01" Grave   "rationale-missing"             "Why this many units is said"                     record_gaps::rationale;
    "L02" Grave   "method-missing"                "How a unit is judged is said, and validated"     record_gaps::method;
    "L03" Grave   "given-region-above-level"      "A given region keeps the stated level"           figure::given_region;
    "L04" Grave   "power-not-required"            "The power is required somewhere"                 claim::power_required;
    "L05" Warning "acceptance-bounds-nothing"     "A validation states the quality it excludes"     claim::bounds_nothing;
    "L06" Warning "one-stream-for-a-process"      "A claim on a process covers its streams"         claim::process_streams;
    "L08" Grave   "uncounted-retest"              "Every retest is counted in the size"             conduct::retest;
    "L09" Grave   "population-not-stated"         "What the results speak for is said"              record_gaps::population;
    "L10" Grave   "change-not-explained"          "A revision says what changed, why and to what effect" record_gaps::change;
    "L11" Warning "acceptance-limit-alone"        "An acceptance quality limit does not stand alone" claim::acceptance_limit;
    "L12" Grave   "rule-after-data"               "The rule is fixed before the data"               conduct::after_data;
    "L13" Warning "level-left-unused"             "The size comes near the level"                   figure::unused_level;
    "L14" Grave   "size-rounded-down"             "A sample size is rounded up"                     figure::rounded_down;
    "L15" Warning "more-units-less-power"         "A unit more does not lose the guarantee"         figure::sawtooth;
    "L19" Warning "inspection-errors-not-stated"  "People who judge units have error rates"         conduct::inspection_errors;
    "L20" Grave   "claim-in-the-null"             "The claim stands in the alternative"             claim::in_the_null;
    "L21" Grave   "margin-not-justified"          "A margin of equivalence is justified"            claim::margin;
    "L22" Warning "strata-not-combined"           "How strata are combined is said"                 record_gaps::combination;
    "L23" Grave   "early-stop-outside-the-rule"   "Stopping early is part of the rule"              conduct::early_stop;
    "L25" Warning "good-lots-fail"                "A good lot is seldom held"                       figure::good_lots_fail;
    "L27" Grave   "power-from-the-data"           "Power is stated before the data"                 conduct::power_from_data;
    "L28" Warning "void-units-not-ruled"          "Lost and void units have a rule"                 record_gaps::void_units;
    "L29" Grave   "sampling-as-only-control"      "Sampling is not the only control of a critical hazard" claim::only_control;
    "L30" Warning "outside-the-scope"             "The study is a test of units"                    claim::scope;
    "L31" Warning "equal-to-the-limit"            "A value equal to the limit is decided"           record_gaps::tie;
    "L32" Warning "lot-taken-for-process"         "A lot is a lot and a process a process"          figure::lot_or_process;
    "L33" Warning "approximate-region"            "The region is exact where it can be"             figure::approximation;
};

/// A rule that no plan of this version can break, and why.
#[derive(Clone, Copy, Debug)]
pub struct WaitingRule {
    /// Its number.
    pub number: &'static str,
    /// What it will ask.
    pub title: &'static str,
    /// What it waits for.
    pub waits_for: &'static str,
}

/// Rules that wait.
pub const WAITING: &[WaitingRule] = &[
    WaitingRule {
        number: "L07",
        title: "A plan is not weakened after a failure",
        waits_for: "two revisions side by side and a record of the failed run",
    },
    WaitingRule {
        number: "L16",
        title: "A sigma taken as known has a source",
        waits_for: "families with a known standard deviation",
    },
    WaitingRule {
        number: "L17",
        title: "A normal law has evidence and a fallback",
        waits_for: "the normal family",
    },
    WaitingRule {
        number: "L18",
        title: "Two limits are controlled by a rule made for two",
        waits_for: "variables plans with two limits",
    },
    WaitingRule {
        number: "L24",
        title: "A shape parameter has a range or evidence",
        waits_for: "the Weibull family",
    },
    WaitingRule {
        number: "L26",
        title: "A capability index is a bound, not an estimate",
        waits_for: "variables plans",
    },
];
