//! Lines and columns of a text. Lines end at `\n`, `\r\n` or a lone `\r`, as
//! in the language-server protocol, and nowhere else.

/// Where the lines of one text begin.
#[derive(Clone, Debug)]
pub struct LineIndex {
    starts: Vec<u32>,
    len: u32,
}

impl LineIndex {
    /// Reads the line starts of `text`.
    pub fn new(text: &str) -> LineIndex {
        let bytes = text.as_bytes();
        let mut starts = vec![0];
        for (at, byte) in bytes.iter().enumerate() {
            let ends_line = match byte {
                b'\n' => true,
                b'\r' => bytes.get(at + 1) != Some(&b'\n'),
                _ => false,
            };
            if ends_line {
                starts.push(at as u32 + 1);
            }
        }
        LineIndex { starts, len: text.len() as u32 }
    }

    /// Number of lines; an empty text has one.
    pub fn n_lines(&self) -> usize {
        self.starts.len()
    }

    /// Line of `offset`, counted from 0. Past the end: the last line.
    pub fn line(&self, offset: u32) -> usize {
        self.starts.partition_point(|&start| start <= offset) - 1
    }

    /// First byte of line `line`, or the end of the text past the last.
    pub fn start(&self, line: usize) -> u32 {
        self.starts.get(line).copied().unwrap_or(self.len)
    }

    /// Line and column of `offset`, both from 1; the column counts characters,
    /// which is what an editor's status line shows.
    pub fn line_column(&self, text: &str, offset: u32) -> (usize, usize) {
        let offset = offset.min(self.len);
        let line = self.line(offset);
        let start = self.starts[line] as usize;
        let column = text.as_bytes()[start..offset as usize].iter().filter(|&&b| b & 0xC0 != 0x80).count();
        (line + 1, column + 1)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_end_at_lf_crlf_and_cr() {
        let index = LineIndex::new("a\nb\r\nc\rd");
        assert_eq!(index.n_lines(), 4);
        assert_eq!((0..4).map(|line| index.start(line)).collect::<Vec<_>>(), [0, 2, 5, 7]);
    }

    #[test]
    fn columns_count_characters_not_bytes() {
        let text = "x = 3 kg·m²  # µ\ny";
        let index = LineIndex::new(text);
        let hash = text.find('#').unwrap() as u32;
        assert_eq!(index.line_column(text, hash), (1, 14));
        assert_eq!(index.line_column(text, text.len() as u32), (2, 2));
    }
}
