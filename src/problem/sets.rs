//! Set expressions as exact sets: every comparison is solved for the one name it speaks of.

use crate::kernel::exact::Exact;
use crate::language::diagnostic::{Diagnostic, Located, Span};
use crate::language::set::{Relation, SetExpression, Side};
use crate::space::{End, LineSet, Value};

/// What a set expression may speak of.
pub struct Vocabulary<'a> {
    /// The name whose values make up the set.
    pub name: &'a str,
    /// Other names that would be understood, for suggestions.
    pub others: &'a [&'a str],
    /// Family name for messages.
    pub family: &'a str,
}

/// The set of values of the name that satisfy the expression.
pub fn solve(
    expression: &SetExpression,
    vocabulary: &Vocabulary<'_>,
) -> Result<LineSet, Vec<Diagnostic>> {
    match expression {
        SetExpression::And(parts) => {
            let sets = solve_all(parts, vocabulary)?;
            Ok(sets
                .iter()
                .fold(LineSet::line(), |all, set| all.intersection(set)))
        }
        SetExpression::Or(parts) => {
            let sets = solve_all(parts, vocabulary)?;
            Ok(sets
                .iter()
                .fold(LineSet::empty(), |all, set| all.union(set)))
        }
        SetExpression::Chain { first, rest } => {
            let mut set = LineSet::line();
            let mut left = first;
            for (relation, right) in rest {
                let part =
                    comparison(left, *relation, right, vocabulary).map_err(|error| vec![error])?;
                set = set.intersection(&part);
                left = right;
            }
            Ok(set)
        }
    }
}

fn solve_all(
    parts: &[SetExpression],
    vocabulary: &Vocabulary<'_>,
) -> Result<Vec<LineSet>, Vec<Diagnostic>> {
    let mut sets = Vec::with_capacity(parts.len());
    let mut problems = Vec::new();
    for part in parts {
        match solve(part, vocabulary) {
            Ok(set) => sets.push(set),
            Err(found) => problems.extend(found),
        }
    }
    if problems.is_empty() {
        Ok(sets)
    } else {
        Err(problems)
    }
}

/// A side as `slope · name + constant`, or an infinity.
enum Form {
    Line { slope: Exact, constant: Exact },
    Infinite(Value),
}

fn form(side: &Located<Side>, vocabulary: &Vocabulary<'_>) -> Result<Form, Diagnostic> {
    match &side.value {
        Side::Infinity { negative: true } => Ok(Form::Infinite(Value::MinusInfinity)),
        Side::Infinity { negative: false } => Ok(Form::Infinite(Value::Infinity)),
        Side::Linear { constant, terms } => {
            let mut slope = Exact::zero();
            for (coefficient, name) in terms {
                if name != vocabulary.name {
                    return Err(unknown_name(name, side.span, vocabulary));
                }
                slope = &slope + coefficient;
            }
            Ok(Form::Line {
                slope,
                constant: constant.clone(),
            })
        }
        Side::Ratio(..) | Side::Probability(_) | Side::Median | Side::Quantile(_) => {
            Err(Diagnostic::error(
                "not-yet-derived",
                side.span,
                format!(
                    "a `{}` plan compares its parameter `{}` with numbers; this form is not derived for it",
                    vocabulary.family, vocabulary.name
                ),
            )
            .with_help(format!(
                "state the set in `{0}`, for example `{0} >= 0.05`",
                vocabulary.name
            )))
        }
    }
}

fn unknown_name(name: &str, span: Span, vocabulary: &Vocabulary<'_>) -> Diagnostic {
    let hint = if vocabulary.others.contains(&name) {
        format!(
            "this plan speaks of `{}`; use one name throughout",
            vocabulary.name
        )
    } else {
        format!("the name here is `{}`", vocabulary.name)
    };
    Diagnostic::error(
        "unknown-parameter",
        span,
        format!(
            "`{name}` is not a name that a `{}` plan knows here",
            vocabulary.family
        ),
    )
    .with_help(hint)
}

fn comparison(
    left: &Located<Side>,
    relation: Relation,
    right: &Located<Side>,
    vocabulary: &Vocabulary<'_>,
) -> Result<LineSet, Diagnostic> {
    match (form(left, vocabulary)?, form(right, vocabulary)?) {
        (
            Form::Line {
                slope: a,
                constant: b,
            },
            Form::Line {
                slope: c,
                constant: d,
            },
        ) => {
            let slope = &a - &c;
            let constant = &d - &b;
            let bound = constant.checked_div(&slope).ok_or_else(|| {
                Diagnostic::error(
                    "comparison-without-parameter",
                    left.span,
                    "this comparison does not depend on the parameter",
                )
                .with_help(format!("compare `{}` with a number", vocabulary.name))
            })?;
            let relation = if slope.is_negative() {
                mirrored(relation)
            } else {
                relation
            };
            Ok(half_line(relation, Value::Finite(bound)))
        }
        (Form::Line { slope, .. }, Form::Infinite(end)) => {
            beyond_everything(left.span, slope, relation, end, vocabulary)
        }
        (Form::Infinite(end), Form::Line { slope, .. }) => {
            beyond_everything(right.span, slope, mirrored(relation), end, vocabulary)
        }
        (Form::Infinite(_), Form::Infinite(_)) => Err(Diagnostic::error(
            "comparison-without-parameter",
            left.span,
            "this compares two infinities",
        )),
    }
}

/// `form ⋈ ±inf`: all numbers or none.
fn beyond_everything(
    span: Span,
    slope: Exact,
    relation: Relation,
    end: Value,
    vocabulary: &Vocabulary<'_>,
) -> Result<LineSet, Diagnostic> {
    if slope.is_zero() {
        return Err(Diagnostic::error(
            "comparison-without-parameter",
            span,
            "this comparison does not depend on the parameter",
        )
        .with_help(format!("compare `{}` with a number", vocabulary.name)));
    }
    let holds = match relation {
        Relation::Less | Relation::LessOrEqual => end == Value::Infinity,
        Relation::Greater | Relation::GreaterOrEqual => end == Value::MinusInfinity,
        Relation::Equal => false,
    };
    Ok(if holds {
        LineSet::line()
    } else {
        LineSet::empty()
    })
}

fn mirrored(relation: Relation) -> Relation {
    match relation {
        Relation::Less => Relation::Greater,
        Relation::LessOrEqual => Relation::GreaterOrEqual,
        Relation::Greater => Relation::Less,
        Relation::GreaterOrEqual => Relation::LessOrEqual,
        Relation::Equal => Relation::Equal,
    }
}

fn half_line(relation: Relation, bound: Value) -> LineSet {
    let (bottom, top) = (End::open(Value::MinusInfinity), End::open(Value::Infinity));
    match relation {
        Relation::Less => LineSet::from_ends(bottom, End::open(bound)),
        Relation::LessOrEqual => LineSet::from_ends(bottom, End::closed(bound)),
        Relation::Greater => LineSet::from_ends(End::open(bound), top),
        Relation::GreaterOrEqual => LineSet::from_ends(End::closed(bound), top),
        Relation::Equal => LineSet::point(bound),
    }
}
