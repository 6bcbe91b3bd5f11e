//! Compressed files: gzip (also several members in a row) and zip (any number of members).
//!
//! What a file unpacks to is limited in total, so that a small file made to burst (a "zip bomb") is refused with a
//! message instead of filling the machine.

use crate::ReadError;
use dewbound_sounding::{Note, Place};
use flate2::read::MultiGzDecoder;
use std::io::{Cursor, Read};

/// Bytes a file may unpack to: the largest station files of the archive are below it.
pub(crate) const LIMIT: u64 = 512 * 1024 * 1024;

/// Containers within containers that are opened.
const DEEPEST: usize = 3;

/// Members of a zip file that are looked at.
const MOST_MEMBERS: usize = 5_000;

/// One file out of a container.
#[derive(Debug)]
pub(crate) struct Member {
    /// Its name in the container; `None` for the plain file and for gzip.
    pub name: Option<String>,
    pub bytes: Vec<u8>,
}

/// Everything inside a file, with what could not be opened noted.
#[derive(Debug, Default)]
pub(crate) struct Contents {
    pub members: Vec<Member>,
    pub notes: Vec<Note>,
}

/// Whether these bytes are a container that [`unpack`] opens.
pub(crate) fn is_packed(bytes: &[u8]) -> bool {
    is_gzip(bytes) || is_zip(bytes)
}

fn is_gzip(bytes: &[u8]) -> bool {
    bytes.starts_with(b"\x1F\x8B")
}

fn is_zip(bytes: &[u8]) -> bool {
    bytes.starts_with(b"PK\x03\x04") || bytes.starts_with(b"PK\x05\x06")
}

/// Opens a container, and containers in it.
pub(crate) fn unpack(file: &str, bytes: &[u8], limit: u64) -> Result<Contents, ReadError> {
    let mut opening = Opening {
        file,
        limit,
        left: limit,
        contents: Contents::default(),
    };
    opening.open(None, bytes, 0)?;
    Ok(opening.contents)
}

struct Opening<'a> {
    file: &'a str,
    limit: u64,
    left: u64,
    contents: Contents,
}

impl Opening<'_> {
    fn note(&mut self, what: String, why: &str) {
        self.contents.notes.push(Note {
            place: Place::File,
            what,
            why: why.into(),
        });
    }

    fn damaged(&self, what: String) -> ReadError {
        ReadError::Damaged {
            file: self.file.into(),
            what,
        }
    }

    fn open(&mut self, name: Option<&str>, bytes: &[u8], depth: usize) -> Result<(), ReadError> {
        if is_packed(bytes) && depth >= DEEPEST {
            return Err(self.damaged(format!(
                "compressed more than {DEEPEST} times over; unpack it and open what is inside"
            )));
        }
        if is_gzip(bytes) {
            let unpacked = self.read_all(MultiGzDecoder::new(bytes), name)?;
            self.open(name, &unpacked, depth + 1)
        } else if is_zip(bytes) {
            self.open_zip(name, bytes, depth)
        } else {
            self.contents.members.push(Member {
                name: name.map(str::to_owned),
                bytes: bytes.to_vec(),
            });
            Ok(())
        }
    }

    fn open_zip(
        &mut self,
        outer: Option<&str>,
        bytes: &[u8],
        depth: usize,
    ) -> Result<(), ReadError> {
        let mut archive = zip::ZipArchive::new(Cursor::new(bytes)).map_err(|error| {
            self.damaged(format!(
                "the zip file cannot be opened ({error}); it may be cut short: fetch it again"
            ))
        })?;
        if archive
            .file_names()
            .any(|name| name == "[Content_Types].xml")
        {
            return Err(ReadError::LooksLike {
                file: self.file.into(),
                what: "an office document",
                hint: "save the sheet as CSV and open that",
            });
        }
        if archive.len() > MOST_MEMBERS {
            self.note(
                format!(
                    "the zip file has {} members; only the first {MOST_MEMBERS} were looked at",
                    archive.len()
                ),
                "",
            );
        }
        for index in 0..archive.len().min(MOST_MEMBERS) {
            let member = match archive.by_index(index) {
                Ok(member) => member,
                Err(error) => {
                    self.note(
                        format!(
                            "member {} of the zip file cannot be opened: {error}",
                            index + 1
                        ),
                        "",
                    );
                    continue;
                }
            };
            let name = member.name().to_owned();
            // Directories, and the shadow files some systems add.
            if member.is_dir() || name.starts_with("__MACOSX/") {
                continue;
            }
            let name = match outer {
                Some(outer) => format!("{outer}/{name}"),
                None => name,
            };
            let unpacked = self.read_all(member, Some(&name))?;
            match self.open(Some(&name), &unpacked, depth + 1) {
                Err(error @ ReadError::TooLarge { .. }) => return Err(error),
                // One bad member doesn't lose the others.
                Err(error) => self.note(format!("{name} was not read: {error}"), ""),
                Ok(()) => {}
            }
        }
        Ok(())
    }

    /// Unpacks what can be; a fault in the middle keeps what came before it.
    fn read_all(&mut self, reader: impl Read, name: Option<&str>) -> Result<Vec<u8>, ReadError> {
        let mut bytes = Vec::new();
        let outcome = reader
            .take(self.left.saturating_add(1))
            .read_to_end(&mut bytes);
        let size = u64::try_from(bytes.len()).unwrap_or(u64::MAX);
        if size > self.left {
            return Err(ReadError::TooLarge {
                file: self.file.into(),
                limit: self.limit,
            });
        }
        self.left -= size;
        if let Err(error) = outcome {
            if bytes.is_empty() && name.is_none() {
                return Err(self.damaged(format!(
                    "it cannot be unpacked ({error}); it may be cut short: fetch it again"
                )));
            }
            let which = name.map_or(String::new(), |name| format!("{name}: "));
            self.note(
                format!("{which}unpacking stopped early ({error}); what came before was read"),
                "the file may be cut short: fetch it again",
            );
        }
        Ok(bytes)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;

    fn gzip(bytes: &[u8]) -> Vec<u8> {
        let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::default());
        encoder.write_all(bytes).unwrap();
        encoder.finish().unwrap()
    }

    fn zip_of(members: &[(&str, &[u8])]) -> Vec<u8> {
        let mut writer = zip::ZipWriter::new(Cursor::new(Vec::new()));
        for (name, bytes) in members {
            writer
                .start_file(*name, zip::write::SimpleFileOptions::default())
                .unwrap();
            writer.write_all(bytes).unwrap();
        }
        writer.finish().unwrap().into_inner()
    }

    fn texts(contents: &Contents) -> Vec<&[u8]> {
        contents
            .members
            .iter()
            .map(|member| member.bytes.as_slice())
            .collect()
    }

    #[test]
    fn gzip_zip_and_one_in_the_other() {
        let two = [gzip(b"one"), gzip(b"two")].concat();
        assert_eq!(texts(&unpack("f", &two, LIMIT).unwrap()), [b"onetwo"]);
        let zipped = zip_of(&[("a.txt", b"one"), ("dir/b.gz", &gzip(b"two"))]);
        let contents = unpack("f", &zipped, LIMIT).unwrap();
        assert_eq!(texts(&contents), [b"one", b"two"]);
        assert_eq!(contents.members[1].name.as_deref(), Some("dir/b.gz"));
        assert!(contents.notes.is_empty());
    }

    #[test]
    fn what_would_burst_is_refused() {
        let bomb = gzip(&vec![b'0'; 100_000]);
        assert!(bomb.len() < 1000);
        assert!(matches!(
            unpack("f", &bomb, 99_999),
            Err(ReadError::TooLarge { limit: 99_999, .. })
        ));
        assert!(unpack("f", &bomb, 100_000).is_ok());
        // The limit is on the total.
        let zipped = zip_of(&[("a", &[b'0'; 600]), ("b", &[b'0'; 600])]);
        assert!(matches!(
            unpack("f", &zipped, 1000),
            Err(ReadError::TooLarge { .. })
        ));
        let mut deep = b"x".to_vec();
        for _ in 0..=DEEPEST {
            deep = gzip(&deep);
        }
        assert!(matches!(
            unpack("f", &deep, LIMIT),
            Err(ReadError::Damaged { .. })
        ));
        let contents = unpack("f", &zip_of(&[("deep", &deep), ("a", b"one")]), LIMIT).unwrap();
        assert_eq!(texts(&contents), [b"one"]);
        assert_eq!(contents.notes.len(), 1);
    }

    #[test]
    fn what_is_cut_short_keeps_its_beginning() {
        let text: Vec<u8> = (0..20_000u32)
            .flat_map(|i| i.to_string().into_bytes())
            .collect();
        let packed = gzip(&text);
        let contents = unpack("f", &packed[..packed.len() / 2], LIMIT).unwrap();
        assert!(text.starts_with(&contents.members[0].bytes));
        assert!(contents.members[0].bytes.len() > 1000);
        assert_eq!(contents.notes.len(), 1);
        let zipped = zip_of(&[("a", &text)]);
        assert!(matches!(
            unpack("f", &zipped[..zipped.len() / 2], LIMIT),
            Err(ReadError::Damaged { .. })
        ));
    }

    #[test]
    fn an_office_document_is_not_a_container_of_soundings() {
        let sheet = zip_of(&[("[Content_Types].xml", b"<x/>"), ("xl/sheet.xml", b"<x/>")]);
        assert!(matches!(
            unpack("f", &sheet, LIMIT),
            Err(ReadError::LooksLike { .. })
        ));
    }
}
