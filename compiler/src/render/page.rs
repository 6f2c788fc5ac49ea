//! Lines for a terminal of 80 columns: wrapping, tables, colour.
//!
//! Text is measured before it is coloured. Knows words and widths only, never
//! what a sheet says.

use super::number;
use unicode_width::UnicodeWidthChar;

/// Columns of a page.
pub const WIDTH: usize = 80;
/// A first column wider than this gets a line of its own.
const NAME_WIDTH: usize = 30;
/// A last column narrower than this moves to a line of its own.
const LEAST_TEXT: usize = 18;

/// Whether output is coloured.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Colour {
    /// With escape sequences of the sixteen colours.
    On,
    /// Plain text.
    Off,
}

/// What a piece of text is, for its colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Paint {
    /// Uncoloured.
    Plain,
    /// A heading.
    Heading,
    /// A limit that is met.
    Good,
    /// A limit that is not met, an error.
    Bad,
    /// Met at nominal only, a warning.
    Doubt,
    /// Undecided.
    Open,
}

impl Paint {
    fn code(self) -> Option<&'static str> {
        match self {
            Paint::Plain => None,
            Paint::Heading => Some("1;36"),
            Paint::Good => Some("32"),
            Paint::Bad => Some("1;31"),
            Paint::Doubt => Some("33"),
            Paint::Open => Some("35"),
        }
    }
}

/// `text` in its colour.
pub fn painted(text: &str, paint: Paint, colour: Colour) -> String {
    match (paint.code(), colour) {
        (Some(code), Colour::On) if !text.is_empty() => format!("\u{1b}[{code}m{text}\u{1b}[0m"),
        _ => text.into(),
    }
}

/// Columns that `text` takes.
pub fn width(text: &str) -> usize {
    text.chars().map(|c| c.width().unwrap_or(0)).sum()
}

/// The text with every character that could steer a terminal replaced.
pub fn printable(text: &str) -> String {
    let steers = |c: char| {
        c.is_control() || matches!(c, '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' | '\u{2028}' | '\u{2029}')
    };
    text.chars()
        .map(|c| {
            if c == '\n' || c == '\t' || c == '\r' {
                ' '
            } else if steers(c) {
                '\u{fffd}'
            } else {
                c
            }
        })
        .collect()
}

/// Breaks `text` at spaces into lines of at most `columns`; a longer word is broken where it must.
pub fn wrap(text: &str, columns: usize) -> Vec<String> {
    let columns = columns.max(1);
    let mut lines = Vec::new();
    let mut line = String::new();
    let mut used = 0;
    for word in text.split_whitespace() {
        let needed = width(word);
        if used > 0 && used + 1 + needed <= columns {
            line.push(' ');
            line.push_str(word);
            used += 1 + needed;
            continue;
        }
        if used > 0 {
            lines.push(std::mem::take(&mut line));
            used = 0;
        }
        for c in word.chars() {
            let step = c.width().unwrap_or(0);
            if used > 0 && used + step > columns {
                lines.push(std::mem::take(&mut line));
                used = 0;
            }
            line.push(c);
            used += step;
        }
    }
    if used > 0 || lines.is_empty() {
        lines.push(line);
    }
    lines
}

/// How a column is aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Align {
    /// At its left edge.
    Left,
    /// At its right edge.
    Right,
    /// At the decimal point.
    Point,
}

/// A piece of a table.
#[derive(Clone, Debug)]
pub struct Cell {
    text: String,
    paint: Paint,
}

impl Cell {
    /// A cell with a colour.
    pub fn new(text: impl AsRef<str>, paint: Paint) -> Cell {
        Cell { text: printable(text.as_ref()), paint }
    }
}

impl<T: AsRef<str>> From<T> for Cell {
    fn from(text: T) -> Cell {
        Cell::new(text, Paint::Plain)
    }
}

/// Rows with aligned columns. The first column is a name; the last one wraps.
#[derive(Clone, Debug)]
pub struct Table {
    columns: Vec<Align>,
    indent: usize,
    rows: Vec<Vec<Cell>>,
    /// Lines that follow a row, by the row's number, wrapped at the second column.
    notes: Vec<(usize, String)>,
}

impl Table {
    /// An empty table, `indent` columns from the edge.
    pub fn new(indent: usize, columns: &[Align]) -> Table {
        Table { columns: columns.to_vec(), indent, rows: Vec::new(), notes: Vec::new() }
    }

    /// Adds a row.
    pub fn row(&mut self, cells: Vec<Cell>) {
        self.rows.push(cells);
    }

    /// Adds a line below the last row; empty text adds none.
    pub fn note(&mut self, text: impl AsRef<str>) {
        if !text.as_ref().is_empty() {
            self.notes.push((self.rows.len().saturating_sub(1), printable(text.as_ref())));
        }
    }

    /// Whether there are no rows.
    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// Text of each row and column, numbers padded so that their points align.
    fn aligned(&self) -> Vec<Vec<String>> {
        let cell = |row: &Vec<Cell>, column: usize| row.get(column).map_or(String::new(), |cell| cell.text.clone());
        let mut out: Vec<Vec<String>> = vec![Vec::new(); self.rows.len()];
        for (column, align) in self.columns.iter().enumerate() {
            let texts: Vec<String> = self.rows.iter().map(|row| cell(row, column)).collect();
            let widest = texts.iter().map(|text| width(text)).max().unwrap_or(0);
            let before = texts.iter().map(|text| width(number::halves(text).0)).max().unwrap_or(0);
            let padded: Vec<String> = texts
                .into_iter()
                .map(|text| match align {
                    Align::Point if !text.is_empty() => {
                        // Words in a column of numbers stand at its left edge.
                        let whole = width(number::halves(&text).0);
                        let pad = if whole == 0 { 0 } else { before - whole };
                        format!("{}{text}", " ".repeat(pad))
                    }
                    Align::Right => format!("{}{text}", " ".repeat(widest - width(&text))),
                    _ => text,
                })
                .collect();
            for (row, text) in out.iter_mut().zip(padded) {
                row.push(text);
            }
        }
        out
    }

    /// Writes the table.
    pub fn write(&self, page: &mut Page) {
        let texts = self.aligned();
        let n_columns = self.columns.len();
        let last = n_columns.saturating_sub(1);
        let column_width = |column: usize, most: usize| {
            texts
                .iter()
                .filter_map(|row| row.get(column))
                .map(|text| width(text))
                .filter(|&it| it <= most)
                .max()
                .unwrap_or(0)
        };
        let mut widths: Vec<usize> = (0..n_columns)
            .map(|column| column_width(column, if column == 0 { NAME_WIDTH } else { usize::MAX }))
            .collect();
        // Where the fixed columns would not fit beside the names, names stand above them.
        let fixed: usize = self.indent + widths.iter().take(last).filter(|&&it| it > 0).map(|it| it + 2).sum::<usize>();
        let above = last > 0 && fixed > WIDTH;
        if above && let Some(first) = widths.first_mut() {
            *first = 2;
        }
        for (at, row) in texts.iter().enumerate() {
            let paint = |column: usize| {
                self.rows.get(at).and_then(|row| row.get(column)).map_or(Paint::Plain, |cell| cell.paint)
            };
            let mut line = " ".repeat(self.indent);
            let mut used = self.indent;
            for (column, text) in row.iter().enumerate().take(last) {
                let Some(&room) = widths.get(column) else { continue };
                if room == 0 {
                    continue;
                }
                let own = width(text);
                if column == 0 && own > room {
                    for (n, part) in wrap(text, WIDTH - self.indent).iter().enumerate() {
                        let hang = if n == 0 { "" } else { "  " };
                        page.raw(&format!("{}{hang}{}", " ".repeat(self.indent), painted(part, paint(0), page.colour)));
                    }
                    line = " ".repeat(self.indent + room + 2);
                    used = self.indent + room + 2;
                    continue;
                }
                let pad = " ".repeat(room.saturating_sub(own));
                let shown = painted(text, paint(column), page.colour);
                line.push_str(&format!("{shown}{pad}  "));
                used += room.max(own) + 2;
            }
            let text = row.get(last).map_or("", String::as_str);
            let hang = self.indent + widths.first().copied().unwrap_or(0) + 2;
            let free = WIDTH.saturating_sub(used);
            // A column of texts is laid out in one way for all rows.
            let beside = self.columns.get(last) == Some(&Align::Left) && free >= LEAST_TEXT;
            if text.trim().is_empty() {
                page.raw(line.trim_end());
            } else if width(text) <= free || beside {
                // Padding in front of a number is part of its alignment; text is wrapped.
                let parts = if width(text) <= free { vec![text.to_string()] } else { wrap(text, free) };
                for (n, part) in parts.iter().enumerate() {
                    let before = if n == 0 { line.clone() } else { " ".repeat(used) };
                    page.raw(&format!("{before}{}", painted(part, paint(last), page.colour)));
                }
            } else {
                page.raw(line.trim_end());
                for part in wrap(text, WIDTH.saturating_sub(hang)) {
                    page.raw(&format!("{}{}", " ".repeat(hang), painted(&part, paint(last), page.colour)));
                }
            }
            for (_, note) in self.notes.iter().filter(|(row, _)| *row == at) {
                for part in wrap(note, WIDTH.saturating_sub(hang)) {
                    page.raw(&format!("{}{part}", " ".repeat(hang)));
                }
            }
        }
    }
}

/// Text being written.
#[derive(Clone, Debug)]
pub struct Page {
    out: String,
    colour: Colour,
}

impl Page {
    /// An empty page.
    pub fn new(colour: Colour) -> Page {
        Page { out: String::new(), colour }
    }

    /// What was written.
    pub fn text(self) -> String {
        self.out
    }

    /// Whether nothing was written.
    pub fn is_empty(&self) -> bool {
        self.out.is_empty()
    }

    /// A line as it is.
    fn raw(&mut self, line: &str) {
        self.out.push_str(line.trim_end());
        self.out.push('\n');
    }

    /// A line that fits already.
    pub fn line(&mut self, text: &str) {
        self.raw(&printable(text));
    }

    /// An empty line, unless one stands there already.
    pub fn blank(&mut self) {
        if !self.out.is_empty() && !self.out.ends_with("\n\n") {
            self.out.push('\n');
        }
    }

    /// A heading, with an empty line above.
    pub fn heading(&mut self, text: &str) {
        self.blank();
        for part in wrap(&printable(text), WIDTH) {
            let shown = painted(&part, Paint::Heading, self.colour);
            self.raw(&shown);
        }
    }

    /// Text that wraps; its first line `indent` from the edge, the next ones `hang`.
    pub fn text_block(&mut self, indent: usize, hang: usize, text: &str, paint: Paint) {
        let text = printable(text);
        let mut rest = wrap(&text, WIDTH.saturating_sub(indent));
        if rest.len() > 1 && hang != indent {
            // Only the first line has the first indent: wrap what remains anew.
            let first = rest.swap_remove(0);
            let behind = text.split_whitespace().skip(first.split_whitespace().count()).collect::<Vec<_>>().join(" ");
            let shown = painted(&first, paint, self.colour);
            self.raw(&format!("{}{shown}", " ".repeat(indent)));
            return self.text_block(hang, hang, &behind, paint);
        }
        for part in wrap(&text, WIDTH.saturating_sub(indent)) {
            let shown = painted(&part, paint, self.colour);
            self.raw(&format!("{}{shown}", " ".repeat(indent)));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check_wrap(text: &str, columns: usize, expected: &[&str]) {
        assert_eq!(wrap(text, columns), expected);
    }

    #[test]
    fn text_breaks_at_spaces_and_words_only_where_they_must() {
        check_wrap("the quick  brown fox", 10, &["the quick", "brown fox"]);
        check_wrap("abcdefghij kl", 4, &["abcd", "efgh", "ij", "kl"]);
        check_wrap("", 10, &[""]);
        check_wrap("重い 荷物", 4, &["重い", "荷物"]);
    }

    #[test]
    fn a_character_that_steers_the_terminal_is_replaced() {
        assert_eq!(printable("a\u{1b}[31mb\u{202e}c\td"), "a\u{fffd}[31mb\u{fffd}c d");
    }

    #[track_caller]
    fn check_table(columns: &[Align], rows: &[&[&str]], expected: &str) {
        let mut table = Table::new(2, columns);
        for row in rows {
            table.row(row.iter().map(Cell::from).collect());
        }
        let mut page = Page::new(Colour::Off);
        table.write(&mut page);
        let text = page.text();
        for line in text.lines() {
            assert!(width(line) <= WIDTH, "{line}");
        }
        assert_eq!(text, expected);
    }

    #[test]
    fn numbers_align_at_the_point() {
        check_table(
            &[Align::Left, Align::Point, Align::Left],
            &[&["mass", "3800", "kg"], &["slope", "7.5", "deg"], &["tiny", "2.5e-17", "J"]],
            "  mass   3800        kg\n  slope     7.5      deg\n  tiny      2.5e-17  J\n",
        );
    }

    #[test]
    fn long_text_wraps_below_itself() {
        let source = "weighing list of the trolley with full load, file 31, sheet 4, checked";
        check_table(
            &[Align::Left, Align::Point, Align::Left],
            &[&["trolley_mass", "3800", source]],
            "  trolley_mass  3800  weighing list of the trolley with full load, file 31,\n                      sheet 4, checked\n",
        );
    }

    #[test]
    fn a_long_name_stands_alone() {
        check_table(
            &[Align::Left, Align::Point, Align::Left],
            &[&["a", "1", "kg"], &["a_name_that_is_longer_than_any_column_should_be", "12", "kg"]],
            "  a   1  kg\n  a_name_that_is_longer_than_any_column_should_be\n     12  kg\n",
        );
    }

    #[test]
    fn colour_is_not_counted() {
        let mut table = Table::new(0, &[Align::Left, Align::Left]);
        table.row(vec![Cell::new("met", Paint::Good), "x".into()]);
        table.row(vec!["undecided".into(), "y".into()]);
        let mut page = Page::new(Colour::On);
        table.write(&mut page);
        assert_eq!(page.text(), "\u{1b}[32mmet\u{1b}[0m        x\nundecided  y\n");
    }

    proptest::proptest! {
        #[test]
        fn no_table_runs_over_the_edge(
            rows in proptest::collection::vec(
                ("[a-z_.]{0,50}", "-?[0-9]{1,9}(\\.[0-9]{1,6})?", "[a-z*/^]{0,16}", "([a-z重]{1,9} ){0,20}"), 1..8),
        ) {
            let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Left, Align::Left]);
            for (name, number, unit, text) in &rows {
                table.row(vec![name.into(), number.into(), unit.into(), text.into()]);
                table.note(text);
            }
            let mut page = Page::new(Colour::Off);
            table.write(&mut page);
            let text = page.text();
            for line in text.lines() {
                proptest::prop_assert!(width(line) <= WIDTH, "{}", line);
            }
            // Nothing is lost: all words stand there in order.
            for (name, number, unit, words) in &rows {
                for part in [name, number, unit].into_iter().map(String::as_str).chain(words.split_whitespace()) {
                    proptest::prop_assert!(part.len() > 30 || text.contains(part), "{} lacks {}", text, part);
                }
            }
        }
    }
}
