//! Every diagnostic code with its meaning in one line. Each has a section in `docs/diagnostics.md`; a test holds the
//! source, this list and that page together.

/// Code and meaning, in alphabetical order. A code that is not here does not pass the tests.
pub const CODES: &[(&str, &str)] = &[
    ("alias", "a YAML alias"),
    ("anchor", "a YAML anchor"),
    ("bad-date", "not a calendar date"),
    ("bad-hash", "not the hash of a record"),
    (
        "bad-identifier",
        "a plan number or revision that cannot name a file",
    ),
    ("comment-cut", "unquoted text that YAML cuts at ` #`"),
    (
        "comparison-without-parameter",
        "a comparison that does not speak of the parameter",
    ),
    ("directive", "a YAML directive"),
    ("duplicate-key", "a key that stands twice"),
    (
        "empty-alternative",
        "a null that is the whole parameter space",
    ),
    (
        "empty-critical-region",
        "a critical region without any count",
    ),
    ("empty-null", "a null subset without any value of the space"),
    ("empty-plan", "a file without a plan"),
    ("empty-range", "a range that ends before it begins"),
    ("empty-space", "a parameter space without any value"),
    ("empty-value", "a key without a value"),
    ("empty-where", "a requirement on an empty set"),
    ("forbidden-character", "a character that no plan may hold"),
    (
        "inspection-tells-nothing",
        "error rates that add up to everything",
    ),
    (
        "key-not-a-word",
        "a key that is missing, or a list or mapping",
    ),
    (
        "key-of-another-family",
        "a key that belongs to another family",
    ),
    (
        "language-version",
        "a version of the language that is not known",
    ),
    ("level-unreachable", "a level that no region can keep"),
    ("merge-key", "a YAML merge key"),
    ("missing-key", "a key that must be there"),
    ("missing-lot-size", "a lot whose size is not stated"),
    ("missing-sample-size", "nothing says when inspection ends"),
    (
        "needs-quotes",
        "an expression that YAML cut at a comma or bracket",
    ),
    ("no-largest-region", "a null under which every region fits"),
    ("no-sample-size", "a search that found no sample size"),
    ("not-a-number", "text where a number is due"),
    (
        "not-proved",
        "a question that enclosures and exact arithmetic leave open",
    ),
    ("not-utf-8", "a file that is not UTF-8 text"),
    ("not-whole", "a fraction where units are counted"),
    (
        "not-yet-derived",
        "something the language can say and the program cannot derive yet",
    ),
    (
        "null-outside-space",
        "a null subset that reaches out of the parameter space",
    ),
    ("number-too-long", "a number longer than any plan needs"),
    ("out-of-range", "a number outside its range"),
    ("plan-too-large", "a file of more than one mebibyte"),
    (
        "points-left-out",
        "points of the power table that the parameter cannot take",
    ),
    (
        "readers-disagree",
        "a text that two YAML readers understand differently",
    ),
    (
        "reordering-character",
        "a character that changes the order in which text is shown",
    ),
    ("requirement-in-null", "power required where the null holds"),
    (
        "requirement-touches-null",
        "power required right up to the null",
    ),
    ("sample-larger-than-lot", "a sample larger than its lot"),
    ("second-document", "a second plan in the same file"),
    (
        "sequential-cannot-start",
        "a ratio test without a usable alternative or end",
    ),
    ("set-syntax", "a set expression that cannot be read"),
    (
        "space-outside-domain",
        "a parameter space that leaves what the parameter can be",
    ),
    (
        "stage-limits-overlap",
        "counts that both end a stage with rejection and with retention",
    ),
    ("stage-limits-turned", "limits of a stage on the wrong side"),
    ("stopped", "solving that was stopped"),
    ("supersedes-itself", "a revision that supersedes itself"),
    ("tab-indent", "a tab where YAML wants spaces"),
    ("tag", "a YAML tag"),
    ("tails-need-a-continuous-family", "unbiased tails on counts"),
    ("too-deep", "a plan nested too deep"),
    ("too-many", "more entries than a plan may have"),
    ("two-designs", "two ways of sampling in one plan"),
    ("unknown-family", "a family that does not exist"),
    ("unknown-key", "a key that does not exist"),
    ("unknown-parameter", "a name that the family does not know"),
    ("unknown-rule", "a waiver of a rule that does not exist"),
    ("unknown-word", "a word that is not among those allowed"),
    ("waiver-without-reason", "a rule waived without a reason"),
    (
        "where-outside-space",
        "a requirement that reaches out of the parameter space",
    ),
    (
        "wrong-kind",
        "a list, a mapping or a text where another kind is due",
    ),
    ("yaml-syntax", "text that is not YAML"),
];
