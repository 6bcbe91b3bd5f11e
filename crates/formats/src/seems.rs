//! What a file seems to be when no reader here takes it.

/// A kind of file without a reader here.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Seems {
    /// The kind, with its article.
    pub what: &'static str,
    /// What to do.
    pub hint: &'static str,
}

const OTHER: &str =
    "give a TEMP bulletin, an IGRA station file or a table with units in its header";
const NOT_YET: &str = "this form is not read yet; ask for the ascent as TEMP text or as a table";
const UNPACK: &str = "unpack it and open what is inside";

/// What starts how.
const STARTS: &[(&[u8], &str, &str)] = &[
    (b"CDF\x01", "NetCDF", NOT_YET),
    (b"CDF\x02", "NetCDF", NOT_YET),
    (b"CDF\x05", "NetCDF", NOT_YET),
    (b"\x89HDF\r\n\x1a\n", "NetCDF or HDF5", NOT_YET),
    (b"BZh", "a bzip2 archive", UNPACK),
    (b"\xFD7zXZ\0", "an xz archive", UNPACK),
    (b"\x28\xB5\x2F\xFD", "a zstd archive", UNPACK),
    (b"7z\xBC\xAF\x27\x1C", "a 7z archive", UNPACK),
    (b"Rar!", "a rar archive", UNPACK),
    (b"%PDF", "a PDF document", OTHER),
    (b"\x89PNG", "a picture", OTHER),
    (b"\xFF\xD8\xFF", "a picture", OTHER),
    (b"GIF8", "a picture", OTHER),
    (
        b"\xD0\xCF\x11\xE0",
        "an old office document",
        "save the sheet as CSV and open that",
    ),
    (b"<?xml", "XML", OTHER),
    (
        b"<!doctype",
        "a web page",
        "the download may have brought an error page instead of the data",
    ),
    (
        b"<html",
        "a web page",
        "the download may have brought an error page instead of the data",
    ),
    (b"{", "JSON", OTHER),
    (b"[", "JSON", OTHER),
];

/// Recognises binary forms and others that no text reader should be tried on.
pub(crate) fn seems(bytes: &[u8]) -> Option<Seems> {
    let start = bytes.trim_ascii_start();
    let known = STARTS.iter().find(|(magic, ..)| {
        bytes.starts_with(magic)
            || start
                .get(..magic.len())
                .is_some_and(|start| start.eq_ignore_ascii_case(magic))
    });
    if let Some((_, what, hint)) = known {
        return Some(Seems { what, hint });
    }
    if bytes.get(257..262) == Some(b"ustar") {
        return Some(Seems {
            what: "a tar archive",
            hint: UNPACK,
        });
    }
    if !is_binary(bytes) {
        return None;
    }
    // Both may stand behind a bulletin heading; the edition number follows three bytes of length.
    let message = |name: &[u8; 4], editions: std::ops::RangeInclusive<u8>| {
        bytes.windows(8).any(|window| {
            window.starts_with(name) && window.last().is_some_and(|e| editions.contains(e))
        })
    };
    Some(if message(b"BUFR", 0..=4) {
        Seems {
            what: "BUFR",
            hint: NOT_YET,
        }
    } else if message(b"GRIB", 0..=2) {
        Seems {
            what: "GRIB",
            hint: OTHER,
        }
    } else {
        Seems {
            what: "binary data of no kind known here",
            hint: OTHER,
        }
    })
}

/// Whether this is no text: one byte in 25 or more is a control character (in random bytes, one in twelve). What frames
/// bulletins on the wire (start and end of heading and text, record separator) doesn't count, nor does a stray zero.
fn is_binary(bytes: &[u8]) -> bool {
    if bytes.starts_with(b"\xFF\xFE") || bytes.starts_with(b"\xFE\xFF") {
        return false;
    }
    let looked_at = bytes.get(..65_536).unwrap_or(bytes);
    let control = looked_at
        .iter()
        .filter(|byte| matches!(byte, 0x00 | 0x05..=0x08 | 0x0E..=0x1D | 0x1F | 0x7F))
        .count();
    control * 25 > looked_at.len()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(bytes: &[u8], expect: Option<&str>) {
        assert_eq!(seems(bytes).map(|seems| seems.what), expect);
    }

    #[test]
    fn kinds() {
        check(b"BUFR\x00\x01\x00\x04rest\0", Some("BUFR"));
        check(
            b"\x01\r\r\n123\r\r\nIUSZ01 ZZZZ 171800\r\r\nBUFR\x00\x01\x00\x04\0\0\0\0",
            Some("BUFR"),
        );
        check(b"TTAA 67181 01234 99965 27415 20010 00123 27015\0 =", None);
        check(b"GRIB\x00\x00\x00\x02", Some("GRIB"));
        check(b"CDF\x01\0\0", Some("NetCDF"));
        check(b"\x89HDF\r\n\x1a\n", Some("NetCDF or HDF5"));
        check(b"\n<!DOCTYPE html>", Some("a web page"));
        check(
            &[0x00, 0x9C, 0x42],
            Some("binary data of no kind known here"),
        );
        check(b"pressure_hpa,temperature_c\n", None);
        check(b"\x01\r\r\nUSZZ01 ZZZZ 171800\r\r\nTTAA\x03", None);
        check(b"\xFF\xFEp\0", None);
        check(b"", None);
    }
}
