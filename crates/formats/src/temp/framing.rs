//! From text to message parts: bulletin headings, control characters, sequence numbers, the `=` that ends a report.

use dewbound_sounding::{Note, Place};

/// A group with the line it stands on (from 1).
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Word<'a> {
    pub text: &'a str,
    pub line: usize,
}

/// One part of one report, from its `TTAA` (or the like) to its end.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Message<'a> {
    /// The groups, the first being the part's letters.
    pub words: Vec<Word<'a>>,
    /// The bulletin marks itself as a correction (`CCA`, `CCB`, ...).
    pub correction: bool,
}

/// What a part's four letters say.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Letters {
    pub platform: Platform,
    /// Wind only (the PILOT forms).
    pub pilot: bool,
    pub part: Part,
}

/// Who reports.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Platform {
    Land,
    Ship,
    Drop,
    Mobile,
}

/// Which part of a report.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Part {
    A,
    B,
    C,
    D,
}

impl Part {
    /// Parts C and D lie above 100 hPa and give pressure in tenths of a hectopascal.
    pub fn upper(self) -> bool {
        matches!(self, Self::C | Self::D)
    }
}

impl Letters {
    /// Reads `TTAA`, `UUBB`, `XXCC`, `PPDD` and the like: FM 35 to 38 and FM 32 to 34.
    pub fn read(word: &str) -> Option<Self> {
        let (form, part) = word.split_at_checked(2)?;
        let (platform, pilot) = match form {
            "TT" => (Platform::Land, false),
            "UU" => (Platform::Ship, false),
            "XX" => (Platform::Drop, false),
            "II" => (Platform::Mobile, false),
            "PP" => (Platform::Land, true),
            "QQ" => (Platform::Ship, true),
            "EE" => (Platform::Mobile, true),
            _ => return None,
        };
        let part = match part {
            "AA" => Part::A,
            "BB" => Part::B,
            "CC" => Part::C,
            "DD" => Part::D,
            _ => return None,
        };
        Some(Self {
            platform,
            pilot,
            part,
        })
    }
}

/// Splits a text into message parts. The notes name every stretch of text that belongs to none of them.
pub(super) fn messages(text: &str) -> (Vec<Message<'_>>, Vec<Note>) {
    let mut splitter = Splitter::default();
    let newline = if text.contains('\n') { '\n' } else { '\r' };
    let mut lines = text
        .split(newline)
        .enumerate()
        .map(|(index, line)| (index + 1, line))
        .peekable();
    while let Some((number, line)) = lines.next() {
        let before_heading = lines.peek().is_some_and(|(_, next)| {
            next.contains(START_OF_HEADING) || Heading::read(next).is_some()
        });
        splitter.line(number, line, before_heading);
    }
    splitter.close();
    splitter.flush();
    (splitter.messages, splitter.notes)
}

const START_OF_HEADING: char = '\u{1}';
const END_OF_TEXT: char = '\u{3}';

/// Groups of a part; the longest real ones hold a few hundred. What follows is set aside with a note, so that a file
/// that merely starts like a report can't use up the memory.
const LONGEST_PART: usize = 2_000;

#[derive(Default)]
struct Splitter<'a> {
    messages: Vec<Message<'a>>,
    notes: Vec<Note>,
    open: Option<Message<'a>>,
    heading: Option<Heading<'a>>,
    stray: Vec<Word<'a>>,
}

impl<'a> Splitter<'a> {
    fn line(&mut self, number: usize, line: &'a str, before_heading: bool) {
        let mut bulletins = line.split(START_OF_HEADING).peekable();
        while let Some(bulletin) = bulletins.next() {
            let before_heading = before_heading || bulletins.peek().is_some();
            for (index, piece) in bulletin.split(END_OF_TEXT).enumerate() {
                if index > 0 {
                    self.end_bulletin();
                }
                self.piece(number, piece, before_heading);
            }
            if bulletins.peek().is_some() {
                self.end_bulletin();
            }
        }
    }

    fn end_bulletin(&mut self) {
        self.close();
        self.flush();
        self.heading = None;
    }

    fn piece(&mut self, line: usize, piece: &'a str, before_heading: bool) {
        if let Some(heading) = Heading::read(piece) {
            self.close();
            self.flush();
            self.heading = Some(heading);
            return;
        }
        let bare = piece.trim();
        if bare == "NNNN" || bare.starts_with("ZCZC") || (before_heading && self.counts(bare)) {
            self.close();
            return;
        }
        for run in piece.split(separates) {
            let mut rest = run;
            while let Some((before, after)) = rest.split_once('=') {
                self.word(before, line);
                self.close();
                rest = after;
            }
            self.word(rest, line);
        }
    }

    /// A lone number before a heading counts the bulletins of a circuit, or their characters. Inside a report only one
    /// that can't be a group of five figures does.
    fn counts(&self, bare: &str) -> bool {
        (3..=10).contains(&bare.len())
            && (self.open.is_none() || bare.len() != 5)
            && bare.bytes().all(|byte| byte.is_ascii_digit())
    }

    fn word(&mut self, text: &'a str, line: usize) {
        if text.is_empty() {
            return;
        }
        let word = Word { text, line };
        if Letters::read(text).is_some() {
            self.close();
            self.flush();
            self.open = Some(Message {
                words: vec![word],
                correction: self
                    .heading
                    .as_ref()
                    .is_some_and(|heading| heading.correction),
            });
        } else if let Some(open) = &mut self.open
            && open.words.len() < LONGEST_PART
        {
            open.words.push(word);
        } else {
            self.close();
            self.stray.push(word);
        }
    }

    fn close(&mut self) {
        self.messages.extend(self.open.take());
    }

    fn flush(&mut self) {
        let stray = std::mem::take(&mut self.stray);
        let Some(first) = stray.first() else { return };
        // A lone semicolon or row of dots between bulletins says nothing that could be missed.
        let mut characters = stray.iter().flat_map(|word| word.text.chars());
        if !characters.any(char::is_alphanumeric) {
            return;
        }
        let of = self.heading.as_ref().map_or(String::new(), |heading| {
            format!(" of bulletin {}", heading.text)
        });
        let (what, why) = if stray.iter().all(|word| word.text == "NIL") {
            (format!("NIL: nothing to report{of}"), "")
        } else {
            (
                format!("text{of} set aside: {}", quote(&stray)),
                "it belongs to no part of a report (TTAA to TTDD, PPAA to PPDD and their like)",
            )
        };
        self.notes.push(Note {
            place: Place::Line(first.line),
            what,
            why: why.into(),
        });
    }
}

/// Blanks and control characters part the groups.
fn separates(character: char) -> bool {
    character.is_whitespace() || character.is_control()
}

/// Groups as they stand, shortened when there are many.
pub(super) fn quote(words: &[Word]) -> String {
    const SHOWN: usize = 24;
    const LONGEST: usize = 24;
    let mut text = String::new();
    for word in words.iter().take(SHOWN) {
        if !text.is_empty() {
            text.push(' ');
        }
        text.extend(word.text.chars().take(LONGEST));
        if word.text.chars().nth(LONGEST).is_some() {
            text.push('…');
        }
    }
    if words.len() > SHOWN {
        text.push_str(&format!(" … ({} groups in all)", words.len()));
    }
    text
}

/// An abbreviated heading `TTAAii CCCC YYGGgg (BBB)`.
struct Heading<'a> {
    text: &'a str,
    correction: bool,
}

impl<'a> Heading<'a> {
    fn read(line: &'a str) -> Option<Self> {
        let text = line.trim_matches(separates);
        let letters = |word: &str| word.bytes().all(|byte| byte.is_ascii_uppercase());
        let digits = |word: &str| word.bytes().all(|byte| byte.is_ascii_digit());
        let mut words = text.split_ascii_whitespace();
        let (data, centre, time) = (words.next()?, words.next()?, words.next()?);
        let more = words.next();
        let (kind, number) = data.split_at_checked(4)?;
        let fits = letters(kind)
            && (1..=2).contains(&number.len())
            && digits(number)
            && centre.len() == 4
            && centre.bytes().all(|byte| byte.is_ascii_alphanumeric())
            && time.len() == 6
            && digits(time)
            && more.is_none_or(|more| more.len() == 3 && letters(more))
            && words.next().is_none();
        fits.then(|| Self {
            text,
            correction: more.is_some_and(|more| more.starts_with("CC")),
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn starts(text: &str) -> Vec<(String, usize)> {
        messages(text)
            .0
            .iter()
            .map(|message| {
                let words: Vec<_> = message.words.iter().map(|word| word.text).collect();
                (words.join(" "), message.words[0].line)
            })
            .collect()
    }

    fn owned(expect: &[(&str, usize)]) -> Vec<(String, usize)> {
        expect
            .iter()
            .map(|(text, line)| ((*text).to_string(), *line))
            .collect()
    }

    #[test]
    fn punctuation_alone_is_not_told_of() {
        let notes = |between: &str| {
            messages(&format!("TTAA 1 2=\n{between}\nTTBB 4=\n"))
                .1
                .len()
        };
        assert_eq!([notes(";"), notes("-- ..."), notes("; lost")], [0, 0, 1]);
    }

    #[test]
    fn splits_at_ends_letters_and_control_characters() {
        let text = "0000018300\u{1}\r\r\n123\r\r\nUSXX01 ABCD 050000\r\r\nTTAA 1 2\r\r\n3= TTBB 4=\r\r\nTTCC 5\r\r\n\u{3}0000009900\u{1}\r\r\n00124\r\r\n\
                    USXX02 ABCD 050000 CCA\r\r\nTTDD 6==\r\r\n\u{3}";
        assert_eq!(
            starts(text),
            owned(&[
                ("TTAA 1 2 3", 4),
                ("TTBB 4", 5),
                ("TTCC 5", 6),
                ("TTDD 6", 10)
            ])
        );
        let (found, notes) = messages(text);
        assert!(notes.is_empty(), "{notes:?}");
        let corrections: Vec<_> = found.iter().map(|message| message.correction).collect();
        assert_eq!(corrections, [false, false, false, true]);
    }

    #[test]
    fn a_heading_ends_a_report_that_lacks_its_sign() {
        let text = "TTAA 1 2\n777\nUSXX01 ABCD 050000\nTTBB 3\nNNNN\n";
        assert_eq!(starts(text), owned(&[("TTAA 1 2", 1), ("TTBB 3", 4)]));
    }

    #[test]
    fn text_outside_is_named() {
        let (found, notes) = messages("AAXX 05001\n00001 41598=\nTTAA 1=\nlost\n");
        assert_eq!(found.len(), 1);
        let places: Vec<_> = notes.iter().map(|note| note.place).collect();
        assert_eq!(places, [Place::Line(1), Place::Line(4)]);
        assert!(notes[0].what.contains("AAXX 05001 00001 41598"));
        let (_, notes) = messages("USXX01 ABCD 050000\nNIL=\n");
        assert_eq!(
            notes[0].what,
            "NIL: nothing to report of bulletin USXX01 ABCD 050000"
        );
    }

    #[test]
    fn bare_carriage_returns_end_lines_too() {
        assert_eq!(
            starts("x\rTTAA 1\rTTBB"),
            owned(&[("TTAA 1", 2), ("TTBB", 3)])
        );
    }
}
