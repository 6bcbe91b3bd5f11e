//! Bytes to text: byte order marks, UTF-16, and the Latin-1 that spreadsheets still write.

use dewbound_sounding::{Note, Place};
use std::borrow::Cow;

/// Text of a file and how it was decoded.
pub(crate) struct Decoded<'a> {
    /// The text, without byte order mark; lines end in `\n`, possibly after `\r`.
    pub text: Cow<'a, str>,
    /// What a person should know about the decoding.
    pub notes: Vec<Note>,
}

/// Decodes a file. Never fails: bytes that are not UTF-8 are read as Latin-1, in which every byte is a character.
pub(crate) fn decode(bytes: &[u8]) -> Decoded<'_> {
    let mut notes = Vec::new();
    let mut note = |what: &str, why: &str| {
        notes.push(Note {
            place: Place::File,
            what: what.into(),
            why: why.into(),
        });
    };
    let text = if let Some(rest) = bytes.strip_prefix(b"\xEF\xBB\xBF") {
        utf8_or_latin1(rest, &mut note)
    } else if let Some(rest) = bytes.strip_prefix(b"\xFF\xFE") {
        Cow::Owned(utf16(rest, u16::from_le_bytes))
    } else if let Some(rest) = bytes.strip_prefix(b"\xFE\xFF") {
        Cow::Owned(utf16(rest, u16::from_be_bytes))
    } else {
        utf8_or_latin1(bytes, &mut note)
    };
    // A file whose lines end in a bare carriage return would otherwise be one line.
    let text = if text.contains('\r') && !text.contains('\n') {
        Cow::Owned(text.replace('\r', "\n"))
    } else {
        text
    };
    Decoded { text, notes }
}

fn utf8_or_latin1<'a>(bytes: &'a [u8], note: &mut impl FnMut(&str, &str)) -> Cow<'a, str> {
    match std::str::from_utf8(bytes) {
        Ok(text) => Cow::Borrowed(text),
        Err(error) => {
            let line = bytes
                .iter()
                .take(error.valid_up_to())
                .filter(|&&byte| byte == b'\n')
                .count()
                + 1;
            note(
                &format!("the text is not UTF-8 (first at line {line}) and was read as Latin-1"),
                "names may look odd; numbers are not affected",
            );
            Cow::Owned(bytes.iter().map(|&byte| char::from(byte)).collect())
        }
    }
}

fn utf16(bytes: &[u8], unit: fn([u8; 2]) -> u16) -> String {
    let units = bytes.chunks_exact(2).map(|pair| match pair {
        [a, b] => unit([*a, *b]),
        _ => 0xFFFD,
    });
    char::decode_utf16(units)
        .map(|character| character.unwrap_or(char::REPLACEMENT_CHARACTER))
        .collect()
}

/// Lines with their numbers (from 1), line ends removed.
pub(crate) fn lines(text: &str) -> impl Iterator<Item = (usize, &str)> {
    text.strip_suffix('\n')
        .unwrap_or(text)
        .split('\n')
        .enumerate()
        .map(|(index, line)| (index + 1, line.trim_end_matches('\r')))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(bytes: &[u8], expect: &str, notes: usize) {
        let decoded = decode(bytes);
        assert_eq!(decoded.text, expect);
        assert_eq!(decoded.notes.len(), notes);
    }

    #[test]
    fn decodes_what_spreadsheets_write() {
        check("Säntis\n".as_bytes(), "Säntis\n", 0);
        check(b"\xEF\xBB\xBFa,b\n", "a,b\n", 0);
        check(b"S\xE4ntis\n", "Säntis\n", 1);
        check(b"\xFF\xFEa\0,\0b\0", "a,b", 0);
        check(b"\xFE\xFF\0a\0,\0b", "a,b", 0);
        check(b"a\rb\r", "a\nb\n", 0);
    }

    #[test]
    fn numbers_lines_from_one_and_drops_their_ends() {
        let found: Vec<_> = lines("a\r\n\r\nb\r\r\nc").collect();
        assert_eq!(found, [(1, "a"), (2, ""), (3, "b"), (4, "c")]);
        assert_eq!(lines("a\n").count(), 1);
    }
}
