//! Numbers with unit, tolerance and distribution.

use chumsky::prelude::*;
use chumsky::primitive::select;
use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::{Extra, Marks, Parses, mark, name_among, name_of, place, touching, word};
use crate::ast::{Expr, Literal, Name, Range, Tolerance, UnitText};
use crate::codes;
use crate::faults::{Fault, What};
use crate::marks::{Gap, Mark};
use crate::words;

/// How many marks at the start of `rest` are the unit of the number before them.
///
/// A unit is one run of marks without white space: `kg*m^2`, `N*m/(rad/s)`,
/// `1/min`, `°C`. Where a run stops being a unit (`3 m*(a + b)`), the operator
/// before that place is arithmetic. Whether the words are units is decided later.
pub(crate) fn unit_len(rest: &[Mark]) -> usize {
    let Some(first) = rest.first() else { return 0 };
    let second = rest.get(1);
    let start = match first.token {
        _ if first.gap == Gap::Line => 0,
        Token::Word => usize::from(!goes_on_with_line(first, second, rest.get(2))),
        Token::Percent | Token::Degree => 1,
        // `24 1/min`
        Token::Number if first.text == "1" => {
            let slash = second.is_some_and(|mark| mark.token == Token::Slash && mark.gap == Gap::None);
            let unit = rest.get(2).is_some_and(|mark| {
                mark.gap == Gap::None && matches!(mark.token, Token::Word | Token::OpenParen | Token::Degree)
            });
            usize::from(slash && unit)
        }
        _ => 0,
    };
    if start == 0 { 0 } else { run_len(rest, start) }
}

/// How many marks at the start of `rest` are the unit behind `as`, where no
/// clause word can stand.
pub(crate) fn display_unit_len(rest: &[Mark]) -> usize {
    match rest.first() {
        Some(first) if matches!(first.token, Token::Word | Token::Percent | Token::Degree) => run_len(rest, 1),
        Some(first) if first.token == Token::Number && first.text == "1" => {
            let len = run_len(rest, 1);
            if len > 1 { len } else { 0 }
        }
        _ => 0,
    }
}

/// Whether the word goes on with the line and is no unit.
fn goes_on_with_line(word: &Mark, behind: Option<&Mark>, after: Option<&Mark>) -> bool {
    let number_behind = || behind.is_some_and(|mark| mark.token == Token::Number);
    match word.text {
        // The atomic mass unit, unless a number follows: `12.30 kg u 0.05 kg`.
        "u" => number_behind(),
        // The inch, unless it is the old word for `within`.
        "in" => number_behind() && after.is_some_and(|mark| mark.gap != Gap::None || mark.token == Token::DotDot),
        text => words::CLAUSES.contains(&text),
    }
}

/// Length of a run that begins with `len` marks of a unit.
fn run_len(rest: &[Mark], mut len: usize) -> usize {
    loop {
        let more = part_len(rest, len);
        if more == 0 {
            return len;
        }
        len += more;
    }
}

/// The mark at `at`, if it touches the one before.
fn near<'a, 's>(rest: &'a [Mark<'s>], at: usize) -> Option<&'a Mark<'s>> {
    rest.get(at).filter(|mark| mark.gap == Gap::None)
}

fn part_len(rest: &[Mark], at: usize) -> usize {
    let Some(next) = near(rest, at) else { return 0 };
    match next.token {
        Token::Superscript => 1,
        Token::Caret => exponent_len(rest, at + 1).map_or(0, |len| len + 1),
        // `°C`; behind a word or a number nothing can stick without an operator.
        Token::Word
            if at.checked_sub(1).and_then(|before| rest.get(before)).is_some_and(|m| m.token == Token::Degree) =>
        {
            1
        }
        Token::Star | Token::MiddleDot | Token::Slash => match near(rest, at + 1) {
            Some(mark) if matches!(mark.token, Token::Word | Token::Percent | Token::Degree) => 2,
            Some(mark) if mark.token == Token::OpenParen => bracket_len(rest, at + 1).map_or(0, |len| len + 1),
            _ => 0,
        },
        _ => 0,
    }
}

/// `2`, `-1`, `(1/2)`, `(-2)`.
fn exponent_len(rest: &[Mark], at: usize) -> Option<usize> {
    let mut len = 0;
    let mut take = |wanted: &[Token]| {
        let found = near(rest, at + len).is_some_and(|mark| wanted.contains(&mark.token));
        len += usize::from(found);
        found
    };
    let bracket = take(&[Token::OpenParen]);
    take(&[Token::Minus, Token::Plus]);
    if !take(&[Token::Number]) {
        return None;
    }
    if bracket {
        if take(&[Token::Slash]) && !take(&[Token::Number]) {
            return None;
        }
        if !take(&[Token::CloseParen]) {
            return None;
        }
    }
    Some(len)
}

/// A bracket that holds only what a unit can: words, operators, exponents.
fn bracket_len(rest: &[Mark], at: usize) -> Option<usize> {
    let mut depth = 0usize;
    let mut len = 0;
    loop {
        let mark = near(rest, at + len)?;
        match mark.token {
            Token::OpenParen => depth += 1,
            Token::CloseParen if mark.is_supplied() => return None,
            Token::CloseParen => depth -= 1,
            Token::Caret => len += exponent_len(rest, at + len + 1)?,
            Token::Word
            | Token::Star
            | Token::MiddleDot
            | Token::Slash
            | Token::Superscript
            | Token::Degree
            | Token::Percent => {}
            _ => return None,
        }
        len += 1;
        if depth == 0 {
            return Some(len);
        }
    }
}

fn unit_text(marks: &[Mark]) -> UnitText {
    let text = match marks {
        [one] => one.text.into(),
        many => many.iter().map(|mark| mark.text).collect::<String>().into(),
    };
    UnitText { text, span: place(marks) }
}

/// A unit, found by `len`; nothing where there is none.
fn unit_by<'s>(len: fn(&[Mark]) -> usize) -> impl Parser<'s, Marks<'s>, Option<UnitText>, Extra> + Clone {
    custom::<_, Marks<'s>, _, Extra>(move |inp| {
        let start = inp.cursor();
        let rest: Marks<'s> = inp.slice_from(&start..);
        let len = len(rest);
        for _ in 0..len {
            inp.skip();
        }
        Ok((len > 0).then(|| unit_text(rest.get(..len).unwrap_or(&[]))))
    })
}

/// The unit behind a number, if there is one.
pub(super) fn unit<'s>() -> impl Parser<'s, Marks<'s>, Option<UnitText>, Extra> + Clone {
    unit_by(unit_len)
}

/// The unit behind `as`.
pub(super) fn display_unit<'s>() -> impl Parser<'s, Marks<'s>, UnitText, Extra> + Clone {
    select(|_: Mark<'s>, _| Some(()))
        .rewind()
        .ignore_then(unit_by(display_unit_len))
        .filter(Option::is_some)
        .map(|unit| unit.unwrap_or_else(|| UnitText { text: "".into(), span: Span::default() }))
        .labelled(What::Unit)
}

/// The digits of a number: as written, and their value.
fn digits<'s>() -> impl Parser<'s, Marks<'s>, (Mark<'s>, f64), Extra> + Clone {
    select(|mark: Mark<'s>, _| (mark.token == Token::Number).then(|| (mark, value_of(mark.text))))
        .labelled(What::Number)
}

fn value_of(text: &str) -> f64 {
    if text.contains('_') {
        text.replace('_', "").parse().unwrap_or(f64::NAN)
    } else {
        text.parse().unwrap_or(f64::NAN)
    }
}

/// A number with its unit and nothing else.
pub(super) fn plain<'s>() -> impl Parser<'s, Marks<'s>, Literal, Extra> + Clone {
    digits().then(unit()).map(|((mark, value), unit)| Literal {
        number: mark.text.into(),
        value,
        number_span: mark.span,
        unit,
        tolerance: None,
        distribution: None,
    })
}

/// `60 mm ± 0.1 mm normal` and the like. `bound` reads an end of `within a .. b`.
pub(super) fn literal<'s>(bound: Parses<'s, Expr>) -> Parses<'s, (Literal, Span)> {
    let tolerance = tolerance(bound);
    let distribution = name_among(words::DISTRIBUTIONS);
    plain()
        .then(tolerance.or_not())
        .then(distribution.or_not())
        .map_with(|((literal, tolerance), distribution), e| {
            (Literal { tolerance, distribution, ..literal }, place(e.slice()))
        })
        .boxed()
}

/// Everything that may be said of how sure a number is.
fn tolerance<'s>(bound: Parses<'s, Expr>) -> Parses<'s, Tolerance> {
    // Most numbers have none; one look spares trying every form.
    let may_begin = select(|mark: Mark<'s>, _| {
        let may = match mark.token {
            Token::PlusMinus | Token::Tilde | Token::Plus => true,
            Token::Word => {
                matches!(mark.text, "within" | "in" | "u")
                    || mark.text.len() <= 4 && mark.text.ends_with(|end: char| end.is_ascii_digit())
            }
            _ => false,
        };
        may.then_some(())
    });
    let any_form = choice((
        plus_minus(),
        within(bound),
        word("u").ignore_then(plain()).map(|literal| Tolerance::Standard(Box::new(literal))),
        class().map(Tolerance::Class),
        old_limits(),
    ));
    may_begin.rewind().ignore_then(any_form).boxed()
}

/// `± 0.1 mm`, `± (+0.2, -0.0) mm`; `~` is an older spelling of the sign.
fn plus_minus<'s>() -> Parses<'s, Tolerance> {
    let sign = mark(Token::PlusMinus).or(mark(Token::Tilde).validate(|span, _, emitter| {
        emitter.emit(old_spelling(span, "`~` is written `±`", "±"));
        span
    }));
    let signed = choice((mark(Token::Plus).to(1.0), mark(Token::Minus).to(-1.0)))
        .or_not()
        .then(digits())
        .map(|(sign, (_, value))| sign.unwrap_or(1.0) * value);
    let limits = signed
        .clone()
        .then_ignore(mark(Token::Comma))
        .then(signed)
        .delimited_by(mark(Token::OpenParen), mark(Token::CloseParen))
        .then(unit())
        .map_with(|((upper, lower), unit), e| Tolerance::Limits { upper, lower, unit, span: place(e.slice()) });
    sign.ignore_then(limits.or(plain().map(|literal| Tolerance::Symmetric(Box::new(literal))))).boxed()
}

/// `within 0.08 .. 0.16`; `in` is an older spelling of the word.
fn within<'s>(bound: Parses<'s, Expr>) -> Parses<'s, Tolerance> {
    let sign = word("within").ignored().or(word("in").validate(|span, _, emitter| {
        emitter.emit(old_spelling(span, "bounds are written with `within`; `in` is the inch", "within"));
    }));
    sign.ignore_then(range(bound)).map(|range| Tolerance::Within(Box::new(range))).boxed()
}

/// `a .. b`.
pub(super) fn range<'s>(bound: Parses<'s, Expr>) -> Parses<'s, Range> {
    bound
        .clone()
        .then_ignore(mark(Token::DotDot).labelled(What::Range))
        .then(bound)
        .map(|(low, high)| Range { low, high })
        .boxed()
}

/// `h6`, `H7`, `js13`: one or two letters, one or two digits.
fn class<'s>() -> impl Parser<'s, Marks<'s>, Name, Extra> + Clone {
    select(|mark: Mark<'s>, _| {
        let n_letters = mark.text.bytes().take_while(u8::is_ascii_alphabetic).count();
        let digits = mark.text.get(n_letters..).unwrap_or("");
        let fits = mark.token == Token::Word
            && mark.gap != Gap::Line
            && (1..=2).contains(&n_letters)
            && (1..=2).contains(&digits.len())
            && digits.bytes().all(|byte| byte.is_ascii_digit());
        fits.then(|| name_of(&mark))
    })
}

/// `60 mm +0.2/-0.0 mm`, an older spelling: signs that stick to their numbers.
fn old_limits<'s>() -> Parses<'s, Tolerance> {
    let spaced_plus = select(|mark: Mark<'s>, _| (mark.token == Token::Plus && mark.gap == Gap::Space).then_some(mark));
    let near_digits =
        select(|mark: Mark<'s>, _| (mark.token == Token::Number && mark.gap == Gap::None).then_some(mark));
    spaced_plus
        .ignore_then(near_digits)
        .then_ignore(touching(Token::Slash))
        .then_ignore(touching(Token::Minus))
        .then(near_digits)
        .map_with(|pair, e| (pair, place(e.slice())))
        .then(unit())
        .validate(|(((upper, lower), signs), unit), e, emitter| {
            let spelling = format!("± (+{}, -{})", upper.text, lower.text);
            emitter.emit(old_spelling(signs, "two limits are written in brackets behind `±`", &spelling));
            Tolerance::Limits {
                upper: value_of(upper.text),
                lower: -value_of(lower.text),
                unit,
                span: place(e.slice()),
            }
        })
        .boxed()
}

fn old_spelling(span: Span, message: &str, spelling: &str) -> Fault {
    Fault::report(Diagnostic::new(codes::OLD_SPELLING, span, message).with_fix(
        format!("write `{spelling}`"),
        span,
        spelling,
    ))
}
