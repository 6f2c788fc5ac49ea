//! From text to tokens: the marks of the language, each with its bytes.
//!
//! Comments and line ends are tokens, white space is not: whether two tokens
//! touch is seen from their spans. Nothing here knows a keyword, a unit or a
//! name's meaning, and no input makes it fail: what fits nowhere is
//! [`Token::Unknown`], one whole character long.
//!
//! The crate stands alone because the generated tables are what takes longest
//! to build.

mod callbacks;
#[cfg(test)]
mod tests;
mod token;

pub use token::Token;

use logos::Logos;
use pintle_text::Span;

/// The longest text that is read: positions are 32-bit and must not overflow
/// when they are moved.
pub const MAX_BYTES: usize = (u32::MAX / 4) as usize;

/// All tokens of `text` in order, with their bytes.
///
/// Every byte of the text lies in a token or is white space (or the byte order
/// mark that some editors put first). What stands past [`MAX_BYTES`] is not read.
pub fn lex(text: &str) -> Vec<(Token, Span)> {
    let text = if text.len() <= MAX_BYTES { text } else { text.get(..floor_boundary(text, MAX_BYTES)).unwrap_or("") };
    let start = if text.starts_with('\u{FEFF}') { '\u{FEFF}'.len_utf8() } else { 0 };
    let mut tokens = Vec::with_capacity(text.len() / 3);
    let mut lexer = Token::lexer(text);
    lexer.bump(start);
    // Bumping before the first `next` only moves the start of the first token.
    while let Some(token) = lexer.next() {
        let span = lexer.span();
        tokens.push((token.unwrap_or(Token::Unknown), Span::new(span.start as u32, span.end as u32)));
    }
    tokens
}

/// Whether `character` separates tokens without being one.
///
/// The fixed-width and thin spaces come with text pasted from documents; they
/// look like a space and are taken as one.
pub fn is_white(character: char) -> bool {
    matches!(character, ' ' | '\t' | '\u{0C}' | '\u{A0}' | '\u{2007}' | '\u{2009}' | '\u{202F}')
}

fn floor_boundary(text: &str, mut at: usize) -> usize {
    while at > 0 && !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}
