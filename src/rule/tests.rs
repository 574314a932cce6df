//! Each rule is tripped by one change of a sound plan and silent on another that comes near.

use crate::language::diagnostic::{CautionGrade, Diagnostic, Grade};
use crate::{Silent, compile};

use super::{RULES, WAITING};

/// A plan that breaks no rule.
const SOUND: &str = r#"assize: 1
plan:
  id: TP-0142
  revision: A
  title: "Seal integrity of pouch lots"
  activity: "lot release"
characteristic:
  name: "open seal"
  counts: "pouches with an open seal"
  unit: "pouch"
test:
  family: binomial
  parameter_space: 0 <= p <= 1
  null_subset: p >= 5 %
  alpha: 0.05
  sample_size: 93
power:
  - where: p <= 0.4 %
    at_least: 0.90
    because: "process average of last year"
decision:
  accept_when: null_rejected
  if_rejected: "Release the lot."
  if_retained: "Hold the lot. It is not sampled again."
requirement:
  limits: "channel at most 50 micrometres"
risk_link:
  severity: "major"
population:
  scope: lot
  lot: "one day of one sealer"
  frame: "carton numbers"
sampling:
  void_units: "torn pouches"
  replacement: "the next pouch"
measurement:
  method: "TM-1"
  validation: "TM-1-V"
  rounding: "compared as read; equal passes"
  judged_by: "camera"
rationale: "Class 2 of the risk procedure."
"#;

fn findings(text: &str) -> Vec<Diagnostic> {
    compile(text, &Silent).unwrap().diagnostics
}

/// The sound plan with some texts replaced; each must be there.
fn changed(edits: &[(&str, &str)]) -> String {
    edits.iter().fold(SOUND.to_owned(), |text, (from, to)| {
        assert!(text.contains(from), "`{from}` is not in the plan");
        text.replace(from, to)
    })
}

/// The rules that the sound plan with these edits breaks.
fn broken(edits: &[(&str, &str)]) -> Vec<&'static str> {
    let text = changed(edits);
    let found = findings(&text);
    assert!(!found.iter().any(Diagnostic::is_error), "{found:#?}");
    let mut rules: Vec<_> = found.iter().filter_map(|found| found.rule).collect();
    rules.sort_unstable();
    rules
}

fn caution(edits: &[(&str, &str)], number: &str) -> Diagnostic {
    findings(&changed(edits))
        .into_iter()
        .find(|found| found.rule == Some(number))
        .unwrap()
}

const RETAINED: (&str, &str) = ("accept_when: null_rejected", "accept_when: null_retained");
const GOOD_NULL: (&str, &str) = ("null_subset: p >= 5 %", "null_subset: p <= 1.4 %");
const BAD_LOTS: (&str, &str) = ("where: p <= 0.4 %", "where: p >= 10 %");
const NO_POWER: (&str, &str) = (
    "power:\n  - where: p <= 0.4 %\n    at_least: 0.90\n    because: \"process average of last year\"\n",
    "",
);

#[test]
fn a_sound_plan_breaks_no_rule() {
    assert_eq!(broken(&[]), [""; 0]);
}

#[test]
fn gaps_of_the_record() {
    let rationale = ("rationale: \"Class 2 of the risk procedure.\"\n", "");
    assert_eq!(broken(&[rationale]), ["L01"]);
    assert!(caution(&[rationale], "L01").message.contains("93 units"));
    let by_policy = ("severity: \"major\"", "policy: \"Class 2\"");
    assert_eq!(broken(&[rationale, by_policy]), [""; 0]);

    assert_eq!(broken(&[("  validation: \"TM-1-V\"\n", "")]), ["L02"]);
    assert_eq!(broken(&[("  frame: \"carton numbers\"\n", "")]), ["L09"]);
    assert_eq!(
        broken(&[("scope: lot", "scope: process")]),
        ["L06", "L09"],
        "a lot is no process"
    );
    assert_eq!(
        broken(&[(
            "scope: lot\n  lot:",
            "scope: process\n  strata: \"two sealers\"\n  process:"
        )]),
        ["L22"]
    );
    assert_eq!(
        broken(&[("frame:", "strata: \"two sealers\"\n  frame:")]),
        ["L22"]
    );
    assert_eq!(
        broken(&[
            ("frame:", "strata: \"two sealers\"\n  frame:"),
            (
                "void_units:",
                "allocation: \"half each, one count\"\n  void_units:"
            )
        ]),
        [""; 0]
    );
    assert_eq!(
        broken(&[("  replacement: \"the next pouch\"\n", "")]),
        ["L28"]
    );
    assert_eq!(
        broken(&[("  rounding: \"compared as read; equal passes\"\n", "")]),
        ["L31"]
    );
    assert_eq!(
        broken(&[
            ("  rounding: \"compared as read; equal passes\"\n", ""),
            (
                "limits: \"channel at most 50 micrometres\"",
                "text: \"no open seal\""
            )
        ]),
        [""; 0],
        "without a limit nothing can be equal to it"
    );
}

#[test]
fn revisions_explain_themselves() {
    let revised = ("revision: A", "revision: B");
    assert_eq!(broken(&[revised]), ["L10"]);
    let explained = (
        "rationale:",
        "change: {what: w, why: because, effect: none, data: before}\napprovals: [{role: author}]\nrationale:",
    );
    assert_eq!(broken(&[revised, explained]), [""; 0]);
    let after = (explained.0, &*explained.1.replace("before", "after"));
    assert_eq!(broken(&[revised, after]), ["L12"]);
    let superseding = ("revision: A", "revision: A\n  supersedes: {revision: Z}");
    assert_eq!(broken(&[superseding]), ["L10"], "even as A");
}

#[test]
fn claims() {
    assert_eq!(broken(&[NO_POWER]), ["L04"]);
    assert!(
        caution(&[NO_POWER], "L04")
            .message
            .contains("producer's risk")
    );

    let validation = (
        "activity: \"lot release\"",
        "activity: \"process validation\"",
    );
    let good = [GOOD_NULL, RETAINED, NO_POWER];
    assert_eq!(
        broken(&[good[0], good[1], good[2], validation]),
        ["L04", "L05"]
    );
    assert_eq!(
        broken(&[GOOD_NULL, RETAINED, BAD_LOTS, validation]),
        [""; 0]
    );

    let index = ("rationale: \"", "rationale: \"AQL 1 %. ");
    assert_eq!(broken(&[good[0], good[1], good[2], index]), ["L04", "L11"]);
    assert_eq!(
        broken(&[index]),
        [""; 0],
        "the null is the limiting quality"
    );
    let series = ("frame:", "series: \"with switching rules\"\n  frame:");
    assert_eq!(broken(&[good[0], good[1], good[2], index, series]), ["L04"]);
}

#[test]
fn a_claim_in_the_null() {
    let claims = (
        "Hold the lot. It is not sampled again.",
        "This proves the lot good.",
    );
    assert_eq!(broken(&[GOOD_NULL, RETAINED, BAD_LOTS, claims]), ["L20"]);
    let denies = (claims.0, "This does not prove the lot good.");
    assert_eq!(broken(&[GOOD_NULL, RETAINED, BAD_LOTS, denies]), [""; 0]);
    assert_eq!(
        broken(&[RETAINED]),
        ["L20"],
        "the null says bad, and retained releases"
    );
    let turned = broken(&[GOOD_NULL, BAD_LOTS]);
    assert_eq!(turned, ["L20"], "the null says good, and rejected releases");
}

#[test]
fn equivalence_needs_a_margin_from_somewhere() {
    let equivalence = [
        (
            "null_subset: p >= 5 %",
            "null_subset: p <= 20 % or p >= 40 %",
        ),
        ("where: p <= 0.4 %", "where: p = 30 %"),
        ("sample_size: 93", "sample_size: 300"),
    ];
    assert_eq!(broken(&equivalence), ["L21"]);
    let [null, power, size] = equivalence;
    let margin = ("Class 2", "The margin is that of the label. Class 2");
    assert_eq!(broken(&[null, power, size, margin]), [""; 0]);
}

#[test]
fn hazards_and_scope() {
    let critical = ("severity: \"major\"", "severity: \"critical\"");
    assert_eq!(broken(&[critical]), ["L29"]);
    let controls = (
        critical.0,
        "severity: \"critical\"\n  controls: \"leak test of every pouch\"",
    );
    assert_eq!(broken(&[controls]), [""; 0]);
    assert_eq!(
        broken(&[(
            "Seal integrity of pouch lots",
            "Number of users in a usability study"
        )]),
        ["L30"]
    );
    assert_eq!(
        broken(&[(
            "Seal integrity of pouch lots",
            "Sterile pouches; not a sterility test"
        )]),
        [""; 0]
    );
}

#[test]
fn repeats_have_a_price() {
    let again = ("It is not sampled again.", "Then resample.");
    assert_eq!(broken(&[again]), ["L08"]);
    // n = 59, none allowed: size 0.95^59 = 0.048495 (computed by hand), with one repeat 1 - (1 - 0.048495)^2 = 0.094637.
    let message = caution(&[again, ("sample_size: 93", "sample_size: 59")], "L08").message;
    assert!(message.contains("9.47 %, not 4.85 %"), "{message}");
    let counted = ("sample_size: 93", "sample_size: 120\n  retest: {times: 1}");
    assert!(!broken(&[again, counted]).contains(&"L08"));
    let retained = caution(
        &[
            GOOD_NULL,
            RETAINED,
            BAD_LOTS,
            ("Release the lot.", "Test again."),
        ],
        "L08",
    );
    assert!(
        retained
            .message
            .contains("a lot where 0.1 <= p <= 1 is released"),
        "{}",
        retained.message
    );
}

#[test]
fn conduct() {
    let eyes = ("judged_by: \"camera\"", "judged_by: \"two inspectors\"");
    assert_eq!(broken(&[eyes]), ["L19"]);
    // P(X <= 1) of Binomial(93, 0.04): 0.109446, computed with SciPy 1.17.1.
    let message = caution(&[eyes], "L19").message;
    assert!(
        message.contains("one in five, the size would be 10.95 %"),
        "{message}"
    );
    let declared = (
        "sample_size: 93",
        "sample_size: 117\n  inspection: {misses: 20 %}",
    );
    assert_eq!(broken(&[eyes, declared]), [""; 0]);

    let early = (
        "Release the lot.",
        "Release the lot; stop early if all is well.",
    );
    assert_eq!(broken(&[early]), ["L23"]);
    let certain = (
        "Release the lot.",
        "Release the lot. Inspection may end as soon as no later pouch can change the outcome.",
    );
    assert_eq!(
        caution(&[certain], "L23").grade,
        Grade::Caution(CautionGrade::Information)
    );
    let never = ("Release the lot.", "Release the lot; never stop early.");
    assert_eq!(broken(&[never]), [""; 0]);

    let data = ("process average of last year", "post-hoc power of the run");
    assert_eq!(broken(&[data]), ["L27"]);
}

#[test]
fn figures_of_given_regions() {
    let given = (
        "sample_size: 93",
        "sample_size: 92\n  critical_region: x <= 1",
    );
    assert_eq!(broken(&[given]), ["L03", "L14"]);
    let rounded = caution(&[given], "L14");
    assert_eq!(
        rounded.help.as_deref(),
        Some("round up: 93 units keep the level")
    );
    let far = (
        "sample_size: 93",
        "sample_size: 80\n  critical_region: x <= 1",
    );
    assert_eq!(broken(&[far]), ["L03"]);
    let enough = (
        "sample_size: 93",
        "sample_size: 93\n  critical_region: x <= 1",
    );
    assert_eq!(broken(&[enough]), [""; 0]);
    let near = (
        "rationale: \"",
        "rationale: \"Limits from a normal approximation. ",
    );
    assert_eq!(broken(&[enough, near]), ["L33"]);
    assert_eq!(broken(&[near]), [""; 0], "a derived region is exact");
}

#[test]
fn figures_of_sizes() {
    // Binomial(140, 0.05): P(X <= 2) = 0.0269 and P(X <= 3) = 0.0765, computed with SciPy 1.17.1.
    let wasteful = ("sample_size: 93", "sample_size: 140");
    assert!(broken(&[wasteful]).contains(&"L13"));

    let strict = ("sample_size: 93", "sample_size: 59");
    let lenient = ("at_least: 0.90", "at_least: 0.75");
    assert_eq!(broken(&[strict, lenient]), ["L25"]);
    assert_eq!(
        broken(&[
            strict,
            (
                "where: p <= 0.4 %\n    at_least: 0.90",
                "where: p <= 0.1 %\n    at_least: 0.90"
            )
        ]),
        [""; 0]
    );

    let lot = (
        "sample_size: 93",
        "sample_size: 93\n  rectification: {lot_size: 500}",
    );
    assert_eq!(broken(&[lot]), ["L32"]);
    let large = (
        "sample_size: 93",
        "sample_size: 93\n  rectification: {lot_size: 5000}",
    );
    assert_eq!(broken(&[large]), [""; 0]);
}

#[test]
fn the_saw() {
    // H0 p >= 3 %, power 0.90 at 0.5 %: 208 to 220 do (2 allowed), 221 to 256 do not, from 257 they do again (3
    // allowed); sums of binomial terms with SciPy 1.17.1.
    let null = ("null_subset: p >= 5 %", "null_subset: p >= 3 %");
    let power = ("where: p <= 0.4 %", "where: p <= 0.5 %");
    let of = |size: &'static str| ("sample_size: 93", size);
    assert_eq!(broken(&[null, power, of("sample_size: 210")]), [""; 0]);
    let edge = [null, power, of("sample_size: 220")];
    assert_eq!(broken(&edge), ["L15"]);
    assert!(caution(&edge, "L15").message.contains("no longer with 221"));
    let dip = [null, power, of("sample_size: 230")];
    let found = caution(&dip, "L15");
    assert!(
        found.message.contains("230 lies in a dip"),
        "{}",
        found.message
    );
    assert!(
        found.message.ends_with("208 already does"),
        "{}",
        found.message
    );
    let searched = [null, power, of("sample_size: smallest")];
    let found = caution(&searched, "L15");
    assert_eq!(found.grade, Grade::Caution(CautionGrade::Information));
}

#[test]
fn waivers_silence_and_are_filed() {
    let waived = "waive:\n  - rule: L04\n    because: \"the customer states no good quality\"\n  - rule: L08\n    because: \"no retest is foreseen here\"\n";
    let text = changed(&[NO_POWER]) + waived;
    let compiled = compile(&text, &Silent).unwrap();
    assert!(
        compiled.diagnostics.is_empty(),
        "{:?}",
        compiled.diagnostics
    );
    let filed = compiled.record.unwrap().waivers;
    assert_eq!(filed.len(), 2);
    assert_eq!((filed[0].rule.as_str(), filed[0].applies), ("L04", true));
    assert_eq!((filed[1].rule.as_str(), filed[1].applies), ("L08", false));
}

#[test]
fn waivers_need_a_rule_and_a_reason() {
    let with = |rule: &str, because: &str| {
        let text = format!("{SOUND}waive: [{{rule: {rule}, because: \"{because}\"}}]\n");
        let compiled = compile(&text, &Silent).unwrap();
        let errors: Vec<_> = compiled
            .diagnostics
            .into_iter()
            .filter(Diagnostic::is_error)
            .collect();
        assert_eq!(compiled.record.is_none(), !errors.is_empty());
        errors
    };
    assert!(with("L13", "agreed with the customer").is_empty());
    let unknown = with("L93", "agreed with the customer");
    assert_eq!(unknown[0].code, "unknown-rule");
    let in_words = with("level-left-unusd", "agreed with the customer");
    assert_eq!(
        in_words[0].help.as_deref(),
        Some("did you mean `L13` (level-left-unused)?")
    );
    let waiting = with("L16", "agreed with the customer");
    assert!(waiting[0].help.as_deref().unwrap().contains("waits for"));
    assert_eq!(with("L13", " n/a ")[0].code, "waiver-without-reason");
}

#[test]
fn every_number_of_the_list_is_a_rule_or_waits() {
    let mut numbers: Vec<&str> = RULES.iter().map(|rule| rule.number).collect();
    assert!(numbers.is_sorted());
    numbers.extend(WAITING.iter().map(|rule| rule.number));
    numbers.sort_unstable();
    let all: Vec<String> = (1..=33).map(|number| format!("L{number:02}")).collect();
    assert_eq!(numbers, all);
    let mut codes: Vec<&str> = RULES.iter().map(|rule| rule.code).collect();
    codes.sort_unstable();
    codes.dedup();
    assert_eq!(codes.len(), RULES.len());
}
