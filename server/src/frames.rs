//! Messages on the wire: a `Content-Length` header, an empty line, the body.
//!
//! Bytes that are no message are skipped up to the next header, so that one
//! broken message costs only itself. Knows nothing of what a body says.

use std::io::{BufRead, Read, Result, Write};

/// What was read.
#[derive(Debug, PartialEq, Eq)]
pub(crate) enum Frame {
    /// A body of the length that its header states.
    Body(Vec<u8>),
    /// Bytes where a header should be. Once for a run of them.
    Garbage,
}

/// Reads frames.
pub(crate) struct Frames<R> {
    input: R,
    waiting: Option<Frame>,
}

/// No header line of a client is longer.
const LONGEST_LINE: u64 = 8192;
/// No message is longer; a header that says so is garbage.
const LONGEST_BODY: u64 = 1 << 30;

enum Line {
    End,
    Empty,
    Length { length: Option<u64>, clean: bool },
    Other,
    Garbage,
}

impl<R: BufRead> Frames<R> {
    pub fn new(input: R) -> Frames<R> {
        Frames { input, waiting: None }
    }

    /// The next frame; nothing at the end of the input, in the middle of a frame too.
    pub fn next(&mut self) -> Result<Option<Frame>> {
        if let Some(frame) = self.waiting.take() {
            return Ok(Some(frame));
        }
        let (mut length, mut garbage, mut in_header) = (None, false, false);
        loop {
            match self.line()? {
                Line::End => return Ok(garbage.then_some(Frame::Garbage)),
                Line::Empty if length.is_some() || in_header => break,
                Line::Empty => {}
                Line::Length { length: found, clean } => {
                    (length, in_header) = (found, true);
                    garbage |= !clean || found.is_none();
                }
                Line::Other => in_header = true,
                Line::Garbage => garbage = true,
            }
        }
        let Some(length) = length else { return Ok(Some(Frame::Garbage)) };
        // Grows with what arrives: a stated length is only believed byte by byte.
        let mut body = Vec::new();
        let read = (&mut self.input).take(length).read_to_end(&mut body)?;
        if (read as u64) < length {
            return Ok(None);
        }
        if garbage {
            self.waiting = Some(Frame::Body(body));
            return Ok(Some(Frame::Garbage));
        }
        Ok(Some(Frame::Body(body)))
    }

    fn line(&mut self) -> Result<Line> {
        let mut line = Vec::new();
        (&mut self.input).take(LONGEST_LINE).read_until(b'\n', &mut line)?;
        if line.is_empty() {
            return Ok(Line::End);
        }
        let line = line.trim_ascii();
        if line.is_empty() {
            return Ok(Line::Empty);
        }
        const NAME: &[u8] = b"content-length:";
        // A header may follow the rest of a body that was longer than stated.
        if let Some(at) = line.windows(NAME.len()).rposition(|it| it.eq_ignore_ascii_case(NAME)) {
            let number = line.get(at + NAME.len()..).unwrap_or(b"").trim_ascii();
            let length = std::str::from_utf8(number).ok().and_then(|number| number.parse().ok());
            return Ok(Line::Length { length: length.filter(|it| *it <= LONGEST_BODY), clean: at == 0 });
        }
        let name = line.split(|b| *b == b':').next().unwrap_or(b"");
        let is_header = name.len() < line.len() && name.iter().all(|b| b.is_ascii_alphanumeric() || *b == b'-');
        Ok(if is_header && !name.is_empty() { Line::Other } else { Line::Garbage })
    }
}

/// Writes one message.
pub(crate) fn write_frame(output: &mut impl Write, body: &[u8]) -> Result<()> {
    write!(output, "Content-Length: {}\r\n\r\n", body.len())?;
    output.write_all(body)?;
    output.flush()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(input: &str, expected: &[&str]) {
        let mut frames = Frames::new(input.as_bytes());
        let mut found = Vec::new();
        while let Some(frame) = frames.next().expect("no fault of the pipe") {
            found.push(match frame {
                Frame::Body(body) => String::from_utf8(body).expect("text"),
                Frame::Garbage => "?".to_string(),
            });
        }
        assert_eq!(found, expected);
    }

    #[test]
    fn bodies_have_the_stated_length() {
        check("Content-Length: 2\r\n\r\n{}Content-Length: 4\r\n\r\n\"µ\"", &["{}", "\"µ\""]);
        check("Content-Length: 0\r\n\r\nContent-Length: 1\r\n\r\n1", &["", "1"]);
    }

    #[test]
    fn headers_are_read_with_tolerance() {
        check("content-type: application/x; charset=utf-8\nCONTENT-LENGTH:2\n\n{}", &["{}"]);
        check("\r\n\r\nContent-Length: 2\r\n\r\n{}\r\n", &["{}"]);
    }

    #[test]
    fn garbage_costs_itself_alone() {
        check("nonsense\r\nContent-Length: 2\r\n\r\n{}", &["?", "{}"]);
        check("Content-Length: x\r\n\r\nContent-Length: 2\r\n\r\n{}", &["?", "{}"]);
        check("Content-Type: x\r\n\r\nContent-Length: 2\r\n\r\n{}", &["?", "{}"]);
        check("Content-Length: 99999999999999999999\r\n\r\nContent-Length: 2\r\n\r\n{}", &["?", "{}"]);
    }

    #[test]
    fn a_length_that_is_too_short_costs_the_rest_of_the_body() {
        check("Content-Length: 3\r\n\r\n{\"a\": 1}Content-Length: 2\r\n\r\n{}", &["{\"a", "?", "{}"]);
    }

    #[test]
    fn an_end_in_the_middle_is_an_end() {
        check("Content-Length: 200\r\n\r\n{}", &[]);
        check("Content-Length: 2\r\n\r\n{}Content-Le", &["{}", "?"]);
        check("", &[]);
    }
}
