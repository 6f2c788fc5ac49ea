//! Lines inside the blocks of rotors, loads, trains, ledgers and `choose`.

use chumsky::prelude::*;
use chumsky::primitive::select;
use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::heads::Head;
use super::{Parses, mark, name, name_among, word};
use crate::ast::{Clauses, Expr, ExprKind, LedgerLineKind, LoadPath, Name, Path, StateSpec};
use crate::codes;
use crate::faults::{Fault, What};
use crate::marks::Mark;
use crate::words;

/// `less hole at 3 mm from far_flange`
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct PlacementHead {
    pub less: bool,
    pub part: Path,
    pub at: Option<Expr>,
    pub from: Option<Name>,
}

/// `gear stage1 = motor -> drum`
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct LinkHead {
    pub kind: Name,
    pub name: Name,
    pub from: Path,
    pub to: Path,
}

/// The parsers of lines.
pub(crate) struct Lines<'s> {
    /// A line of a rotor.
    pub placement: Parses<'s, Head<PlacementHead>>,
    /// A line of a train.
    pub link: Parses<'s, Head<LinkHead>>,
    /// `path = incline slope`
    pub load_path: Parses<'s, Head<LoadPath>>,
    /// `start ...`, `end ...`
    pub state: Parses<'s, Head<StateSpec>>,
    /// `travel ...`
    pub travel: Parses<'s, Head<LedgerLineKind>>,
    /// `spring ...` in a ledger
    pub spring: Parses<'s, Head<LedgerLineKind>>,
    /// `value when condition`, `value otherwise`
    pub arm: Parses<'s, (Expr, Option<Expr>)>,
    /// The expressions of a line that is given meaning later.
    pub later: Parses<'s, Head<Vec<Expr>>>,
}

enum Where {
    At(Expr),
    From(Name),
}

impl<'s> Lines<'s> {
    pub fn new(
        full: Parses<'s, Expr>,
        sum: Parses<'s, Expr>,
        path: Parses<'s, Path>,
        clauses: Parses<'s, Clauses>,
    ) -> Lines<'s> {
        let less = word("less").then_ignore(
            select(|mark: Mark<'s>, _| {
                (mark.token == Token::Word && !mark.is_one_of(&["at", "from", "for"])).then_some(())
            })
            .rewind(),
        );
        let place = choice((
            word("at").then(super::heads::value(sum.clone())).map(|(span, at)| (span, Where::At(at))),
            word("from").then(name()).map(|(span, from)| (span, Where::From(from))),
        ));
        let placement = less
            .or_not()
            .then(path.clone())
            .then(place.repeated().collect::<Vec<_>>())
            .validate(|((less, part), places), _, emitter| {
                let mut head = PlacementHead { less: less.is_some(), part, at: None, from: None };
                for (span, place) in places {
                    let repeated = match place {
                        Where::At(at) => head.at.replace(at).is_some(),
                        Where::From(from) => head.from.replace(from).is_some(),
                    };
                    if repeated {
                        let message = "a placement has one `at` and one `from`";
                        emitter.emit(Fault::report(Diagnostic::new(codes::REPEATED_CLAUSE, span, message)));
                    }
                }
                head
            })
            .then(clauses.clone())
            .boxed();

        let equals = || mark(Token::Equals).labelled(What::Equals);
        let link = name_among(words::LINKS)
            .or(name())
            .then(name())
            .then_ignore(equals())
            .then(path.clone())
            .then_ignore(mark(Token::Arrow).labelled(What::Arrow))
            .then(path.clone())
            .map(|(((kind, name), from), to)| LinkHead { kind, name, from, to })
            .then(clauses.clone())
            .boxed();

        let load_path = any()
            .then(equals())
            .ignore_then(
                choice((
                    word("vertical").map(LoadPath::Vertical),
                    word("level").map(LoadPath::Level),
                    word("incline").ignore_then(super::heads::value(sum.clone())).map(LoadPath::Incline),
                ))
                .labelled(What::LoadPath),
            )
            .then(clauses.clone())
            .boxed();

        let at_rest = word("at").then(word("rest")).map(|(at, rest): (Span, Span)| StateSpec::AtRest(at.to(rest)));
        let speed = path
            .clone()
            .then_ignore(equals())
            .then(super::heads::value(full.clone()))
            .map(|(path, value)| StateSpec::Speed { path, value });
        let state = any()
            .ignore_then(
                choice((at_rest, word("from").ignore_then(path.clone()).map(StateSpec::From), speed))
                    .labelled(What::State),
            )
            .then(clauses.clone())
            .boxed();

        let direction = || name_among(words::DIRECTIONS);
        // `travel cradle down_path`: the distance is wanted.
        let open_distance = direction()
            .then_ignore(end())
            .rewind()
            .map(|name: Name| Expr { kind: ExprKind::Missing, span: Span::at(name.span.start) });
        let travel = any()
            .ignore_then(path.clone())
            .then(open_distance.or(super::heads::value(sum.clone())))
            .then(direction().or_not())
            .map(|((member, distance), direction)| LedgerLineKind::Travel { member, distance, direction })
            .then(clauses.clone())
            .boxed();
        let spring = any()
            .ignore_then(path)
            .then_ignore(word("from").labelled(What::From))
            .then(sum.clone())
            .then_ignore(word("to").labelled(What::To))
            .then(super::heads::value(sum))
            .map(|((spring, from), to)| LedgerLineKind::Spring { spring, from, to })
            .then(clauses.clone())
            .boxed();

        let when = word("when").ignore_then(super::heads::value(full.clone())).map(Some);
        let arm =
            full.clone().then(when.or(word("otherwise").to(None)).labelled(What::When)).then_ignore(end()).boxed();

        Lines { placement, link, load_path, state, travel, spring, arm, later: later(full, clauses) }
    }
}

/// Every expression that can be read in a line, whatever words join them.
fn later<'s>(full: Parses<'s, Expr>, clauses: Parses<'s, Clauses>) -> Parses<'s, Head<Vec<Expr>>> {
    const JOINING: &[&str] = &[
        "at",
        "when",
        "by",
        "over",
        "from",
        "to",
        "of",
        "on",
        "apply",
        "release",
        "steps",
        "failing",
        "under",
        "each",
        "in",
        "until",
        "with",
        "every",
        "then",
        "repeating",
    ];
    let clause_words: &[&str] = &["cite", "because", "as", "for"];
    let joining = select(|mark: Mark<'s>, _| {
        (mark.is_one_of(JOINING)
            || matches!(mark.token, Token::Comma | Token::Equals | Token::DotDot | Token::Colon | Token::Arrow))
        .then_some(())
    });
    let stop = select(move |mark: Mark<'s>, _| mark.is_one_of(clause_words).then_some(()));
    let part = choice((joining.to(None), full.map(Some))).boxed();
    stop.not()
        .ignore_then(part)
        .repeated()
        .collect::<Vec<Option<Expr>>>()
        .map(|parts| parts.into_iter().flatten().collect::<Vec<Expr>>())
        .then(clauses)
        .boxed()
}
