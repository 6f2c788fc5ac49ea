//! STL files, binary and text.
//!
//! A file is binary if and only if its size is 84 + 50 n for the n that it
//! states; many binary files begin with the word "solid". The normals in the
//! file are not used: the order of the corners says where outside is.

use crate::{Format, Mesh};
use std::fmt;

/// Why bytes are no STL file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum StlFault {
    /// Neither a binary file nor text that begins with `solid`.
    NotStl,
    /// Looks binary, but the stated count does not fit the size.
    Length {
        /// Triangles that it states.
        stated: u32,
        /// Bytes that it has.
        size: usize,
    },
    /// Text that goes wrong.
    Text {
        /// Counted from 1.
        line: usize,
        /// What should stand there.
        expected: &'static str,
    },
    /// A corner that is no finite number, in the triangle counted from 1.
    NotFinite(usize),
    /// No triangle, or none that is more than a line.
    Empty,
}

impl fmt::Display for StlFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            StlFault::NotStl => f.write_str("it is neither binary nor text that begins with `solid`"),
            StlFault::Length { stated, size } => {
                let needed = 84 + 50 * u64::from(*stated);
                write!(f, "it states {stated} triangles, which take {needed} bytes, but it has {size}")
            }
            StlFault::Text { line, expected } => write!(f, "line {line}: {expected} is expected"),
            StlFault::NotFinite(triangle) => write!(f, "triangle {triangle} has a corner that is no finite number"),
            StlFault::Empty => f.write_str("it holds no triangle"),
        }
    }
}

impl std::error::Error for StlFault {}

/// Reads an STL file.
pub fn read_stl(bytes: &[u8]) -> Result<Mesh, StlFault> {
    let stated = bytes.get(80..84).and_then(|it| it.try_into().ok()).map(u32::from_le_bytes);
    let mesh = match stated {
        Some(stated) if bytes.len() as u64 == 84 + 50 * u64::from(stated) => read_binary(bytes)?,
        _ => {
            let looks_like_text = starts_with_solid(bytes) && !bytes.contains(&0);
            match stated {
                _ if looks_like_text => read_text(bytes)?,
                Some(stated) => return Err(StlFault::Length { stated, size: bytes.len() }),
                None => return Err(StlFault::NotStl),
            }
        }
    };
    if mesh.triangles.is_empty() { Err(StlFault::Empty) } else { Ok(mesh) }
}

fn read_binary(bytes: &[u8]) -> Result<Mesh, StlFault> {
    let mut mesh = Mesh { format: Format::Binary, ..Mesh::default() };
    let (records, _) = bytes.get(84..).unwrap_or(&[]).as_chunks::<50>();
    for record in records {
        let (numbers, _) = record[12..48].as_chunks::<4>();
        let mut numbers = numbers.iter().map(|number| f64::from(f32::from_le_bytes(*number)));
        let corners = std::array::from_fn(|_| std::array::from_fn(|_| numbers.next().unwrap_or(f64::NAN)));
        push(&mut mesh, corners)?;
    }
    Ok(mesh)
}

fn push(mesh: &mut Mesh, corners: [[f64; 3]; 3]) -> Result<(), StlFault> {
    if corners.iter().flatten().any(|value| !value.is_finite()) {
        return Err(StlFault::NotFinite(mesh.triangles.len() + mesh.n_degenerate + 1));
    }
    // Three different corners on one line stay: without them their neighbours would be open.
    if corners[0] == corners[1] || corners[1] == corners[2] || corners[0] == corners[2] {
        mesh.n_degenerate += 1;
    } else {
        mesh.triangles.push(corners);
    }
    Ok(())
}

const BYTE_ORDER_MARK: &[u8] = b"\xef\xbb\xbf";

fn starts_with_solid(bytes: &[u8]) -> bool {
    let mut words = Words::new(bytes);
    words.take_if("solid")
}

/// Words of the text. Names may hold bytes in any encoding, so it is never decoded.
struct Words<'b> {
    rest: &'b [u8],
    line: usize,
}

impl<'b> Words<'b> {
    fn new(bytes: &'b [u8]) -> Words<'b> {
        Words { rest: bytes.strip_prefix(BYTE_ORDER_MARK).unwrap_or(bytes), line: 1 }
    }

    /// Skips white space; tells whether a line ended in it.
    fn skip_space(&mut self) -> bool {
        let from = self.line;
        while let Some((first, rest)) = self.rest.split_first() {
            match first {
                b'\n' => self.line += 1,
                // A carriage return of its own ends a line too.
                b'\r' if rest.first() != Some(&b'\n') => self.line += 1,
                _ if first.is_ascii_whitespace() || *first == 0x0b => {}
                _ => break,
            }
            self.rest = rest;
        }
        self.line > from || self.rest.is_empty()
    }

    fn next(&mut self) -> Option<&'b [u8]> {
        self.skip_space();
        let end = self.rest.iter().position(|b| b.is_ascii_whitespace() || *b == 0x0b).unwrap_or(self.rest.len());
        let (word, rest) = self.rest.split_at_checked(end)?;
        self.rest = rest;
        (!word.is_empty()).then_some(word)
    }

    fn take_if(&mut self, expected: &str) -> bool {
        let before = (self.rest, self.line);
        let taken = self.next().is_some_and(|word| word.eq_ignore_ascii_case(expected.as_bytes()));
        if !taken {
            (self.rest, self.line) = before;
        }
        taken
    }

    fn expect(&mut self, expected: &'static str) -> Result<(), StlFault> {
        if self.take_if(expected) {
            return Ok(());
        }
        self.skip_space();
        Err(StlFault::Text { line: self.line, expected })
    }

    /// A name runs to the end of its line, or to the facets where all stands in one line.
    fn skip_name(&mut self) {
        while !self.skip_space() {
            let here = (self.rest, self.line);
            if self.take_if("facet") && self.take_if("normal") {
                (self.rest, self.line) = here;
                return;
            }
            (self.rest, self.line) = here;
            if self.next().is_none() {
                return;
            }
        }
    }
}

fn read_text(bytes: &[u8]) -> Result<Mesh, StlFault> {
    let mut mesh = Mesh { format: Format::Text, ..Mesh::default() };
    let mut words = Words::new(bytes);
    words.expect("solid")?;
    loop {
        words.skip_name();
        while words.take_if("facet") {
            let corners = read_facet(&mut words)?;
            push(&mut mesh, corners)?;
        }
        words.expect("endsolid")?;
        words.skip_name();
        if words.rest.is_empty() {
            return Ok(mesh);
        }
        // One file may hold several solids.
        words.expect("solid")?;
    }
}

fn read_facet(words: &mut Words) -> Result<[[f64; 3]; 3], StlFault> {
    words.expect("normal")?;
    for _ in 0..3 {
        // Not used, and often no number at all for a triangle without area.
        words.next().ok_or(StlFault::Text { line: words.line, expected: "a normal" })?;
    }
    words.expect("outer")?;
    words.expect("loop")?;
    let mut corners = [[0.0; 3]; 3];
    for corner in &mut corners {
        words.expect("vertex")?;
        for value in corner {
            words.skip_space();
            let line = words.line;
            let word = words.next().and_then(|word| std::str::from_utf8(word).ok());
            *value =
                word.and_then(|word| word.parse().ok()).ok_or(StlFault::Text { line, expected: "a coordinate" })?;
        }
    }
    words.expect("endloop")?;
    words.expect("endfacet")?;
    Ok(corners)
}
