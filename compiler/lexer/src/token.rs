//! The kinds of tokens and the patterns that find them.

use logos::Logos;

use crate::callbacks::{non_ascii, plus, prose, word};

/// A kind of token. Its text is the slice of the source under its span.
///
/// The pattern of words is ASCII only; words with other letters are completed
/// in a callback, since the Unicode classes would multiply the build time.
#[derive(Logos, Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[logos(skip(r"[ \t\x0C\u{A0}\u{2007}\u{2009}\u{202F}]+"))]
pub enum Token {
    /// A name or keyword: `drum`, `ω_max`, `µm`.
    #[regex(r"[A-Za-z_][A-Za-z0-9_]*", word)]
    Word,
    /// `1450`, `1_450`, `6.5e3`, `0.12`; no sign, no unit.
    #[regex(r"[0-9][0-9_]*(\.[0-9][0-9_]*)?([eE][+-]?[0-9]+)?")]
    Number,
    /// `"..."` on one line, with `\"` and `\\` inside.
    #[regex(r#""([^"\\\r\n\u{85}\u{2028}\u{2029}]|\\[^\r\n\u{85}\u{2028}\u{2029}])*""#)]
    Str,
    /// A quote without its partner, to the end of the line.
    #[regex(r#""([^"\\\r\n\u{85}\u{2028}\u{2029}]|\\[^\r\n\u{85}\u{2028}\u{2029}])*\\?"#)]
    UnterminatedStr,
    /// `# ...` to the end of the line.
    #[regex(r"#[^\r\n\u{85}\u{2028}\u{2029}]*", allow_greedy = true)]
    Comment,
    /// A line whose first mark is `|`, from the bar to the end of the line.
    #[token("|", prose)]
    Prose,
    /// `\n`, `\r\n` or a lone `\r`.
    #[regex(r"\r\n|\n|\r")]
    Newline,
    /// `{`
    #[token("{")]
    OpenBrace,
    /// `}`
    #[token("}")]
    CloseBrace,
    /// `(`
    #[token("(")]
    OpenParen,
    /// `)`
    #[token(")")]
    CloseParen,
    /// `[`
    #[token("[")]
    OpenBracket,
    /// `]`
    #[token("]")]
    CloseBracket,
    /// `,`
    #[token(",")]
    Comma,
    /// `:`
    #[token(":")]
    Colon,
    /// `.`
    #[token(".")]
    Dot,
    /// `..`
    #[token("..")]
    DotDot,
    /// `=`
    #[token("=")]
    Equals,
    /// `==`
    #[token("==")]
    EqualEqual,
    /// `!=`
    #[token("!=")]
    NotEqual,
    /// `<`
    #[token("<")]
    Less,
    /// `<=` or `≤`
    #[token("<=")]
    LessEqual,
    /// `>`
    #[token(">")]
    Greater,
    /// `>=` or `≥`
    #[token(">=")]
    GreaterEqual,
    /// `+`
    #[token("+", plus)]
    Plus,
    /// `-`
    #[token("-")]
    Minus,
    /// `*`
    #[token("*")]
    Star,
    /// `·`, the multiplication dot
    MiddleDot,
    /// `/`
    #[token("/")]
    Slash,
    /// `^`
    #[token("^")]
    Caret,
    /// A raised whole number: `²`, `⁻¹`.
    Superscript,
    /// `±`, or `+/-` standing by itself
    PlusMinus,
    /// `~`
    #[token("~")]
    Tilde,
    /// `->`
    #[token("->")]
    Arrow,
    /// `°`
    Degree,
    /// `%`
    #[token("%")]
    Percent,
    /// `§`
    Section,
    /// A character that editors take for a line end and the language does not:
    /// U+0085, U+2028, U+2029.
    LineSeparator,
    /// One character that has no meaning here. First met by the pattern for
    /// characters outside ASCII, whose callback decides among several kinds.
    #[regex(r"[^\x00-\x7F]", non_ascii, priority = 1)]
    Unknown,
}

impl Token {
    /// Whether it is a comment or a line end: kept for layout, read by no grammar.
    pub fn is_trivia(self) -> bool {
        matches!(self, Token::Comment | Token::Newline)
    }
}
