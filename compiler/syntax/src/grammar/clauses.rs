//! The clauses that may stand behind every item and line.

use chumsky::prelude::*;
use chumsky::primitive::select;
use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::literal::display_unit;
use super::{Extra, Marks, Parses, name_of, text, word};
use crate::ast::{Cite, Clauses, Repeat, Text, UnitText};
use crate::codes;
use crate::faults::{Fault, What};
use crate::marks::Mark;
use crate::words;

enum Clause {
    Cite(Cite),
    Because(Text),
    Display(UnitText),
    Repeat(Box<Repeat>),
}

/// Whether a clause begins at the start of `rest`.
fn begins_clause(rest: &[Mark]) -> bool {
    let Some(first) = rest.first().filter(|mark| mark.token == Token::Word) else { return false };
    let second = rest.get(1).map(|mark| mark.token);
    match first.text {
        "cite" => matches!(second, Some(Token::Str | Token::UnterminatedStr | Token::Word)),
        "because" => matches!(second, Some(Token::Str | Token::UnterminatedStr)),
        "as" => matches!(second, Some(Token::Word | Token::Degree | Token::Percent)),
        "for" => second == Some(Token::Word) && rest.get(2).is_some_and(|mark| mark.is_word("from")),
        _ => false,
    }
}

/// Takes marks up to the next clause; gives their place. Fails where fewer than
/// `least` stand before it.
pub(super) fn skip_to_clause<'s>(least: usize) -> impl Parser<'s, Marks<'s>, Span, Extra> + Clone {
    custom::<_, Marks<'s>, _, Extra>(move |inp| {
        let start = inp.cursor();
        let rest: Marks<'s> = inp.slice_from(&start..);
        let stops = |at: &usize| *at >= least && begins_clause(rest.get(*at..).unwrap_or(&[]));
        let len = (0..rest.len()).find(stops).unwrap_or(rest.len());
        if len < least {
            let span = inp.span_since(&start);
            let nothing: [What; 0] = [];
            return Err(chumsky::error::LabelError::<Marks<'s>, What>::expected_found(nothing, None, span));
        }
        for _ in 0..len {
            inp.skip();
        }
        Ok(super::place(rest.get(..len).unwrap_or(&[])))
    })
}

/// Clauses to the end of the statement, in any order. What is none is reported
/// once and passed over, so that the clauses behind it are not lost.
pub(super) fn clauses<'s>(repeat: Parses<'s, Repeat>) -> Parses<'s, Clauses> {
    let cite_word =
        select(|mark: Mark<'s>, _| (mark.token == Token::Word).then(|| name_of(&mark))).validate(|name, _, emitter| {
            if !words::CITE_WORDS.contains(&name.text.as_str()) {
                let message = format!(
                    "`{}` is no source; quote the source, or write one of common_practice, from_memory, demo",
                    name.text
                );
                let mut fault = Diagnostic::new(codes::SYNTAX_ERROR, name.span, message);
                if let Some(near) = words::nearest(&name.text, words::CITE_WORDS) {
                    fault = fault.with_fix(format!("write `{near}`"), name.span, near);
                }
                emitter.emit(Fault::report(fault));
            }
            name
        });
    let source = text().map(Cite::Source).or(cite_word.map(Cite::Word)).labelled(What::Source);
    let clause = choice((
        word("cite").then(source).map(|(span, cite)| (span, Clause::Cite(cite))),
        word("because").then(text()).map(|(span, text)| (span, Clause::Because(text))),
        word("as").then(display_unit()).map(|(span, unit)| (span, Clause::Display(unit))),
        repeat.map(|repeat| (repeat.variable.span, Clause::Repeat(Box::new(repeat)))),
    ))
    .boxed();
    // Most lines end here; that is cheaper seen at once than found out by every alternative.
    let none = end().to(Clauses::default());
    let some = clause
        .map(Some)
        .recover_with(via_parser(skip_to_clause(1).map(|_| None)))
        .repeated()
        .collect::<Vec<Option<(Span, Clause)>>>()
        .validate(|parts, _, emitter| {
            let mut clauses = Clauses::default();
            for (span, clause) in parts.into_iter().flatten() {
                let repeated = match clause {
                    Clause::Cite(cite) => clauses.cite.replace(cite).is_some(),
                    Clause::Because(text) => clauses.because.replace(text).is_some(),
                    Clause::Display(unit) => clauses.display.replace(unit).is_some(),
                    Clause::Repeat(repeat) => clauses.repeat.replace(repeat).is_some(),
                };
                if repeated {
                    let fault =
                        Diagnostic::new(codes::REPEATED_CLAUSE, span, "this clause stands here for the second time");
                    emitter.emit(Fault::report(fault));
                }
            }
            clauses
        });
    none.or(some).boxed()
}
