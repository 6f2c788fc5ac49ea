//! From tokens to statements: which marks belong together.
//!
//! A statement is a head, perhaps a block of statements in braces, and a tail
//! behind it. Layout knows where lines continue, mends brackets that were left
//! open so that a half-typed line costs that line alone, and refuses what nests
//! too deep. It never looks at what a statement means, beyond the keyword that
//! tells which items may stand in its block. It uses no recursion, so no text
//! is too deep or too long for it.

mod build;
pub(crate) mod depth;
mod open;
mod prescan;

use std::ops::Range;

use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use crate::marks::Mark;

/// One statement with everything inside it.
#[derive(Debug, Default)]
pub(crate) struct Statement {
    /// From its first to its last mark, braces included.
    pub span: Span,
    /// Marks before the block.
    pub head: Range<usize>,
    /// The block in braces.
    pub block: Option<Block>,
    /// Marks behind the block.
    pub tail: Range<usize>,
    /// What layout has to say about it, its block's statements not included.
    pub faults: Vec<Diagnostic<Span>>,
    /// Too deep for the grammar to read.
    pub refused: bool,
    /// After [`rebase`]: first byte, counted from the origin of what is around it.
    pub offset: u32,
}

/// The statements between two braces.
#[derive(Debug, Default)]
pub(crate) struct Block {
    /// The opening brace.
    pub open: Span,
    /// The closing brace, or the place where it was taken as closed.
    pub close: Span,
    /// In order.
    pub statements: Vec<Statement>,
}

/// A text laid out. Spans count from the start of the file.
#[derive(Debug, Default)]
pub(crate) struct Layout<'s> {
    /// All marks in order; statements hold ranges of them.
    pub marks: Vec<Mark<'s>>,
    /// The statements of the top level.
    pub statements: Vec<Statement>,
}

/// Lays a text out.
pub(crate) fn lay_out<'s>(text: &'s str, tokens: &[(Token, Span)]) -> Layout<'s> {
    let scan = prescan::Scan::new(text, tokens);
    // A text whose braces match is never second-guessed by its indentation.
    let strict = build::Builder::new(&scan, build::Mode::Strict).run();
    match strict {
        Some(layout) => layout,
        None => build::Builder::new(&scan, build::Mode::Mend).run().unwrap_or_default(),
    }
}

/// Moves all spans so that they count from the first byte of their item.
///
/// The items of a component are items of their own and count from their own
/// first byte; where that is, counted from the component, their `offset` says.
pub(crate) fn rebase(layout: &mut Layout) {
    for statement in &mut layout.statements {
        rebase_item(&mut layout.marks, statement, 0);
    }
}

/// Whether the statements of a block are items: those of a component are.
pub(crate) fn holds_items(marks: &[Mark], statement: &Statement) -> bool {
    marks.get(statement.head.clone()).and_then(|head| head.first()).is_some_and(|mark| mark.is_word("component"))
}

/// Whether a statement of a component is a line of the component itself.
pub(crate) fn is_component_line(marks: &[Mark], statement: &Statement) -> bool {
    let head = marks.get(statement.head.clone()).unwrap_or(&[]);
    head.first().is_some_and(|mark| mark.is_one_of(&["offers", "require"]))
        && head.get(1).is_none_or(|mark| !matches!(mark.token, Token::Equals | Token::Colon))
}

/// `origin` is where the surroundings begin, in bytes of the file.
fn rebase_item(marks: &mut [Mark], item: &mut Statement, origin: u32) {
    let start = item.span.start;
    item.offset = start.saturating_sub(origin);
    shift(marks, item, start);
}

fn shift(marks: &mut [Mark], statement: &mut Statement, by: u32) {
    let back = |span: Span| Span::new(span.start.saturating_sub(by), span.end.saturating_sub(by));
    statement.span = back(statement.span);
    for range in [statement.head.clone(), statement.tail.clone()] {
        for mark in marks.get_mut(range).unwrap_or(&mut []) {
            mark.span = back(mark.span);
        }
    }
    for fault in &mut statement.faults {
        fault.place = back(fault.place);
        for label in &mut fault.labels {
            label.place = back(label.place);
        }
        for edit in fault.fixes.iter_mut().flat_map(|fix| &mut fix.edits) {
            edit.place = back(edit.place);
        }
    }
    let of_items = holds_items(marks, statement);
    if let Some(block) = &mut statement.block {
        block.open = back(block.open);
        block.close = back(block.close);
        for inner in &mut block.statements {
            if of_items && !is_component_line(marks, inner) {
                rebase_item(marks, inner, by);
            } else {
                // Blocks nest at most `MAX_BLOCKS` deep.
                shift(marks, inner, by);
            }
        }
    }
}
