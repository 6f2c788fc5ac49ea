//! The kinds of faults that the text of a sheet can have, each declared once.

use pintle_text::{Code, Severity};

const fn error(name: &'static str, summary: &'static str) -> Code {
    Code { name, severity: Severity::Error, summary }
}

/// Something else was expected where a mark stands.
pub const SYNTAX_ERROR: Code = error("syntax-error", "something else was expected at this place");
/// The right side of `=`, or an operand, has not been written.
pub const MISSING_VALUE: Code = error("missing-value", "a value was expected and none stands there");
/// An opening bracket has no partner.
pub const UNCLOSED_BRACKET: Code = error("unclosed-bracket", "an opening bracket has no closing one");
/// A closing bracket has no partner.
pub const UNOPENED_BRACKET: Code = error("unopened-bracket", "a closing bracket has no opening one");
/// A quote has no partner on its line.
pub const UNTERMINATED_TEXT: Code = error("unterminated-text", "a text in quotes does not end on its line");
/// A character that the language does not use.
pub const UNKNOWN_CHARACTER: Code = error("unknown-character", "the language does not use this character");
/// A character that some editors show as a line end.
pub const LINE_SEPARATOR: Code = error("line-separator", "U+0085, U+2028 and U+2029 are not accepted as line ends");
/// Brackets, blocks or signs are nested too deep.
pub const NESTING_TOO_DEEP: Code = error("nesting-too-deep", "brackets, blocks or signs are nested too deep");
/// Too many operands in one chain of operators.
pub const CHAIN_TOO_LONG: Code = error("chain-too-long", "one chain of operators has too many operands");
/// A spelling of an earlier edition, or of another notation, with a better one on offer.
pub const OLD_SPELLING: Code = error("old-spelling", "a spelling that is no longer used, with the right one on offer");
/// `a < b < c`.
pub const CHAINED_COMPARISON: Code = error("chained-comparison", "comparisons cannot be chained");
/// A line that begins like no item.
pub const UNKNOWN_ITEM: Code = error("unknown-item", "no item or line begins like this");
/// A line that cannot stand in the block it is in.
pub const MISPLACED_LINE: Code = error("misplaced-line", "this line cannot stand in this block");
/// The same clause twice behind one item.
pub const REPEATED_CLAUSE: Code = error("repeated-clause", "the same clause stands twice");
/// More errors than are shown.
pub const MORE_ERRORS: Code = error("more-errors", "further errors of this file are not shown");
/// A file larger than positions can count.
pub const FILE_TOO_LARGE: Code = error("file-too-large", "the file is too large to be read");

/// All of them, in the order of this file.
pub const ALL: &[Code] = &[
    SYNTAX_ERROR,
    MISSING_VALUE,
    UNCLOSED_BRACKET,
    UNOPENED_BRACKET,
    UNTERMINATED_TEXT,
    UNKNOWN_CHARACTER,
    LINE_SEPARATOR,
    NESTING_TOO_DEEP,
    CHAIN_TOO_LONG,
    OLD_SPELLING,
    CHAINED_COMPARISON,
    UNKNOWN_ITEM,
    MISPLACED_LINE,
    REPEATED_CLAUSE,
    MORE_ERRORS,
    FILE_TOO_LARGE,
];
