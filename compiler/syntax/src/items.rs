//! From statements to items: which parser reads which line, and what the lines
//! of a block mean to the item that holds them.

mod blocks;
mod item;
mod ledger;
mod names;

use pintle_lexer::{MAX_BYTES, Token, lex};
use pintle_text::{Diagnostic, Span};

use crate::ast::{Clauses, Item, ItemKind, SourceFile};
use crate::codes;
use crate::grammar::{Grammar, Marks, Parses, run};
use crate::layout::{Layout, Statement, holds_items, is_component_line, lay_out, rebase};

/// Errors of one file that are kept.
const MAX_ERRORS: usize = 200;

/// Reads a file; keeps [`MAX_ERRORS`] errors.
pub(crate) fn read_file(text: &str) -> SourceFile {
    let mut file = read_all(text);
    let mut left = MAX_ERRORS;
    limit_errors(&mut file.items, &mut left, &mut false);
    file
}

/// Reads a file with all its errors.
pub(crate) fn read_all(text: &str) -> SourceFile {
    if text.len() > MAX_BYTES {
        let fault = Diagnostic::new(codes::FILE_TOO_LARGE, Span::default(), "the file is too large to be read");
        return SourceFile { items: vec![broken(0, 0, vec![fault])] };
    }
    let mut layout = lay_out(text, &lex(text));
    rebase(&mut layout);
    // A parser cannot be shared between threads, so each makes its own.
    let read = |statements| Reader { text, marks: &layout.marks, grammar: Grammar::new() }.items(statements);
    let (first, rest) = layout.statements.split_at(half(&layout));
    if rest.is_empty() {
        return SourceFile { items: read(first) };
    }
    std::thread::scope(|scope| {
        let behind = std::thread::Builder::new().spawn_scoped(scope, || read(rest));
        let mut items = read(first);
        items.extend(match behind {
            Ok(thread) => thread.join().unwrap_or_else(|panic| std::panic::resume_unwind(panic)),
            // No thread to be had.
            Err(_) => read(rest),
        });
        SourceFile { items }
    })
}

/// Statements from which a second thread is worth its start.
const MANY: usize = 500;

/// Where a long text is cut for two threads: at half of its marks, never between lines of prose, which are one item.
fn half(layout: &Layout) -> usize {
    let all = layout.statements.len();
    if all < MANY {
        return all;
    }
    let middle = layout.marks.len() / 2;
    let from = layout.statements.partition_point(|statement| statement.head.start < middle);
    let is_prose =
        |statement: &Statement| layout.marks.get(statement.head.start).is_some_and(|mark| mark.token == Token::Prose);
    let rest = layout.statements.get(from..).unwrap_or(&[]);
    rest.iter().position(|statement| !is_prose(statement)).map_or(all, |skipped| from + skipped)
}

fn broken(offset: u32, len: u32, errors: Vec<Diagnostic<Span>>) -> Item {
    Item { offset, len, kind: ItemKind::Broken { keyword: None, name: None }, clauses: Clauses::default(), errors }
}

/// Keeps the first errors of a file and says that there are more.
fn limit_errors(items: &mut [Item], left: &mut usize, told: &mut bool) {
    for item in items {
        if item.errors.len() > *left {
            item.errors.truncate(*left);
            if !std::mem::replace(told, true) {
                let message = "further errors of this file are not shown";
                item.errors.push(Diagnostic::new(codes::MORE_ERRORS, Span::at(0), message));
            }
            *left = 0;
        } else {
            *left -= item.errors.len();
        }
        if let ItemKind::Component { items, .. } = &mut item.kind {
            // Blocks nest at most `layout::depth::MAX_BLOCKS` deep.
            limit_errors(items, left, told);
        }
    }
}

/// Reads the statements of one file.
struct Reader<'s> {
    text: &'s str,
    marks: Marks<'s>,
    grammar: Grammar<'s>,
}

impl<'s> Reader<'s> {
    fn head(&self, statement: &Statement) -> Marks<'s> {
        self.marks.get(statement.head.clone()).unwrap_or(&[])
    }

    fn tail(&self, statement: &Statement) -> Marks<'s> {
        self.marks.get(statement.tail.clone()).unwrap_or(&[])
    }

    /// Statements in a row as items, lines of prose put together.
    fn items(&self, statements: &[Statement]) -> Vec<Item> {
        let mut items: Vec<Item> = Vec::with_capacity(statements.len());
        let mut prose_end: Option<u32> = None;
        for statement in statements {
            let head = self.head(statement);
            let Some(line) = head.first().filter(|mark| mark.token == Token::Prose) else {
                prose_end = None;
                items.push(self.item(statement));
                continue;
            };
            // The prose text of this line, without bar and one blank.
            let words = line.text.strip_prefix('|').unwrap_or(line.text);
            let words = words.strip_prefix(' ').unwrap_or(words).trim_end();
            let end = statement.offset + statement.span.end;
            let follows = prose_end.is_some_and(|before| self.next_line(before, statement.offset));
            match items.last_mut() {
                Some(Item { offset, len, kind: ItemKind::Prose { text }, .. }) if follows => {
                    text.push('\n');
                    text.push_str(words);
                    *len = end - *offset;
                }
                _ => items.push(Item {
                    offset: statement.offset,
                    len: statement.span.end,
                    kind: ItemKind::Prose { text: words.to_owned() },
                    clauses: Clauses::default(),
                    errors: statement.faults.clone(),
                }),
            }
            prose_end = Some(end);
        }
        items
    }

    /// Whether exactly one line end and white space lie between two places.
    fn next_line(&self, from: u32, to: u32) -> bool {
        let between = self.text.get(from as usize..to as usize).unwrap_or("#").trim_matches([' ', '\t']);
        matches!(between, "\n" | "\r\n" | "\r")
    }

    /// Runs a parser over a statement's head, unless layout refused the statement.
    fn read<O>(&self, parser: &Parses<'s, O>, statement: &Statement, acc: &mut Vec<Diagnostic<Span>>) -> Option<O> {
        if statement.refused {
            return None;
        }
        run(parser, self.head(statement), acc)
    }

    /// The clauses behind a statement's block, joined with those before it.
    fn with_tail(&self, statement: &Statement, clauses: Clauses, acc: &mut Vec<Diagnostic<Span>>) -> Clauses {
        let tail = self.tail(statement);
        if tail.is_empty() || statement.refused {
            return clauses;
        }
        let behind = run(&self.grammar.tail, tail, acc).unwrap_or_default();
        Clauses {
            cite: behind.cite.or(clauses.cite),
            because: behind.because.or(clauses.because),
            display: behind.display.or(clauses.display),
            repeat: behind.repeat.or(clauses.repeat),
        }
    }

    /// Reports the block of a statement that takes none.
    fn refuse_block(&self, statement: &Statement, acc: &mut Vec<Diagnostic<Span>>) {
        if let Some(block) = &statement.block {
            acc.push(Diagnostic::new(codes::MISPLACED_LINE, block.open, "no `{ ... }` can stand here"));
        }
        self.unread_block(statement, acc);
    }

    /// Takes over what layout said of lines that nothing else reads.
    fn unread_block(&self, statement: &Statement, acc: &mut Vec<Diagnostic<Span>>) {
        let of_items = holds_items(self.marks, statement);
        for line in blocks::statements(statement) {
            // The items of a component count from their own first byte.
            let by = if of_items && !is_component_line(self.marks, line) { line.offset } else { 0 };
            let before = acc.len();
            acc.extend(line.faults.iter().cloned());
            self.unread_block(line, acc);
            for fault in acc.iter_mut().skip(before) {
                fault.place = fault.place.shifted(by);
                fault.labels.iter_mut().for_each(|label| label.place = label.place.shifted(by));
                for edit in fault.fixes.iter_mut().flat_map(|fix| &mut fix.edits) {
                    edit.place = edit.place.shifted(by);
                }
            }
        }
    }
}
