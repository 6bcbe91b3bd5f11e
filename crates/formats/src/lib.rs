//! Readers: TEMP bulletins, station files, columns with units
