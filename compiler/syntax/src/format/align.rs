//! Columns: widens the blanks before some tokens, so that they stand under each other.
//!
//! Works on printed text and knows nothing of tokens but where they begin. A
//! column is computed from the widths of what stands before it, never from the
//! blanks the author wrote, so a second pass finds the same.

use unicode_width::UnicodeWidthStr;

use super::sorts::{Column, Sort};

/// A printed line.
pub(super) struct Line<'a> {
    /// Where it begins in the printed text, indentation included.
    pub start: usize,
    /// Where its first token begins.
    pub indent: usize,
    /// Its sort, where it may stand in a run.
    pub sort: Option<Sort<'a>>,
    /// Whether it is apart from the line above: by a blank line or by prose.
    pub apart: bool,
    /// What may be lined up, from left to right.
    pub stops: Vec<Stop>,
}

/// A token that may stand in a column.
pub(super) struct Stop {
    pub column: Column,
    /// Where it begins in the printed text.
    pub at: usize,
    /// Blanks to put before it, beyond those printed.
    pub pad: usize,
}

impl Line<'_> {
    /// Notes a token; columns keep their order, so a clause out of order has none.
    pub fn stop(&mut self, column: Column, at: usize) {
        if self.stops.last().is_none_or(|last| last.column < column) {
            self.stops.push(Stop { column, at, pad: 0 });
        }
    }

    /// The last column noted.
    pub fn last(&self) -> Option<Column> {
        self.stops.last().map(|last| last.column)
    }

    fn find(&mut self, column: Column) -> Option<&mut Stop> {
        self.stops.iter_mut().find(|stop| stop.column == column)
    }

    /// The place of a column's token on the line, what was widened before it counted.
    fn place(&self, out: &str, column: Column) -> Option<usize> {
        let at = self.stops.iter().find(|stop| stop.column == column)?.at;
        let widened: usize = self.stops.iter().filter(|stop| stop.column < column).map(|stop| stop.pad).sum();
        // A faulty item, kept as it is, may have spread over several lines.
        let before = out.get(self.start..at).filter(|before| !before.contains('\n'))?;
        Some(before.width() + widened)
    }
}

/// The text with its columns lined up.
pub(super) fn align(out: &str, lines: &mut [Line<'_>]) -> String {
    for column in Column::ALL {
        let runs = lines.chunk_by_mut(|above, below| is_run(out, above, below, column));
        for run in runs.filter(|run| run.len() > 1) {
            line_up(out, run, column);
        }
    }
    let mut aligned = String::with_capacity(out.len() + out.len() / 8);
    let mut done = 0;
    for stop in lines.iter().flat_map(|line| &line.stops).filter(|stop| stop.pad > 0) {
        aligned.push_str(out.get(done..stop.at).unwrap_or(""));
        aligned.extend(std::iter::repeat_n(' ', stop.pad));
        done = stop.at;
    }
    aligned.push_str(out.get(done..).unwrap_or(""));
    aligned
}

fn is_run(out: &str, above: &Line<'_>, below: &Line<'_>, column: Column) -> bool {
    let same_indent = out.get(above.start..above.indent) == out.get(below.start..below.indent);
    let same_sort = match (column, above.sort, below.sort) {
        // Remarks stand under each other whatever their lines say.
        (Column::Comment, _, _) => true,
        // Words of a ledger differ from line to line.
        (Column::Lead, Some(Sort::Line(_)), Some(Sort::Line(_))) => true,
        (_, Some(above), Some(below)) => above == below,
        _ => false,
    };
    !below.apart && same_indent && same_sort
}

fn line_up(out: &str, run: &mut [Line<'_>], column: Column) {
    let mut places: Vec<usize> = run.iter().filter_map(|line| line.place(out, column)).collect();
    places.sort_unstable();
    let kept = middle_part(&places, column.reach());
    let (Some(&least), Some(&greatest), true) = (kept.first(), kept.last(), kept.len() > 1) else { return };
    let target = greatest + usize::from(column.is_clause());
    for line in run {
        let Some(place) = line.place(out, column).filter(|place| (least..=greatest).contains(place)) else { continue };
        if let Some(stop) = line.find(column) {
            stop.pad = target - place;
        }
    }
}

/// The sorted places without those too far out: from whichever end is further
/// from the middle one, until the rest lies within reach.
fn middle_part(places: &[usize], reach: usize) -> &[usize] {
    let mut kept = places;
    let middle = places.get(places.len().saturating_sub(1) / 2).copied().unwrap_or(0);
    while let [least, inner @ .., greatest] = kept {
        if greatest - least <= reach {
            break;
        }
        kept = if middle - least.min(&middle) > greatest.max(&middle) - middle {
            kept.get(1..).unwrap_or(inner)
        } else {
            kept.get(..kept.len() - 1).unwrap_or(inner)
        };
    }
    kept
}
