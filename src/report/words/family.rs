//! What each family assumes, and how a plan can justify it. Common practice of the field; no source is quoted.

/// An assumption of a family.
pub struct Assumed {
    /// What must be true.
    pub what: &'static str,
    /// What supports it.
    pub justify: &'static str,
}

/// A family as a reader meets it.
pub struct FamilyText {
    /// Its name in a sentence.
    pub name: &'static str,
    /// The law in one sentence.
    pub law: &'static str,
    /// Its assumptions.
    pub assumed: &'static [Assumed],
}

const RANDOM: Assumed = Assumed {
    what: "Every unit of the stated population has the same chance of being drawn.",
    justify: "The drawing procedure, the list it draws from, and who drew; a convenient corner of the pallet does not qualify.",
};

const SAME_JUDGEMENT: Assumed = Assumed {
    what: "A unit is judged correctly: what is nonconforming is called so, and nothing else is.",
    justify: "The validation of the test method or an agreement study of the inspectors; else state the error rates of inspection.",
};

const INDEPENDENT: Assumed = Assumed {
    what: "Units are nonconforming independently of one another, all with the same probability.",
    justify: "A process in control with no mixing of streams: control charts, records of cavities, shifts and material lots; clustered faults break it.",
};

/// What is assumed of inspection where the plan states how often it errs.
pub static ERRING_INSPECTION: Assumed = Assumed {
    what: "Inspection errs no more often than the stated rates say.",
    justify: "The study that gave the rates, made on units and by inspectors like these.",
};

/// The assumptions of a family, as they stand with or without stated errors of inspection.
pub fn assumptions(family: &str, inspection_errs: bool) -> Vec<&'static Assumed> {
    let assumed = text_of(family).map_or(&[][..], |text| text.assumed);
    assumed
        .iter()
        .map(|each| {
            if inspection_errs && each.what == SAME_JUDGEMENT.what {
                &ERRING_INSPECTION
            } else {
                each
            }
        })
        .collect()
}

/// The text of a family; unknown names have none.
pub fn text_of(family: &str) -> Option<&'static FamilyText> {
    match family {
        "binomial" => Some(&BINOMIAL),
        "hypergeometric" => Some(&HYPERGEOMETRIC),
        "poisson" => Some(&POISSON),
        "negative_binomial" => Some(&NEGATIVE_BINOMIAL),
        _ => None,
    }
}

static BINOMIAL: FamilyText = FamilyText {
    name: "binomial",
    law: "The number x of nonconforming units among n inspected is binomial with parameters n and p: each unit is nonconforming with probability p.",
    assumed: &[
        INDEPENDENT,
        RANDOM,
        SAME_JUDGEMENT,
        Assumed {
            what: "The sample is small beside the lot, or the claim is about the process that made it.",
            justify: "The lot size; when more than a tenth of a lot is inspected and the claim is about this lot, the hypergeometric family fits.",
        },
    ],
};

static HYPERGEOMETRIC: FamilyText = FamilyText {
    name: "hypergeometric",
    law: "The number x of nonconforming units among n drawn without replacement from a lot of N that holds D of them is hypergeometric.",
    assumed: &[
        Assumed {
            what: "The lot is a fixed set of N units, all of which can be drawn.",
            justify: "The lot record with its count; units already used or withdrawn are not part of it.",
        },
        RANDOM,
        SAME_JUDGEMENT,
        Assumed {
            what: "The claim is about this lot alone, not about the process that made it.",
            justify: "The purpose of the plan; a claim about the process needs the binomial family.",
        },
    ],
};

static POISSON: FamilyText = FamilyText {
    name: "Poisson",
    law: "The number x of occurrences in an amount of opportunity a is Poisson with mean λ·a.",
    assumed: &[
        Assumed {
            what: "Occurrences fall independently of one another: none attracts or repels the next.",
            justify: "Maps or records of where and when they fell; clusters make the count vary more than this law allows, and the stated risks too small.",
        },
        Assumed {
            what: "The mean rate is the same over the whole amount inspected.",
            justify: "Records over machines, widths and times; where the rate differs, inspect each stratum with a plan of its own.",
        },
        Assumed {
            what: "The inspected amount represents the population.",
            justify: "How places and times were chosen, by a random or systematic drawing fixed beforehand.",
        },
        SAME_JUDGEMENT,
    ],
};

static NEGATIVE_BINOMIAL: FamilyText = FamilyText {
    name: "negative binomial",
    law: "Inspection goes on until the r-th nonconforming unit; the number n of units then inspected is negative binomial with parameters r and p.",
    assumed: &[
        INDEPENDENT,
        Assumed {
            what: "Units are inspected in an order that has nothing to do with their quality.",
            justify: "The drawing procedure: the order of production does not qualify where the process drifts.",
        },
        SAME_JUDGEMENT,
        Assumed {
            what: "Inspection ends by the rule and by nothing else.",
            justify: "The inspection record: every unit inspected, in order, with its result.",
        },
    ],
};
