//! The grammar of one statement's head or tail, and of expressions.
//!
//! The parsers are built once per file and read slices of marks, one statement
//! at a time, so that an error costs that statement alone. No two alternatives
//! share a recursive beginning: what they share is parsed once, then decided.

mod clauses;
mod expression;
mod heads;
mod lines;
mod literal;
#[cfg(test)]
mod tests;

use chumsky::prelude::*;
use chumsky::primitive::select;
use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use crate::ast::{Name, Text};
use crate::faults::{Fault, What};
use crate::marks::{Gap, Mark};

pub(crate) use heads::{Definer, FieldHead, Grammar};
pub(crate) use lines::{LinkHead, PlacementHead};
pub(crate) use literal::{display_unit_len, unit_len};

/// What the parsers read.
pub(crate) type Marks<'s> = &'s [Mark<'s>];
/// How they report.
pub(crate) type Extra = extra::Err<Fault>;
/// A parser of `O`.
pub(crate) type Parses<'s, O> = Boxed<'s, 's, Marks<'s>, O, Extra>;

/// Runs one parser over the marks of one statement.
pub(crate) fn run<'s, O>(parser: &Parses<'s, O>, marks: Marks<'s>, acc: &mut Vec<Diagnostic<Span>>) -> Option<O> {
    let (output, faults) = parser.parse(marks).into_output_errors();
    acc.extend(faults.into_iter().filter_map(|fault| fault.into_diagnostic(marks)));
    output
}

/// One mark of a kind; gives its place.
fn mark<'s>(token: Token) -> impl Parser<'s, Marks<'s>, Span, Extra> + Clone {
    select(move |mark: Mark<'s>, _| (mark.token == token).then_some(mark.span))
}

/// One mark of a kind that touches the one before it.
fn touching<'s>(token: Token) -> impl Parser<'s, Marks<'s>, Span, Extra> + Clone {
    select(move |mark: Mark<'s>, _| (mark.token == token && mark.gap == Gap::None).then_some(mark.span))
}

/// A certain word; gives its place.
fn word<'s>(text: &'static str) -> impl Parser<'s, Marks<'s>, Span, Extra> + Clone {
    select(move |mark: Mark<'s>, _| mark.is_word(text).then_some(mark.span))
}

/// Any word, as a name.
fn name<'s>() -> impl Parser<'s, Marks<'s>, Name, Extra> + Clone {
    select(|mark: Mark<'s>, _| (mark.token == Token::Word).then(|| name_of(&mark))).labelled(What::Name)
}

/// One of a list of words, as a name.
fn name_among<'s>(words: &'static [&'static str]) -> impl Parser<'s, Marks<'s>, Name, Extra> + Clone {
    select(move |mark: Mark<'s>, _| mark.is_one_of(words).then(|| name_of(&mark)))
}

/// A text in quotes, with its partner or without (layout reported that).
fn text<'s>() -> impl Parser<'s, Marks<'s>, Text, Extra> + Clone {
    select(|mark: Mark<'s>, _| {
        matches!(mark.token, Token::Str | Token::UnterminatedStr)
            .then(|| Text { text: unquote(mark.text), span: mark.span })
    })
    .labelled(What::Text)
}

/// The mark as a name.
pub(crate) fn name_of(mark: &Mark) -> Name {
    Name { text: mark.text.into(), span: mark.span }
}

/// The place of some marks in a row.
fn place(marks: &[Mark]) -> Span {
    match (marks.first(), marks.last()) {
        (Some(first), Some(last)) => first.span.to(last.span),
        _ => Span::default(),
    }
}

/// A text without its quotes, escapes resolved. An unknown escape stays as written.
pub(crate) fn unquote(quoted: &str) -> String {
    let inner = quoted.strip_prefix('"').unwrap_or(quoted);
    let mut text = String::with_capacity(inner.len());
    let mut characters = inner.chars();
    while let Some(character) = characters.next() {
        match character {
            '"' => break,
            '\\' => match characters.next() {
                Some('n') => text.push('\n'),
                Some('t') => text.push('\t'),
                Some(quoted @ ('"' | '\\')) => text.push(quoted),
                Some(other) => text.extend(['\\', other]),
                None => text.push('\\'),
            },
            _ => text.push(character),
        }
    }
    text
}
