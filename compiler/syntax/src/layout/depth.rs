//! How deep a statement nests, counted before any grammar sees it.
//!
//! The grammar, and every later walk over an expression (drop and comparison
//! included), recurses as deep as the text nests. The limits below keep that
//! well inside the smallest thread stack, whatever the text is.

use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use crate::codes;
use crate::marks::{Mark, is_binary_operator};

/// Brackets inside brackets, in one statement.
pub(crate) const MAX_BRACKETS: usize = 256;
/// Blocks inside blocks.
pub(crate) const MAX_BLOCKS: usize = 64;
/// Operands of one chain of operators.
pub(crate) const MAX_OPERANDS: usize = 1_000;
/// Signs or powers in a row.
pub(crate) const MAX_PREFIXES: usize = 256;
/// Levels of the resulting tree, all causes together.
const MAX_LEVELS: usize = 1_000;

/// What one pair of brackets, or the statement itself, holds so far.
#[derive(Clone, Copy, Default)]
struct Level {
    /// Depth of the member being read.
    depth: usize,
    /// Signs, powers and bounds that wrap what comes next.
    prefixes: usize,
    /// Operands of the chain being read.
    operands: usize,
    /// Depth of the deepest member so far.
    deepest: usize,
}

impl Level {
    fn take(&mut self, depth: usize) {
        self.depth = self.depth.max(depth + self.prefixes);
    }

    fn end_member(&mut self) {
        self.deepest = self.deepest.max(self.depth);
        *self = Level { deepest: self.deepest, ..Level::default() };
    }
}

/// The fault of a statement that nests too deep or chains too long.
pub(super) fn check_depth(marks: &[Mark]) -> Option<Diagnostic<Span>> {
    let mut levels = vec![Level::default()];
    let mut after_operand = false;
    for mark in marks {
        let n_brackets = levels.len();
        let Some(level) = levels.last_mut() else { break };
        match mark.token {
            Token::OpenParen | Token::OpenBracket => {
                if n_brackets > MAX_BRACKETS {
                    let message = format!("brackets are nested more than {MAX_BRACKETS} deep");
                    return Some(too_deep(mark.span, message));
                }
                levels.push(Level::default());
                after_operand = false;
                continue;
            }
            Token::CloseParen | Token::CloseBracket => {
                level.end_member();
                let inner = level.deepest + 1;
                if levels.len() > 1 {
                    levels.pop();
                }
                if let Some(outer) = levels.last_mut() {
                    outer.take(inner);
                }
                after_operand = true;
            }
            Token::Comma | Token::Equals => {
                level.end_member();
                after_operand = false;
            }
            Token::Caret | Token::Superscript => {
                level.prefixes += 1;
                level.depth += 1;
                after_operand = mark.token == Token::Superscript;
            }
            Token::Plus | Token::Minus if !after_operand => level.prefixes += 1,
            Token::Word if matches!(mark.text, "and" | "or") => {
                level.operands += 1;
                level.depth += 1;
                level.prefixes = 0;
                after_operand = false;
            }
            Token::Word if matches!(mark.text, "not" | "within" | "in") && !after_operand => level.prefixes += 1,
            Token::Word if matches!(mark.text, "within" | "in" | "about") => {
                level.prefixes += 1;
                after_operand = false;
            }
            token if is_binary_operator(token) => {
                level.operands += 1;
                level.depth += 1;
                level.prefixes = 0;
                after_operand = false;
            }
            _ => {
                level.take(1);
                after_operand = true;
            }
        }
        let Some(level) = levels.last() else { break };
        if level.prefixes > MAX_PREFIXES {
            let message = format!("more than {MAX_PREFIXES} signs or powers follow one another");
            return Some(too_deep(mark.span, message));
        }
        if level.operands >= MAX_OPERANDS {
            let message = format!("this chain has more than {MAX_OPERANDS} operands");
            return Some(
                Diagnostic::new(codes::CHAIN_TOO_LONG, mark.span, message)
                    .with_help("give parts of it names of their own, or use `sum(...)` over a list"),
            );
        }
        if level.depth + level.prefixes > MAX_LEVELS {
            return Some(too_deep(mark.span, "this expression is nested too deep".to_owned()));
        }
    }
    None
}

fn too_deep(span: Span, message: String) -> Diagnostic<Span> {
    Diagnostic::new(codes::NESTING_TOO_DEEP, span, message).with_help("give the inner parts names of their own")
}
