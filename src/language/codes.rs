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
    ("directive", "a YAML directive"),
    ("duplicate-key", "a key that stands twice"),
    ("empty-plan", "a file without a plan"),
    ("empty-range", "a range that ends before it begins"),
    ("empty-value", "a key without a value"),
    ("forbidden-character", "a character that no plan may hold"),
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
    ("merge-key", "a YAML merge key"),
    ("missing-key", "a key that must be there"),
    ("missing-lot-size", "a lot whose size is not stated"),
    ("missing-sample-size", "nothing says when inspection ends"),
    (
        "needs-quotes",
        "an expression that YAML cut at a comma or bracket",
    ),
    ("not-a-number", "text where a number is due"),
    ("not-utf-8", "a file that is not UTF-8 text"),
    ("not-whole", "a fraction where units are counted"),
    (
        "not-yet-derived",
        "something the language can say and the program cannot derive yet",
    ),
    ("number-too-long", "a number longer than any plan needs"),
    ("out-of-range", "a number outside its range"),
    ("plan-too-large", "a file of more than one mebibyte"),
    (
        "readers-disagree",
        "a text that two YAML readers understand differently",
    ),
    (
        "reordering-character",
        "a character that changes the order in which text is shown",
    ),
    ("second-document", "a second plan in the same file"),
    ("set-syntax", "a set expression that cannot be read"),
    ("supersedes-itself", "a revision that supersedes itself"),
    ("tab-indent", "a tab where YAML wants spaces"),
    ("tag", "a YAML tag"),
    ("too-deep", "a plan nested too deep"),
    ("too-many", "more entries than a plan may have"),
    ("unknown-family", "a family that does not exist"),
    ("unknown-key", "a key that does not exist"),
    ("unknown-word", "a word that is not among those allowed"),
    (
        "wrong-kind",
        "a list, a mapping or a text where another kind is due",
    ),
    ("yaml-syntax", "text that is not YAML"),
];
