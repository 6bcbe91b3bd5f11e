//! Lines to fields.
//!
//! A record is one line. A quote left open therefore spoils its own line only, where a reader of general CSV would
//! swallow the rest of the file.

use std::borrow::Cow;

/// The separator between fields.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Delimiter(u8);

impl Delimiter {
    /// All that are tried, the least ambiguous first.
    pub const ALL: [Self; 3] = [Self(b'\t'), Self(b';'), Self::COMMA];
    /// The ordinary one.
    pub const COMMA: Self = Self(b',');

    /// As a character.
    pub fn char(self) -> char {
        char::from(self.0)
    }

    /// Whether a number may carry a decimal comma.
    pub fn allows_decimal_comma(self) -> bool {
        self.0 != b','
    }

    /// Splits a line, calling `each` with index and field. Quotes are removed where the line has any.
    pub fn split<'a>(self, line: &'a str, mut each: impl FnMut(usize, Cow<'a, str>)) {
        if line.contains('"') {
            for (index, field) in self.quoted_fields(line).iter().enumerate() {
                each(index, Cow::Owned(field.to_owned()));
            }
        } else {
            for (index, field) in line.split(self.char()).enumerate() {
                each(index, Cow::Borrowed(field));
            }
        }
    }

    /// The fields of a line with quotes.
    fn quoted_fields(self, line: &str) -> csv::StringRecord {
        let mut record = csv::StringRecord::new();
        // Reading from memory can't fail, and a line of a `str` is UTF-8: there is always one record.
        let _ = csv::ReaderBuilder::new()
            .delimiter(self.0)
            .has_headers(false)
            // A stray carriage return is part of its field.
            .terminator(csv::Terminator::Any(b'\n'))
            .from_reader(line.as_bytes())
            .read_record(&mut record);
        record
    }

    /// All fields of a line.
    pub fn fields<'a>(self, line: &'a str) -> Vec<Cow<'a, str>> {
        let mut fields = Vec::new();
        self.split(line, |_, field| fields.push(field));
        fields
    }

    /// One line from fields, quoted where needed.
    pub fn join<S: AsRef<str>>(self, fields: &[S]) -> String {
        let special = |field: &str| {
            field.contains([self.char(), '"', '#']) || field.trim().len() != field.len()
        };
        let quoted: Vec<_> = fields
            .iter()
            .map(|field| field.as_ref())
            .map(|field| match special(field) {
                true => Cow::Owned(format!("\"{}\"", field.replace('"', "\"\""))),
                false => Cow::Borrowed(field),
            })
            .collect();
        quoted.join(&self.char().to_string())
    }
}

/// Brings a column name to its plain form: lower case, every run of other signs one underscore, so that
/// `Pressure (hPa)` and `pressure_hpa` are one name. The degree sign is dropped, `%` reads `pct`.
pub(crate) fn plain_name(name: &str) -> String {
    let mut plain = String::with_capacity(name.len());
    for character in name.trim().chars() {
        match character {
            '%' => plain.push_str(if plain.is_empty() || plain.ends_with('_') {
                "pct"
            } else {
                "_pct"
            }),
            '°' => {}
            _ if character.is_alphanumeric() => plain.extend(character.to_lowercase()),
            _ if plain.ends_with('_') || plain.is_empty() => {}
            _ => plain.push('_'),
        }
    }
    plain.truncate(plain.trim_end_matches('_').len());
    plain
}

#[cfg(test)]
mod tests {
    use super::*;

    const COMMA: Delimiter = Delimiter::COMMA;

    #[test]
    fn splits_plain_and_quoted_lines() {
        assert_eq!(COMMA.fields("a,,b"), ["a", "", "b"]);
        assert_eq!(COMMA.fields("\"a,\"\"b\"\"\",c"), ["a,\"b\"", "c"]);
        assert_eq!(COMMA.fields("\"a\rb\",c"), ["a\rb", "c"]);
        // Left open: spoils this line only.
        assert_eq!(COMMA.fields("\"a,b"), ["a,b"]);
        assert_eq!(Delimiter(b';').fields("1,5;2"), ["1,5", "2"]);
    }

    #[test]
    fn joins_what_it_splits() {
        for fields in [["a", "b,c"], ["say \"x\"", ""], [" padded", "#1"]] {
            assert_eq!(COMMA.fields(&COMMA.join(&fields)), fields);
        }
    }

    #[test]
    fn plain_names() {
        for (name, plain) in [
            ("pressure_hpa", "pressure_hpa"),
            ("Pressure (hPa)", "pressure_hpa"),
            (" Temperature [°C] ", "temperature_c"),
            ("RH (%)", "rh_pct"),
            ("rh%", "rh_pct"),
            ("", ""),
        ] {
            assert_eq!(plain_name(name), plain);
        }
    }
}
