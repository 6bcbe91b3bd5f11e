//! From a file to the reader that understands it.

use crate::container::{self, Member};
use crate::seems::seems;
use crate::{Loaded, ReadError, ReadOptions, columns, igra, temp, text};
use dewbound_sounding::{Note, Place};
use jiff::Timestamp;
use std::path::Path;

/// Notes, or members of a container that hold no sounding, that are told one by one.
const NAMED: usize = 8;

/// Reads bytes by content (the name only helps with dates and in messages).
///
/// # Errors
/// Nothing could be read; the error's text says what the file seems to be and what to do.
pub fn read(name: &str, bytes: &[u8], options: &ReadOptions) -> Result<Loaded, ReadError> {
    let loaded = if container::is_packed(bytes) {
        read_container(name, bytes, options)?
    } else {
        read_plain(name, name, bytes, options)?
    };
    let mut loaded = finish(name, loaded, options);
    if loaded.soundings.is_empty() {
        let what = match loaded.notes.as_slice() {
            [] => "no sounding in it".into(),
            notes => {
                let words: Vec<_> = notes.iter().take(NAMED).map(said).collect();
                let more = match notes.len().saturating_sub(NAMED) {
                    0 => String::new(),
                    1 => "; and 1 more note".into(),
                    more => format!("; and {more} more notes"),
                };
                format!("no sounding in it: {}{more}", words.join("; "))
            }
        };
        return Err(ReadError::NothingUsable {
            file: name.into(),
            what,
        });
    }
    loaded.notes.shrink_to_fit();
    Ok(loaded)
}

/// Opens and reads one file.
///
/// # Errors
/// As [`read`], and when the file cannot be opened.
pub fn read_path(path: &Path, options: &ReadOptions) -> Result<Loaded, ReadError> {
    let file = path.display().to_string();
    let io = |source| ReadError::Io {
        file: file.clone(),
        source,
    };
    let metadata = std::fs::metadata(path).map_err(io)?;
    if metadata.len() > container::LIMIT {
        return Err(ReadError::TooLarge {
            file,
            limit: container::LIMIT,
        });
    }
    let bytes = std::fs::read(path).map_err(io)?;
    let modified = metadata
        .modified()
        .ok()
        .and_then(|time| Timestamp::try_from(time).ok());
    let options = ReadOptions {
        modified: options.modified.or(modified),
        ..*options
    };
    read(&file, &bytes, &options)
}

fn said(note: &Note) -> String {
    match note.place {
        Place::Line(line) => format!("line {line}: {}", note.what),
        Place::Byte(byte) => format!("byte {byte}: {}", note.what),
        Place::File | Place::Level(_) => note.what.clone(),
    }
}

/// Reads every member; those that hold nothing are noted.
fn read_container(name: &str, bytes: &[u8], options: &ReadOptions) -> Result<Loaded, ReadError> {
    let contents = container::unpack(name, bytes, container::LIMIT)?;
    let several = contents.members.len() > 1;
    let mut loaded = Loaded {
        soundings: Vec::new(),
        notes: contents.notes,
    };
    let mut refused = Vec::new();
    for Member {
        name: member,
        bytes,
    } in &contents.members
    {
        let (shown, dated) = match member {
            Some(member) => (format!("{name}, {member}"), member.as_str()),
            None => (name.to_owned(), name),
        };
        match read_plain(&shown, dated, bytes, options) {
            Ok(mut part) => {
                if several && let Some(member) = member {
                    for sounding in &mut part.soundings {
                        sounding.notes.insert(0, from_member(member));
                    }
                    for note in &mut part.notes {
                        note.what = format!("{member}: {}", note.what);
                    }
                }
                loaded.soundings.append(&mut part.soundings);
                loaded.notes.append(&mut part.notes);
            }
            Err(error) => refused.push(error),
        }
    }
    if loaded.soundings.is_empty() && refused.len() == 1 {
        // The only thing there is to say.
        refused.pop().map_or(Ok(()), Err)?;
    }
    let more = refused.len().saturating_sub(NAMED);
    loaded
        .notes
        .extend(refused.iter().take(NAMED).map(|error| Note {
            place: Place::File,
            what: format!("not read: {error}"),
            why: String::new(),
        }));
    if more > 0 {
        loaded.notes.push(Note {
            place: Place::File,
            what: match more {
                1 => "1 more member holds no sounding".into(),
                more => format!("{more} more members hold no sounding"),
            },
            why: String::new(),
        });
    }
    Ok(loaded)
}

fn from_member(member: &str) -> Note {
    Note {
        place: Place::File,
        what: format!("from {member} in the archive"),
        why: "line numbers are those of that member".into(),
    }
}

/// Reads a file that is not compressed. `shown` stands in messages, dates may be taken from `dated`.
fn read_plain(
    shown: &str,
    dated: &str,
    bytes: &[u8],
    options: &ReadOptions,
) -> Result<Loaded, ReadError> {
    let file = || shown.to_owned();
    if bytes.trim_ascii().is_empty() {
        return Err(ReadError::Empty { file: file() });
    }
    if let Some(seems) = seems(bytes) {
        return Err(ReadError::LooksLike {
            file: file(),
            what: seems.what,
            hint: seems.hint,
        });
    }
    let text::Decoded { text, notes } = text::decode(bytes);
    let mut loaded = if igra::recognises(&text) {
        igra::read(&text)
    } else if columns::recognises(&text) {
        columns::read(&text, options)
    } else if let Some(error) = columns::complaint(shown, &text, true) {
        return Err(error);
    } else if temp::recognises(&text) {
        let dated = Path::new(dated)
            .file_name()
            .and_then(|name| name.to_str())
            .unwrap_or(dated);
        temp::read(dated, &text, options)
    } else {
        return Err(
            columns::complaint(shown, &text, false).unwrap_or_else(|| ReadError::Unrecognised {
                file: file(),
                hint: format!(
                    "a table needs a header such as pressure_hpa,temperature_c,dewpoint_c; a bulletin starts with TTAA, TTBB, \
                     TTCC or TTDD; this file starts with `{}`",
                    beginning(&text)
                ),
            }),
        );
    };
    loaded.notes.splice(0..0, notes);
    Ok(loaded)
}

/// The first line that isn't blank, cut short.
fn beginning(text: &str) -> String {
    const LONGEST: usize = 40;
    let line = text.lines().map(str::trim).find(|line| !line.is_empty());
    let line = line.unwrap_or_default();
    let mut start: String = line
        .chars()
        .filter(|c| !c.is_control())
        .take(LONGEST)
        .collect();
    if line.chars().nth(LONGEST).is_some() {
        start.push('…');
    }
    start
}

/// What every sounding gets, whatever its format: file, index, and what the station table knows.
fn finish(name: &str, mut loaded: Loaded, options: &ReadOptions) -> Loaded {
    for (index, sounding) in loaded.soundings.iter_mut().enumerate() {
        sounding.source.file = name.to_owned();
        sounding.source.index = index;
        let Some(table) = options.stations else {
            continue;
        };
        table.fill(&mut sounding.station);
        if let Some(words) = table.disagreement(&sounding.station) {
            sounding.notes.push(Note {
                place: Place::File,
                what: format!("{}: {words}", sounding.station.label()),
                why: "the file's own is used; correct whichever is wrong".into(),
            });
        }
    }
    loaded
}
