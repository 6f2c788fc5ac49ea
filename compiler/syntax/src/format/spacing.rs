//! How much white space stands between two tokens of one line.

use pintle_lexer::Token;

use super::plan::Piece;
use crate::marks::Gap;

/// What a token does to its neighbours, beyond what its kind says.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Role {
    /// Nothing more.
    Plain,
    /// A `+` or `-` that belongs to the operand behind it.
    Sign,
    /// The first token of a unit.
    Unit,
    /// Inside a unit or the path of a `use`: touches the token before it.
    Tight,
    /// A `^` or `/` that could become part of the unit before it if it touched it.
    Loose,
}

const NONE: &str = "";
const ONE: &str = " ";

/// The white space between two tokens of one line.
pub(super) fn between(before: &Piece, piece: &Piece) -> &'static str {
    use Token::*;
    let kept = if piece.gap == Gap::None { NONE } else { ONE };
    match (before.token, piece.token) {
        (_, Comment) => "  ",
        _ if piece.role == Role::Tight => NONE,
        _ if piece.role == Role::Unit => ONE,
        (OpenBrace, CloseBrace) => NONE,
        (OpenBrace, _) | (_, CloseBrace | OpenBrace) => ONE,
        (_, Comma) => NONE,
        (Comma, _) => ONE,
        (OpenParen | OpenBracket, _) | (_, CloseParen | CloseBracket) => NONE,
        (CloseBrace, _) => ONE,
        // An index touches its name, and a call usually does.
        (Word, OpenParen | OpenBracket) => kept,
        _ if before.role == Role::Sign => NONE,
        (_, Superscript) => NONE,
        (_, Dot) | (Dot, _) => NONE,
        _ if piece.role == Role::Loose || before.role == Role::Loose => ONE,
        (_, Caret) | (Caret, _) => NONE,
        // `pi/4` stays as written, as long as it is tight on both sides.
        (_, Slash) if piece.touches_both => NONE,
        (Slash, _) if before.touches_both => NONE,
        _ => ONE,
    }
}

/// Whether the text before a `+` or `-` ends an operand, so that the sign joins two.
///
/// Words that introduce a value are told from names by how the author wrote the
/// sign: `at -16 mm` against `at - 16 mm`.
pub(super) fn is_operand_end(token: Token, text: &str, gap_behind: Gap) -> bool {
    const BEFORE_VALUE: &[&str] = &[
        "at", "from", "to", "within", "when", "where", "agrees", "incline", "through", "along", "by", "over", "limit",
        "every", "require", "confirm", "and", "or", "not", "under",
    ];
    match token {
        Token::Word => !BEFORE_VALUE.contains(&text) || gap_behind != Gap::None,
        Token::Number
        | Token::Str
        | Token::UnterminatedStr
        | Token::CloseParen
        | Token::CloseBracket
        | Token::Superscript
        | Token::Percent
        | Token::Degree => true,
        _ => false,
    }
}
