//! What stands before the braces of an item, or makes up a whole line.

use chumsky::prelude::*;
use chumsky::primitive::select;
use pintle_lexer::Token;

use super::clauses::{clauses, skip_to_clause};
use super::expression::{Expressions, expressions};
use super::lines::Lines;
use super::literal::range;
use super::{Extra, Marks, Parses, mark, name, place, text, word};
use crate::ast::{AssumeStatus, Clauses, Expr, ExprKind, Name, Parameter, Path, Text, Wanted};
use crate::faults::What;
use crate::marks::{Gap, Mark};

/// A head with the clauses behind it.
pub(crate) type Head<T> = (T, Clauses);

/// Where an arrow leaves and where it reaches.
pub(crate) type Sides = (Path, Path);

/// The right side of a definition, as far as the head tells it.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Definer {
    /// No `=`, already reported where one is needed.
    None,
    /// An expression.
    Value(Expr),
    /// `choose`, whose arms stand in the block.
    Choose,
}

/// `path : kind = value`
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct FieldHead {
    pub path: Path,
    pub kind: Option<Name>,
    pub definer: Definer,
}

/// `formula name(parameters) : kind = value`
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Signature {
    pub name: Name,
    pub parameters: Vec<Parameter>,
    pub kind: Option<Name>,
    pub definer: Definer,
}

/// `ledger name of train under each of (a, b + c)`
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct LedgerHead {
    pub name: Name,
    pub train: Option<Name>,
    pub under: Vec<Vec<Name>>,
}

/// All parsers, built once per file.
pub(crate) struct Grammar<'s> {
    /// Behind a closing brace.
    pub tail: Parses<'s, Clauses>,
    /// `name = value`
    pub field: Parses<'s, Head<FieldHead>>,
    /// `lose name at member = value`
    pub entry: Parses<'s, Head<(Option<Path>, FieldHead)>>,
    /// `given name = value`
    pub keyword_field: Parses<'s, Head<FieldHead>>,
    /// `sheet "title"`
    pub titled: Parses<'s, Head<Text>>,
    /// `use std.materials`
    pub using: Parses<'s, Head<Text>>,
    /// `assume "..." open`
    pub assume: Parses<'s, Head<(Text, AssumeStatus)>>,
    /// `material name`
    pub named: Parses<'s, Head<Name>>,
    /// `body name = shape`
    pub assigned: Parses<'s, Head<(Name, Path)>>,
    /// `rotor name about x`
    pub rotor: Parses<'s, Head<(Name, Option<Name>)>>,
    /// `brake name on member`
    pub acting: Parses<'s, Head<(Name, Option<Path>)>>,
    /// `axis name = through point along y`
    pub axis: Parses<'s, Head<(Name, Expr, Expr)>>,
    /// `unit name = value`
    pub unit: Parses<'s, Head<(Name, Expr)>>,
    /// `clutch name = a -> b`
    pub clutch: Parses<'s, Head<(Name, Option<Sides>)>>,
    /// `ledger name of train under worn`
    pub ledger: Parses<'s, Head<LedgerHead>>,
    /// `wanted path : kind within a .. b where f == g`
    pub wanted: Parses<'s, Head<Wanted>>,
    /// `limit every a <= b`
    pub limit: Parses<'s, Head<(bool, Expr)>>,
    /// `require a < b`
    pub require: Parses<'s, Head<Expr>>,
    /// `confirm a agrees b`
    pub confirm: Parses<'s, Head<(Expr, Expr)>>,
    /// `formula name(a : kind) : kind = value`
    pub signature: Parses<'s, Head<Signature>>,
    /// `offers a, b`
    pub offers: Parses<'s, Head<Vec<Name>>>,
    /// The lines inside rotors, trains, ledgers and the like.
    pub lines: Lines<'s>,
}

/// The value behind `=`; what is unreadable is reported and is `Missing`.
pub(super) fn value<'s>(full: Parses<'s, Expr>) -> Parses<'s, Expr> {
    full.recover_with(via_parser(skip_to_clause(0).map(|span| Expr { kind: ExprKind::Missing, span }))).boxed()
}

fn definer<'s>(full: Parses<'s, Expr>) -> Parses<'s, Definer> {
    let choose = word("choose").then_ignore(end()).to(Definer::Choose);
    mark(Token::Equals).labelled(What::Equals).ignore_then(choose.or(value(full).map(Definer::Value))).boxed()
}

fn kind<'s>() -> impl Parser<'s, Marks<'s>, Option<Name>, Extra> + Clone {
    let kind = select(|mark: Mark<'s>, _| (mark.token == Token::Word).then(|| super::name_of(&mark)));
    mark(Token::Colon)
        .ignore_then(kind.labelled(What::Kind).map(Some).recover_with(via_parser(empty().to(None))))
        .or_not()
        .map(Option::flatten)
}

impl<'s> Grammar<'s> {
    pub fn new() -> Grammar<'s> {
        let Expressions { full, sum, path, repeat } = expressions();
        let clauses = clauses(repeat);
        let head = |parser: Parses<'s, _>| parser.then(clauses.clone()).boxed();
        let named = || any().ignore_then(name());
        let equals = || mark(Token::Equals).labelled(What::Equals);

        let field = path
            .clone()
            .then(kind())
            .then(definer(full.clone()).recover_with(via_parser(skip_to_clause(0).to(Definer::None))))
            .map(|((path, kind), definer)| FieldHead { path, kind, definer })
            .then(clauses.clone())
            .boxed();

        let entry = any()
            .ignore_then(path.clone())
            .then(word("at").ignore_then(path.clone()).or_not())
            .then(kind())
            .then(definer(full.clone()).recover_with(via_parser(skip_to_clause(0).to(Definer::None))))
            .map(|(((path, at), kind), definer)| (at, FieldHead { path, kind, definer }))
            .then(clauses.clone())
            .boxed();

        let confirmed = word("confirmed").ignore_then(text().or_not()).map(AssumeStatus::Confirmed);
        let assume = any()
            .ignore_then(text())
            .then(word("open").to(AssumeStatus::Open).or(confirmed).or_not())
            .map(|(text, status)| (text, status.unwrap_or(AssumeStatus::Unstated)))
            .then(clauses.clone())
            .boxed();

        let assigned = named().then_ignore(equals()).then(path.clone()).then(clauses.clone()).boxed();
        let rotor = named().then(word("about").ignore_then(name()).or_not()).then(clauses.clone()).boxed();
        let acting = named().then(word("on").ignore_then(path.clone()).or_not()).then(clauses.clone()).boxed();
        let axis = named()
            .then_ignore(equals())
            .then_ignore(word("through").labelled(What::Through))
            .then(sum.clone())
            .then_ignore(word("along").labelled(What::Along))
            .then(sum.clone())
            .map(|((name, through), along)| (name, through, along))
            .then(clauses.clone())
            .boxed();
        let unit = named().then_ignore(equals()).then(value(full.clone())).then(clauses.clone()).boxed();
        let arrow = path.clone().then_ignore(mark(Token::Arrow).labelled(What::Arrow)).then(path.clone());
        let clutch = named().then(mark(Token::Equals).ignore_then(arrow).or_not()).then(clauses.clone()).boxed();

        let sum_of_cases = name().separated_by(mark(Token::Plus)).at_least(1).collect::<Vec<Name>>();
        let each = word("each").then(word("of")).ignore_then(
            sum_of_cases.clone().separated_by(mark(Token::Comma)).allow_trailing().collect::<Vec<_>>().delimited_by(
                mark(Token::OpenParen).labelled(What::OpenParen),
                mark(Token::CloseParen).labelled(What::CloseParen),
            ),
        );
        let under = word("under").ignore_then(each.or(sum_of_cases.map(|cases| vec![cases])));
        let ledger = named()
            .then(word("of").ignore_then(name()).or_not())
            .then(under.or_not())
            .map(|((name, train), under)| LedgerHead { name, train, under: under.unwrap_or_default() })
            .then(clauses.clone())
            .boxed();

        let equations = word("where").ignore_then(
            full.clone().separated_by(mark(Token::Comma)).at_least(1).allow_trailing().collect::<Vec<Expr>>(),
        );
        let wanted = any()
            .ignore_then(path.clone())
            .then(kind())
            .then(word("within").ignore_then(range(sum.clone())).or_not())
            .then(equations.or_not())
            .map(|(((path, kind), range), equations)| Wanted {
                path,
                kind,
                range,
                equations: equations.unwrap_or_default(),
            })
            .then(clauses.clone())
            .boxed();

        let require = any().ignore_then(value(full.clone())).then(clauses.clone()).boxed();
        let every = every().or_not().map(|every| every.is_some());
        let limit = any().ignore_then(every).then(value(full.clone())).then(clauses.clone()).boxed();
        let confirm = any()
            .ignore_then(full.clone())
            .then_ignore(word("agrees").labelled(What::Agrees))
            .then(value(full.clone()))
            .then(clauses.clone())
            .boxed();

        let parameter = name()
            .then(kind())
            .then(mark(Token::Equals).ignore_then(full.clone()).or_not())
            .map(|((name, kind), default)| Parameter { name, kind, default });
        let parameters = parameter
            .separated_by(mark(Token::Comma))
            .allow_trailing()
            .collect::<Vec<Parameter>>()
            .delimited_by(mark(Token::OpenParen), mark(Token::CloseParen).labelled(What::CloseParen));
        let signature = named()
            .then(parameters.or_not())
            .then(kind())
            .then(definer(full.clone()).or_not())
            .map(|(((name, parameters), kind), definer)| Signature {
                name,
                parameters: parameters.unwrap_or_default(),
                kind,
                definer: definer.unwrap_or(Definer::None),
            })
            .then(clauses.clone())
            .boxed();

        let offers = any()
            .ignore_then(name().separated_by(mark(Token::Comma)).at_least(1).allow_trailing().collect::<Vec<_>>())
            .then(clauses.clone())
            .boxed();

        Grammar {
            keyword_field: any().ignore_then(field.clone()).boxed(),
            field,
            entry,
            titled: any().ignore_then(text()).then(clauses.clone()).boxed(),
            using: head(any().ignore_then(using()).boxed()),
            assume,
            named: named().then(clauses.clone()).boxed(),
            assigned,
            rotor,
            acting,
            axis,
            unit,
            clutch,
            ledger,
            wanted,
            limit,
            require,
            confirm,
            signature,
            offers,
            lines: Lines::new(full, sum, path, clauses.clone()),
            tail: clauses,
        }
    }
}

/// `every` before another word; alone it is a name.
fn every<'s>() -> impl Parser<'s, Marks<'s>, (), Extra> + Clone {
    word("every").ignored().then_ignore(select(|mark: Mark<'s>, _| (mark.token == Token::Word).then_some(())).rewind())
}

/// The words behind `use`, which touch: `std.materials`, `./parts/rope-drum`.
fn using<'s>() -> impl Parser<'s, Marks<'s>, Text, Extra> + Clone {
    let accepted = |mark: &Mark| {
        matches!(mark.token, Token::Word | Token::Number | Token::Dot | Token::DotDot | Token::Slash | Token::Minus)
    };
    let first = any().filter(move |mark: &Mark<'s>| accepted(mark));
    let more = any().filter(move |mark: &Mark<'s>| mark.gap == Gap::None && accepted(mark));
    first
        .then(more.repeated())
        .to_slice()
        .map(|marks: Marks<'s>| Text { text: marks.iter().map(|mark| mark.text).collect(), span: place(marks) })
        .labelled(What::Path)
}
