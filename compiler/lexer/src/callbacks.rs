//! What the patterns cannot say: words beyond ASCII, prose lines, `+/-`.

use logos::Lexer;

use crate::{Token, is_white};

/// Completes a word that began with ASCII letters: `m` of `maß`.
pub(crate) fn word(lexer: &mut Lexer<Token>) {
    let remainder = lexer.remainder();
    if remainder.as_bytes().first().is_some_and(|byte| *byte >= 0x80) {
        let more = word_len(remainder);
        lexer.bump(more);
    }
}

/// Decides what a character outside ASCII begins.
pub(crate) fn non_ascii(lexer: &mut Lexer<Token>) -> Token {
    let Some(first) = lexer.slice().chars().next() else { return Token::Unknown };
    match first {
        '·' | '\u{22C5}' => Token::MiddleDot,
        '±' => Token::PlusMinus,
        '°' => Token::Degree,
        '§' => Token::Section,
        '≤' => Token::LessEqual,
        '≥' => Token::GreaterEqual,
        '\u{85}' | '\u{2028}' | '\u{2029}' => Token::LineSeparator,
        '⁺' | '⁻' => match superscript_len(lexer.remainder()) {
            0 => Token::Unknown,
            digits => {
                lexer.bump(digits);
                Token::Superscript
            }
        },
        digit if is_superscript(digit) => {
            let digits = superscript_len(lexer.remainder());
            lexer.bump(digits);
            Token::Superscript
        }
        letter if unicode_ident::is_xid_start(letter) => {
            let more = word_len(lexer.remainder());
            lexer.bump(more);
            Token::Word
        }
        _ => Token::Unknown,
    }
}

/// A bar that is the first mark of its line takes the line.
pub(crate) fn prose(lexer: &mut Lexer<Token>) -> Token {
    let before = lexer.source().get(..lexer.span().start).unwrap_or("");
    // Only the blanks before the bar are walked over, so this stays linear.
    let last_mark = before.trim_start_matches('\u{FEFF}').chars().rev().find(|c| !is_white(*c));
    if !matches!(last_mark, None | Some('\n' | '\r')) {
        return Token::Unknown;
    }
    let ends_line = |c: char| matches!(c, '\n' | '\r' | '\u{85}' | '\u{2028}' | '\u{2029}');
    let rest = lexer.remainder();
    let len = rest.find(ends_line).unwrap_or(rest.len());
    lexer.bump(len);
    Token::Prose
}

/// Takes `+/-` as one mark where it stands by itself: blank, bracket or line
/// start before it, and behind it a blank, a digit or `(`. Elsewhere a `+`.
pub(crate) fn plus(lexer: &mut Lexer<Token>) -> Token {
    let Some(behind) = lexer.remainder().strip_prefix("/-") else { return Token::Plus };
    let before = lexer.source().get(..lexer.span().start).and_then(|text| text.chars().next_back());
    let free_before = before.is_none_or(|c| is_white(c) || matches!(c, '\n' | '\r' | '(' | '[' | '{' | '%' | '°'));
    let free_behind =
        behind.chars().next().is_none_or(|c| is_white(c) || c.is_ascii_digit() || matches!(c, '\n' | '\r' | '('));
    if free_before && free_behind {
        lexer.bump(2);
        Token::PlusMinus
    } else {
        Token::Plus
    }
}

/// Length of the run of word characters at the start of `text`. The middle dot
/// and its Greek twin may continue an identifier by Unicode's rules, but here
/// they multiply.
fn word_len(text: &str) -> usize {
    let ends = |c: char| matches!(c, '·' | '\u{387}') || !(c == '_' || unicode_ident::is_xid_continue(c));
    text.find(ends).unwrap_or(text.len())
}

fn is_superscript(c: char) -> bool {
    matches!(c, '⁰' | '¹' | '²' | '³' | '⁴'..='⁹')
}

fn superscript_len(text: &str) -> usize {
    text.find(|c| !is_superscript(c)).unwrap_or(text.len())
}
