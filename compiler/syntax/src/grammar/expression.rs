//! Expressions, loosest first: `or`, `and`, `not`, comparison, `about`,
//! `+ -`, `* /`, signs, `^`, and what stands behind a name.

use chumsky::pratt::{infix, left, postfix, prefix, right};
use chumsky::prelude::*;
use chumsky::primitive::select;
use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::literal::literal;
use super::{Extra, Marks, Parses, mark, name, name_of, place, text, touching, word};
use crate::ast::{Argument, BinaryOp, Expr, ExprKind, Literal, Name, Path, Repeat, Segment, UnaryOp};
use crate::codes;
use crate::faults::{Fault, What};
use crate::marks::{Gap, Mark};

/// The parsers of expressions that lines are made of.
#[derive(Clone)]
pub(super) struct Expressions<'s> {
    /// Everything.
    pub full: Parses<'s, Expr>,
    /// Sums, products and what is below: no comparison, no `about`.
    pub sum: Parses<'s, Expr>,
    /// A dotted path.
    pub path: Parses<'s, Path>,
    /// `for k from 1 to 3`.
    pub repeat: Parses<'s, Repeat>,
}

pub(super) fn expressions<'s>() -> Expressions<'s> {
    let mut parts = None;
    let full = recursive(|full| {
        let full: Parses<'s, Expr> = full.boxed();
        let mut path_out = None;
        let sum: Parses<'s, Expr> = recursive(|sum| {
            let path = path(sum.clone().boxed());
            path_out = Some(path.clone());
            arithmetic(operand(full.clone(), sum.boxed(), path))
        })
        .boxed();
        let result = condition(sum.clone());
        parts = Some((sum, path_out));
        result
    })
    .boxed();
    // The closures above ran while their parsers were built, so both are there;
    // an empty parser would only make every line an error.
    let (sum, path) = match parts {
        Some((sum, Some(path))) => (sum, path),
        _ => (full.clone(), path(full.clone())),
    };
    let repeat = repeat(sum.clone());
    Expressions { full, sum, path, repeat }
}

/// `for k from a to b`
fn repeat<'s>(sum: Parses<'s, Expr>) -> Parses<'s, Repeat> {
    word("for")
        .ignore_then(name())
        .then_ignore(word("from").labelled(What::From))
        .then(sum.clone())
        .then_ignore(word("to").labelled(What::To))
        .then(sum)
        .map(|((variable, from), to)| Repeat { variable, from, to })
        .boxed()
}

/// `runaway.drum.speed`, `layer[2].J`
fn path<'s>(index: Parses<'s, Expr>) -> Parses<'s, Path> {
    let index =
        index.delimited_by(touching(Token::OpenBracket), mark(Token::CloseBracket).labelled(What::CloseBracket));
    let segment = name().then(index.or_not()).map(|(name, index)| Segment { name, index: index.map(Box::new) });
    // Most paths are one word: they get room for one segment and no more.
    segment
        .clone()
        .then(mark(Token::Dot).ignore_then(segment).repeated().collect::<Vec<Segment>>())
        .map_with(|(first, more), e| {
            let mut segments = Vec::with_capacity(1 + more.len());
            segments.push(first);
            segments.extend(more);
            Path { segments, span: place(e.slice()) }
        })
        .boxed()
}

/// Words that cannot be an operand because an operator or a clause is meant.
fn operand_start<'s>() -> impl Parser<'s, Marks<'s>, (), Extra> + Clone {
    custom::<_, Marks<'s>, _, Extra>(|inp| {
        let start = inp.cursor();
        let rest: Marks<'s> = inp.slice_from(&start..);
        let next = rest.get(1).map(|mark| mark.token);
        let refused = rest.first().is_some_and(|mark| {
            mark.is_one_of(&["and", "or", "not"])
                || (mark.is_one_of(&["cite", "because"]) && matches!(next, Some(Token::Str | Token::UnterminatedStr)))
                || (mark.is_one_of(&["cite", "as", "within", "about"]) && next == Some(Token::Word))
        });
        if refused {
            let span = inp.span_since(&start);
            let expected: [What; 0] = [];
            return Err(chumsky::error::LabelError::<Marks<'s>, What>::expected_found(expected, None, span));
        }
        Ok(())
    })
}

/// What operators stand between.
fn operand<'s>(full: Parses<'s, Expr>, sum: Parses<'s, Expr>, path: Parses<'s, Path>) -> Parses<'s, Expr> {
    let comma = mark(Token::Comma);
    let close_paren = mark(Token::CloseParen).labelled(What::CloseParen);
    let close_bracket = mark(Token::CloseBracket).labelled(What::CloseBracket);

    let number =
        literal(sum.clone()).map(|(literal, span)| Expr { kind: ExprKind::Number(Box::new(literal)), span }).boxed();
    let quoted = text().map(|text| Expr { span: text.span, kind: ExprKind::Text(text) });

    let member = full
        .clone()
        .then(repeat(sum).or_not())
        .map(|(body, repeat)| match repeat {
            Some(repeat) => {
                let span = body.span.to(repeat.to.span);
                Expr { kind: ExprKind::Comprehension { body: Box::new(body), repeat: Box::new(repeat) }, span }
            }
            None => body,
        })
        .boxed();

    let list = member
        .clone()
        .separated_by(comma.clone())
        .allow_trailing()
        .collect::<Vec<Expr>>()
        .delimited_by(mark(Token::OpenBracket), close_bracket)
        .map_with(|members, e| Expr { kind: ExprKind::List(members), span: place(e.slice()) })
        .boxed();

    // One member is a value in brackets, more are a point.
    let bracket = full
        .separated_by(comma.clone())
        .at_least(1)
        .allow_trailing()
        .collect::<Vec<Expr>>()
        .delimited_by(mark(Token::OpenParen), close_paren.clone())
        .map_with(|mut members, e| {
            let span = place(e.slice());
            if members.len() == 1
                && let Some(only) = members.pop()
            {
                return Expr { kind: only.kind, span };
            }
            Expr { kind: ExprKind::Point(members), span }
        })
        .boxed();

    let argument_name = select(|mark: Mark<'s>, _| (mark.token == Token::Word).then(|| name_of(&mark)))
        .then_ignore(mark(Token::Equals));
    let argument = argument_name.or_not().then(member).map(|(name, value)| Argument { name, value });
    let arguments = argument
        .separated_by(comma)
        .allow_trailing()
        .collect::<Vec<Argument>>()
        .delimited_by(mark(Token::OpenParen), close_paren)
        .boxed();
    let named = operand_start().ignore_then(path).then(arguments.or_not()).map_with(|(path, arguments), e| {
        let span = place(e.slice());
        let kind = match arguments {
            Some(arguments) => ExprKind::Call { function: path, arguments },
            None => ExprKind::Path(path),
        };
        Expr { kind, span }
    });

    choice((number, named.boxed(), bracket, list, quoted)).labelled(What::Value).boxed()
}

fn binary(left: Expr, (op, op_span): (BinaryOp, Span), right: Expr) -> Expr {
    let span = left.span.to(right.span);
    Expr { kind: ExprKind::Binary { op, op_span, left: Box::new(left), right: Box::new(right) }, span }
}

fn unary((op, op_span): (UnaryOp, Span), operand: Expr) -> Expr {
    let span = op_span.to(operand.span);
    Expr { kind: ExprKind::Unary { op, operand: Box::new(operand) }, span }
}

/// An operator of two operands.
fn operator<'s>(find: fn(Token) -> Option<BinaryOp>) -> impl Parser<'s, Marks<'s>, (BinaryOp, Span), Extra> + Clone {
    select(move |mark: Mark<'s>, _| find(mark.token).map(|op| (op, mark.span)))
}

fn arithmetic<'s>(operand: Parses<'s, Expr>) -> Parses<'s, Expr> {
    let additive = operator(|token| match token {
        Token::Plus => Some(BinaryOp::Add),
        Token::Minus => Some(BinaryOp::Subtract),
        _ => None,
    });
    let multiplicative = operator(|token| match token {
        Token::Star | Token::MiddleDot => Some(BinaryOp::Multiply),
        Token::Slash => Some(BinaryOp::Divide),
        _ => None,
    });
    let power = operator(|token| (token == Token::Caret).then_some(BinaryOp::Power));
    let sign = select(|mark: Mark<'s>, _| match mark.token {
        Token::Plus => Some((UnaryOp::Plus, mark.span)),
        Token::Minus => Some((UnaryOp::Minus, mark.span)),
        _ => None,
    });
    let raised = select(|mark: Mark<'s>, _| {
        (mark.token == Token::Superscript && mark.gap == Gap::None).then(|| (raised_number(&mark), mark.span))
    });
    operand
        .pratt((
            infix(left(1), additive, |l, op, r, _| binary(l, op, r)),
            infix(left(2), multiplicative, |l, op, r, _| binary(l, op, r)),
            prefix(3, sign, |op, operand, _| unary(op, operand)),
            infix(right(4), power, |l, op, r, _| binary(l, op, r)),
            postfix(5, raised, |base, (exponent, span), _| binary(base, (BinaryOp::Power, span), exponent)),
        ))
        .boxed()
}

/// `⁻²` as an exponent: digits, with a sign in front where it is raised too.
fn raised_number(mark: &Mark) -> Expr {
    let mut negative = false;
    let digits: String = mark
        .text
        .chars()
        .filter_map(|c| match c {
            '⁰' => Some('0'),
            '¹' => Some('1'),
            '²' => Some('2'),
            '³' => Some('3'),
            '⁴'..='⁹' => char::from_digit(u32::from(c) - u32::from('⁰'), 10),
            _ => {
                negative |= c == '⁻';
                None
            }
        })
        .collect();
    let value = digits.parse().unwrap_or(f64::NAN);
    let literal = Literal {
        number: digits.into(),
        value,
        number_span: mark.span,
        unit: None,
        tolerance: None,
        distribution: None,
    };
    let number = Expr { kind: ExprKind::Number(Box::new(literal)), span: mark.span };
    if negative { unary((UnaryOp::Minus, mark.span), number) } else { number }
}

fn condition<'s>(sum: Parses<'s, Expr>) -> Parses<'s, Expr> {
    let axis: Parses<'s, Name> = word("about").ignore_then(name()).boxed();
    let about = sum
        .then(axis.or_not())
        .map(|(value, axis)| match axis {
            Some(axis) => {
                let span = value.span.to(axis.span);
                Expr { kind: ExprKind::About { value: Box::new(value), axis }, span }
            }
            None => value,
        })
        .boxed();
    let compares = operator(|token| match token {
        Token::EqualEqual => Some(BinaryOp::Equal),
        Token::NotEqual => Some(BinaryOp::NotEqual),
        Token::Less => Some(BinaryOp::Less),
        Token::LessEqual => Some(BinaryOp::LessEqual),
        Token::Greater => Some(BinaryOp::Greater),
        Token::GreaterEqual => Some(BinaryOp::GreaterEqual),
        _ => None,
    });
    let comparison = about
        .clone()
        .then(compares.then(about).repeated().collect::<Vec<_>>())
        .validate(|(first, rest), _, emitter| {
            if let Some((_, (_, second))) = rest.first().zip(rest.get(1).map(|(op, _)| op)) {
                let fault = Diagnostic::new(codes::CHAINED_COMPARISON, *second, "comparisons cannot be chained");
                emitter.emit(Fault::report(fault.with_help("write `a < b and b < c`")));
            }
            rest.into_iter().fold(first, |left, (op, right)| binary(left, op, right))
        })
        .boxed();
    let not = word("not").map(|span| (UnaryOp::Not, span));
    let joined = |text, op| word(text).map(move |span| (op, span));
    comparison
        .pratt((
            infix(left(1), joined("or", BinaryOp::Or), |l, op, r, _| binary(l, op, r)),
            infix(left(2), joined("and", BinaryOp::And), |l, op, r, _| binary(l, op, r)),
            prefix(3, not, |op, operand, _| unary(op, operand)),
        ))
        .boxed()
}
