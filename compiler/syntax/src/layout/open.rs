//! What is being built while layout walks over the tokens: the present
//! statement, and the blocks that are open around it.

use pintle_lexer::Token;
use pintle_text::Span;

use super::Statement;

/// Which items may stand in a block.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Inside {
    Component,
    Ledger,
    Later,
    Choose,
    Fields,
    /// The block of an item that takes none.
    Nothing,
}

impl Inside {
    pub fn may_hold(self, keyword: &str) -> bool {
        match self {
            Inside::Component => !matches!(keyword, "sheet" | "library" | "use" | "component"),
            Inside::Ledger => matches!(keyword, "wanted" | "limit" | "spring"),
            Inside::Later => matches!(keyword, "wanted" | "limit" | "spring" | "brake" | "clutch" | "load" | "curve"),
            Inside::Choose | Inside::Fields | Inside::Nothing => false,
        }
    }
}

/// A statement being built.
pub(super) struct Current {
    pub statement: Statement,
    pub in_tail: bool,
    /// Open round and square brackets: kind, place, whether its partner comes.
    pub brackets: Vec<(Token, Span, bool)>,
    /// How many of them are round; the others are square.
    pub n_round: usize,
}

impl Current {
    pub fn open_bracket(&mut self, token: Token, place: Span, closes: bool) {
        self.n_round += usize::from(token == Token::OpenParen);
        self.brackets.push((token, place, closes));
    }

    pub fn pop_bracket(&mut self) -> Option<Token> {
        let (token, _, _) = self.brackets.pop()?;
        self.n_round -= usize::from(token == Token::OpenParen);
        Some(token)
    }

    /// Whether a bracket of this kind is open, without looking through them:
    /// many stray closers must not each walk over many open ones.
    pub fn holds(&self, opener: Token) -> bool {
        if opener == Token::OpenParen { self.n_round > 0 } else { self.brackets.len() > self.n_round }
    }
}

/// A block that is open, with the statement that owns it.
pub(super) struct Open {
    pub owner: Current,
    pub brace: Span,
    /// Blanks before the line that holds the brace.
    pub indent: u32,
    /// Whether marks followed the brace on its line.
    pub content: bool,
    /// Whether a line of the block was indented deeper than that line.
    pub deeper: bool,
    pub inside: Inside,
    /// Whether the braces of the surrounding item do not match.
    pub leaky: bool,
    pub statements: Vec<Statement>,
}

/// The token that a look-alike from other documents stands for, and its spelling.
pub(super) fn stand_in(text: &str) -> Option<(Token, &'static str)> {
    Some(match text {
        "×" | "∗" | "⨯" => (Token::Star, "*"),
        "÷" | "∕" | "⁄" => (Token::Slash, "/"),
        "−" | "–" | "—" => (Token::Minus, "-"),
        "≠" => (Token::NotEqual, "!="),
        "→" => (Token::Arrow, "->"),
        "…" => (Token::DotDot, ".."),
        _ => return None,
    })
}
