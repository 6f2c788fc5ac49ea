//! One pass over the raw tokens before layout: where lines begin, which round
//! and square brackets find their partner, what comes after each line end.

use pintle_lexer::Token;
use pintle_text::Span;

use crate::words;

/// What is known of one raw token before layout.
#[derive(Clone, Copy, Debug)]
pub(super) struct Raw {
    pub token: Token,
    pub span: Span,
    /// Blanks before it, where it is the first token of its line.
    pub indent: Option<u32>,
    /// For an opening round or square bracket: whether its partner comes before
    /// anything that cannot stand inside brackets.
    pub closes: bool,
    /// For a line end: position of the next token that is no comment or line end.
    pub next: usize,
    /// For a line end: whether a blank line comes before that token.
    pub blank: bool,
}

/// The raw tokens of a text with their surroundings.
pub(super) struct Scan<'s> {
    pub text: &'s str,
    pub raw: Vec<Raw>,
}

impl<'s> Scan<'s> {
    pub fn new(text: &'s str, tokens: &[(Token, Span)]) -> Scan<'s> {
        let mut line_start = Some(if text.starts_with('\u{FEFF}') { 3 } else { 0 });
        let mut raw = Vec::with_capacity(tokens.len());
        for &(token, span) in tokens {
            let indent = line_start.take().map(|start: u32| span.start.saturating_sub(start));
            if token == Token::Newline {
                line_start = Some(span.end);
            }
            raw.push(Raw { token, span, indent, closes: false, next: 0, blank: false });
        }
        let mut scan = Scan { text, raw };
        scan.look_ahead();
        scan.match_brackets();
        scan
    }

    pub fn token(&self, at: usize) -> Option<Token> {
        self.raw.get(at).map(|raw| raw.token)
    }

    pub fn slice(&self, span: Span) -> &'s str {
        self.text.get(span.range()).unwrap_or("")
    }

    pub fn word(&self, at: usize) -> Option<&'s str> {
        let raw = self.raw.get(at).filter(|raw| raw.token == Token::Word)?;
        Some(self.slice(raw.span))
    }

    /// Whether a line that begins at `at` begins an item beyond doubt: a keyword
    /// with what it expects. `load = 3 kg`, `load at 2 m` and `load + 1` do not.
    pub fn starts_item(&self, at: usize) -> bool {
        let Some(keyword) = self.word(at).filter(|word| words::ITEMS.contains(word)) else { return false };
        let Some(next) = self.token(at + 1) else { return false };
        match keyword {
            "sheet" | "library" | "assume" => matches!(next, Token::Str | Token::UnterminatedStr),
            "use" => matches!(next, Token::Word | Token::Dot | Token::DotDot),
            _ => self.word(at + 1).is_some_and(|word| {
                !matches!(word, "at" | "from" | "for" | "as" | "where" | "cite" | "because" | "and" | "or" | "about")
            }),
        }
    }

    /// Whether a line that begins at `at` begins a definition: `name =`, `name : kind`.
    pub fn starts_definition(&self, at: usize) -> bool {
        self.word(at).is_some() && matches!(self.token(at + 1), Some(Token::Equals | Token::Colon))
    }

    /// Whether the tokens at `at` can only be a new statement and never go on
    /// with an expression.
    pub fn starts_statement(&self, at: usize) -> bool {
        if self.starts_item(at) || self.starts_definition(at) {
            return true;
        }
        let two_words = self
            .word(at + 1)
            .is_some_and(|word| !words::CONTINUING.contains(&word) && !words::CLAUSES.contains(&word) && word != "if");
        match self.word(at) {
            Some("not" | "and" | "or") => false,
            Some(_) => two_words,
            None => matches!(self.token(at), Some(Token::Prose)),
        }
    }

    fn look_ahead(&mut self) {
        let mut next = self.raw.len();
        let mut blank = false;
        let mut after_newline = false;
        for at in (0..self.raw.len()).rev() {
            let Some(raw) = self.raw.get_mut(at) else { continue };
            match raw.token {
                Token::Newline => {
                    blank |= after_newline;
                    after_newline = true;
                }
                Token::Comment => after_newline = false,
                _ => {
                    next = at;
                    blank = false;
                    after_newline = false;
                }
            }
            if raw.token.is_trivia() {
                raw.next = next;
                raw.blank = blank;
            }
        }
    }

    fn match_brackets(&mut self) {
        let mut open: Vec<usize> = Vec::new();
        let mut n_round = 0usize;
        let mut n_square = 0usize;
        for at in 0..self.raw.len() {
            let Some(raw) = self.raw.get(at).copied() else { continue };
            match raw.token {
                Token::OpenParen => {
                    n_round += 1;
                    open.push(at);
                }
                Token::OpenBracket => {
                    n_square += 1;
                    open.push(at);
                }
                Token::CloseParen | Token::CloseBracket => {
                    let (wanted, count) = match raw.token {
                        Token::CloseParen => (Token::OpenParen, n_round),
                        _ => (Token::OpenBracket, n_square),
                    };
                    if count == 0 {
                        continue;
                    }
                    while let Some(top) = open.pop() {
                        let Some(opener) = self.raw.get_mut(top) else { continue };
                        match opener.token {
                            Token::OpenParen => n_round -= 1,
                            _ => n_square -= 1,
                        }
                        if opener.token == wanted {
                            opener.closes = true;
                            break;
                        }
                    }
                }
                _ => {
                    let bars = matches!(raw.token, Token::OpenBrace | Token::CloseBrace | Token::Prose)
                        || (raw.indent.is_some() && !open.is_empty() && self.starts_item(at));
                    if bars {
                        open.clear();
                        n_round = 0;
                        n_square = 0;
                    }
                }
            }
        }
    }
}
