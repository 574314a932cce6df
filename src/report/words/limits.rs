//! What the plan does not assure: usual cautions of acceptance testing, in our own sentences, where they apply.

use crate::record::Record;

use super::rule::accepts_by_rejecting;
use super::subject::Subject;

/// The cautions that apply, the most important first.
pub fn cautions(record: &Record, subject: &Subject<'_>) -> Vec<String> {
    let counted = subject.counted();
    let judged = subject.judged();
    let mut said = vec![
        format!("An accepted {judged} may still have {counted}. Passing bounds how many there can plausibly be; it never shows that there are none."),
        "The sample sorts lots; it does not improve them. If all lots are alike, those accepted are no better than those refused.".to_owned(),
        "Failing does not prove a lot bad, nor passing prove it good: each says that the rule fixed beforehand was met or not.".to_owned(),
        "The risks hold for units drawn at random from the stated population, and for a lot made alike throughout. Mixed cavities, shifts or materials want a sample each.".to_owned(),
        "The risks cover the chance of sampling alone: not a wrong test method, a wrong build, a biased drawing, nor a law of the observations that does not hold.".to_owned(),
    ];
    said.push("Where not a single escape can be borne, a sample is not the control: inspect every unit or make the fault impossible, and use this plan to verify that control.".to_owned());
    if !accepts_by_rejecting(record) {
        said.push("The null here says that the lot is good. Retaining it is no proof of that; what protects the receiver is the power in the alternative.".to_owned());
        said.push("An agreed quality level is an index for running inspection, not a licence to ship nonconforming units.".to_owned());
    }
    said.push("The boundary of the null, the level and the required power are decisions on risk. They belong to people qualified to take them; a small probability is not by itself a safe one.".to_owned());
    said.push("A pass in a pharmacopoeial test speaks for the units tested, not for the batch; this plan does not replace such a test, nor such a test this plan.".to_owned());
    said.push("This plan is not made to size a clinical trial, to assure sterility, or to show that people use a product without error, unless that is justified separately.".to_owned());
    said.push("This report is not legal or regulatory advice, and filing it makes nothing compliant. The law, the standards that apply, the customer's contract and the responsible quality unit prevail; let a qualified statistician review what is new.".to_owned());
    said
}

/// The few that stand first when a hazard depends on the plan.
pub fn first(record: &Record, subject: &Subject<'_>) -> Option<Vec<String>> {
    record.characteristic.hazard.as_ref()?;
    Some(vec![
        format!("An accepted {} may still have {}: the plan bounds them, never excludes them.", subject.judged(),
            subject.counted()),
        "If not a single escape can be borne, a sample alone is not enough: inspect every unit or make the fault impossible.".to_owned(),
        "Law, standards, contracts and the responsible quality unit prevail over this report; the section on what the plan does not assure is part of it.".to_owned(),
    ])
}
