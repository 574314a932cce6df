//! What is wrong, where, and what to do about it.

/// A stretch of the plan text. Lines and columns count from one; columns count characters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Span {
    /// First line.
    pub line: usize,
    /// First column.
    pub column: usize,
    /// How many characters to mark on that line, at least one.
    pub width: usize,
}

/// How serious.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Grade {
    /// Nothing can be compiled: exit status 2.
    Error,
    /// A caution: printed, counted, filed; the rules' grades E, W, I tell how grave.
    Caution(CautionGrade),
}

/// The grades of the rules on plans.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum CautionGrade {
    /// E: an auditor would object.
    Grave,
    /// W: a weakness.
    Warning,
    /// I: worth knowing.
    Information,
}

impl CautionGrade {
    /// The letter used in rules and records.
    pub fn letter(self) -> &'static str {
        match self {
            Self::Grave => "E",
            Self::Warning => "W",
            Self::Information => "I",
        }
    }
}

/// One finding about a plan.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// How serious.
    pub grade: Grade,
    /// Code in words, e.g. `null-outside-space`; each has a section in `docs/diagnostics.md`.
    pub code: &'static str,
    /// Rule number for rules on plans, e.g. `L13`.
    pub rule: Option<&'static str>,
    /// Where.
    pub span: Span,
    /// What is wrong, one sentence.
    pub message: String,
    /// What to do, one sentence.
    pub help: Option<String>,
}

impl Diagnostic {
    /// An error at a place.
    pub fn error(code: &'static str, span: Span, message: impl Into<String>) -> Self {
        Self {
            grade: Grade::Error,
            code,
            rule: None,
            span,
            message: message.into(),
            help: None,
        }
    }

    /// A caution at a place.
    pub fn caution(
        grade: CautionGrade,
        code: &'static str,
        span: Span,
        message: impl Into<String>,
    ) -> Self {
        Self {
            grade: Grade::Caution(grade),
            code,
            rule: None,
            span,
            message: message.into(),
            help: None,
        }
    }

    /// The same with a line of help.
    pub fn with_help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// The same with a rule number.
    pub fn with_rule(mut self, rule: &'static str) -> Self {
        self.rule = Some(rule);
        self
    }

    /// Whether it stops compilation.
    pub fn is_error(&self) -> bool {
        self.grade == Grade::Error
    }
}

/// A value and where the plan says it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Located<T> {
    /// The value.
    pub value: T,
    /// Where.
    pub span: Span,
}

impl<T> Located<T> {
    /// A value at a place.
    pub fn new(value: T, span: Span) -> Self {
        Self { value, span }
    }
}
