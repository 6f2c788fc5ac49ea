//! The grammar's errors, and how they are put into words.
//!
//! While parsing, an error is a place and a small set of what would have been
//! accepted; only what is reported becomes a sentence. The parser library's own
//! lists of tokens are never shown.

use chumsky::DefaultExpected;
use chumsky::error::{Error, LabelError};
use chumsky::input::Input;
use chumsky::span::SimpleSpan;
use chumsky::util::MaybeRef;
use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use crate::codes;
use crate::marks::{Gap, Mark};

/// What could have stood at a place, in the order in which messages name it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[repr(u8)]
pub(crate) enum What {
    Value,
    Condition,
    Name,
    Kind,
    Text,
    Source,
    Unit,
    Number,
    Equals,
    Arrow,
    Range,
    Agrees,
    When,
    From,
    To,
    Through,
    Along,
    State,
    Path,
    LoadPath,
    OpenParen,
    CloseParen,
    CloseBracket,
}

const WORDS: &[(What, &str)] = &[
    (What::Value, "a value"),
    (What::Condition, "a comparison"),
    (What::Name, "a name"),
    (What::Kind, "a kind such as `length`"),
    (What::Text, "a text in quotes"),
    (What::Source, "a source in quotes, or one of common_practice, from_memory, demo"),
    (What::Unit, "a unit"),
    (What::Number, "a number"),
    (What::Equals, "`=`"),
    (What::Arrow, "`->`"),
    (What::Range, "`..`"),
    (What::Agrees, "`agrees`"),
    (What::When, "`when` or `otherwise`"),
    (What::From, "`from`"),
    (What::To, "`to`"),
    (What::Through, "`through`"),
    (What::Along, "`along`"),
    (What::State, "`at rest`, a speed such as `drum.speed = 24 rpm`, or `from`"),
    (What::Path, "a path such as `std.materials` or `./parts/drum`"),
    (What::LoadPath, "`vertical`, `level` or `incline ANGLE`"),
    (What::OpenParen, "`(`"),
    (What::CloseParen, "`)`"),
    (What::CloseBracket, "`]`"),
];

/// An error of the grammar.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Fault {
    /// Position among the marks of the statement.
    at: usize,
    /// Set of [`What`].
    expected: u32,
    /// A finished report, where the grammar knows better.
    report: Option<Box<Diagnostic<Span>>>,
}

impl Fault {
    /// An error that the grammar words itself.
    pub fn report(diagnostic: Diagnostic<Span>) -> Fault {
        Fault { at: 0, expected: 0, report: Some(Box::new(diagnostic)) }
    }

    /// Puts the error into words. None: it only repeats what layout or the lexer reported.
    pub fn into_diagnostic(self, marks: &[Mark]) -> Option<Diagnostic<Span>> {
        if let Some(report) = self.report {
            return Some(*report);
        }
        let found = marks.get(self.at);
        let reported = |mark: &Mark| mark.is_supplied() || matches!(mark.token, Token::Unknown | Token::LineSeparator);
        let before = self.at.checked_sub(1).and_then(|at| marks.get(at));
        if found.is_some_and(reported) || (found.is_none() && before.is_some_and(reported)) {
            return None;
        }
        let wants: Vec<&str> =
            WORDS.iter().filter(|(what, _)| self.expected & bit(*what) != 0).map(|(_, words)| *words).collect();
        let wants_value = self.expected & bit(What::Value) != 0;
        // A list of more than three helps nobody; values come first and stand for the rest.
        let wants = if wants_value { "a value".to_owned() } else { join(wants.get(..3).unwrap_or(&wants)) };
        let fault = match (found, before) {
            (None, Some(before)) => {
                let code = if wants_value { codes::MISSING_VALUE } else { codes::SYNTAX_ERROR };
                let wants = if wants.is_empty() { "more".to_owned() } else { wants };
                let message = format!("expected {wants} after {}", describe(before));
                Diagnostic::new(code, Span::at(before.span.end), message)
            }
            (Some(found), before) if !wants.is_empty() => {
                let behind = match before {
                    Some(before) if matches!(before.token, Token::Equals) || wants_value => {
                        format!(" after {}", describe(before))
                    }
                    _ => String::new(),
                };
                let message = format!("expected {wants}{behind}, found {}", describe(found));
                Diagnostic::new(codes::SYNTAX_ERROR, found.span, message)
            }
            (Some(found), Some(before)) => {
                let message = format!("did not expect {} after {}", describe(found), describe(before));
                Diagnostic::new(codes::SYNTAX_ERROR, found.span, message)
            }
            (Some(found), None) => {
                Diagnostic::new(codes::SYNTAX_ERROR, found.span, format!("did not expect {} here", describe(found)))
            }
            (None, None) => Diagnostic::new(codes::SYNTAX_ERROR, Span::at(0), format!("expected {wants}")),
        };
        Some(match found {
            Some(found) => with_advice(fault, before, found, marks.get(self.at + 1)),
            None => fault,
        })
    }
}

/// Adds what to do where the slip is a common one.
fn with_advice(
    fault: Diagnostic<Span>,
    before: Option<&Mark>,
    found: &Mark,
    behind: Option<&Mark>,
) -> Diagnostic<Span> {
    let number_behind = behind.filter(|mark| mark.token == Token::Number && mark.gap == Gap::None);
    let number_before = before.is_some_and(|mark| mark.token == Token::Number && found.gap == Gap::None);
    match found.token {
        Token::Dot if number_before => {
            fault.with_help("a number has digits behind its point").with_fix("remove the point", found.span, "")
        }
        Token::Dot if number_behind.is_some() => {
            fault.with_help("a number has a digit before its point").with_fix("write `0.`", found.span, "0.")
        }
        Token::Comma if number_before && number_behind.is_some() => {
            fault.with_help("the decimal sign is a point; digits are grouped with `_`: `1_450`")
        }
        Token::Equals => fault.with_help("two values are compared with `==`").with_fix("write `==`", found.span, "=="),
        Token::PlusMinus => fault.with_help("a tolerance stands behind a number and its unit"),
        Token::Word if found.text == "in" => {
            fault.with_help("bounds are written with `within`").with_fix("write `within`", found.span, "within")
        }
        Token::Word if found.text == "if" => {
            fault.with_help("a value by cases is written `choose { a when b` / `c otherwise }`")
        }
        _ => fault,
    }
}

fn bit(what: What) -> u32 {
    1 << (what as u8)
}

fn join(words: &[&str]) -> String {
    match words {
        [] => String::new(),
        [one] => (*one).to_owned(),
        [first @ .., last] => format!("{} or {last}", first.join(", ")),
    }
}

/// A mark in words, short enough for a headline.
pub(crate) fn describe(mark: &Mark) -> String {
    match mark.token {
        Token::Str | Token::UnterminatedStr if mark.text.chars().count() > 24 => "a text".to_owned(),
        Token::Prose => "a line of prose".to_owned(),
        _ if mark.text.chars().count() > 40 => {
            let start: String = mark.text.chars().take(36).collect();
            format!("`{start}...`")
        }
        _ => format!("`{}`", mark.text),
    }
}

type Marks<'s> = &'s [Mark<'s>];

impl<'s> Error<'s, Marks<'s>> for Fault {
    fn merge(mut self, other: Fault) -> Fault {
        if self.report.is_none() {
            self.report = other.report;
        }
        self.expected |= other.expected;
        self
    }
}

impl<'s> LabelError<'s, Marks<'s>, DefaultExpected<'s, Mark<'s>>> for Fault {
    fn expected_found<E: IntoIterator<Item = DefaultExpected<'s, Mark<'s>>>>(
        _: E,
        _: Option<MaybeRef<'s, Mark<'s>>>,
        span: <Marks<'s> as Input<'s>>::Span,
    ) -> Fault {
        Fault { at: span.start, expected: 0, report: None }
    }
}

impl<'s> LabelError<'s, Marks<'s>, What> for Fault {
    fn expected_found<E: IntoIterator<Item = What>>(
        expected: E,
        _: Option<MaybeRef<'s, Mark<'s>>>,
        span: SimpleSpan<usize>,
    ) -> Fault {
        let expected = expected.into_iter().fold(0, |set, what| set | bit(what));
        Fault { at: span.start, expected, report: None }
    }

    fn label_with(&mut self, label: What) {
        self.expected = bit(label);
    }
}
