//! Why nothing could be read.

/// Why nothing could be read.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum ReadError {
    /// The file could not be opened or read.
    #[error("{file}: {source}")]
    Io {
        /// File name.
        file: String,
        /// What the system said.
        source: std::io::Error,
    },
    /// The file holds no bytes, or only blanks.
    #[error("{file}: the file is empty")]
    Empty {
        /// File name.
        file: String,
    },
    /// No reader recognises the content.
    #[error("{file}: not a sounding format Dewbound reads; {hint}")]
    Unrecognised {
        /// File name.
        file: String,
        /// What to do.
        hint: String,
    },
    /// The content is of a known kind that has no reader here.
    #[error("{file}: looks like {what}; {hint}")]
    LooksLike {
        /// File name.
        file: String,
        /// The kind, with its article.
        what: &'static str,
        /// What to do.
        hint: &'static str,
    },
    /// A table whose header doesn't name what is needed.
    #[error(
        "{file}, line {line}: {what}; names found: {}; names understood: {}",
        found.join(", "),
        understood.join(", ")
    )]
    UnknownHeader {
        /// File name.
        file: String,
        /// Line of the header, from 1.
        line: usize,
        /// What is wrong with it and what to do.
        what: String,
        /// Column names as they stand in the file.
        found: Vec<String>,
        /// Column names a header may use.
        understood: Vec<&'static str>,
    },
    /// Rows of numbers without a header.
    #[error(
        "{file}, line {line}: the table starts with numbers and has no header; put a line above it that names each \
         column with its unit, for example: {example}"
    )]
    NoHeader {
        /// File name.
        file: String,
        /// Line of the first row, from 1.
        line: usize,
        /// A header that would do.
        example: &'static str,
    },
    /// Unpacked, the file would be larger than is sensible.
    #[error(
        "{file}: unpacks to more than {} MiB and was not read; unpack it yourself and open the parts you need",
        limit / (1024 * 1024)
    )]
    TooLarge {
        /// File name.
        file: String,
        /// The limit, bytes.
        limit: u64,
    },
    /// A compressed file that cannot be opened.
    #[error("{file}: {what}")]
    Damaged {
        /// File name.
        file: String,
        /// What is wrong and what to do.
        what: String,
    },
    /// The format was recognised, but no sounding came out.
    #[error("{file}: {what}")]
    NothingUsable {
        /// File name.
        file: String,
        /// What was found instead.
        what: String,
    },
}
