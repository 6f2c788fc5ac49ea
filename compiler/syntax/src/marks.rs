//! What the grammar reads: tokens without comments and line ends, each with
//! its text and with what separates it from the one before.

use pintle_lexer::Token;
use pintle_text::Span;

/// What stands between a mark and the one before it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Gap {
    /// Nothing: they touch.
    None,
    /// White space on the same line.
    Space,
    /// At least one line end.
    Line,
}

/// One token as the grammar sees it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Mark<'s> {
    /// Its kind.
    pub token: Token,
    /// What is before it.
    pub gap: Gap,
    /// Where it stands: in the file, after layout in its item.
    pub span: Span,
    /// Its characters; empty for a bracket that layout closed by itself.
    pub text: &'s str,
}

impl Mark<'_> {
    /// Whether it is the word `word`.
    pub fn is_word(&self, word: &str) -> bool {
        self.token == Token::Word && self.text == word
    }

    /// Whether it is one of `words`.
    pub fn is_one_of(&self, words: &[&str]) -> bool {
        self.token == Token::Word && words.contains(&self.text)
    }

    /// Whether layout put it there.
    pub fn is_supplied(&self) -> bool {
        self.text.is_empty()
    }
}

/// Whether the token joins two operands, in any position.
pub(crate) fn is_binary_operator(token: Token) -> bool {
    use Token::*;
    matches!(
        token,
        Plus | Minus
            | Star
            | MiddleDot
            | Slash
            | Caret
            | EqualEqual
            | NotEqual
            | Less
            | LessEqual
            | Greater
            | GreaterEqual
    )
}
