//! Compressed files through the public door.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_formats::{ReadError, ReadOptions, read, read_path};
use std::io::{Cursor, Write};

const TABLE: &str = "# station: A\npressure_hpa,temperature_c\n1000,20\n";
const STATION_FILE: &str = "\
#ZZM00001234 2031 05 17 00 2303    1 ncdc-gts ncdc-gts  475000    82500
21     0  96500B  430B  274B  512   113   200    51 
";

fn gzip(bytes: &[u8]) -> Vec<u8> {
    let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::default());
    encoder.write_all(bytes).unwrap();
    encoder.finish().unwrap()
}

fn zip_of(members: &[(&str, &[u8])]) -> Vec<u8> {
    let mut writer = zip::ZipWriter::new(Cursor::new(Vec::new()));
    for (name, bytes) in members {
        let options = zip::write::SimpleFileOptions::default();
        writer.start_file(*name, options).unwrap();
        writer.write_all(bytes).unwrap();
    }
    writer.finish().unwrap().into_inner()
}

#[test]
fn the_same_soundings_come_out_of_every_wrapping() {
    let options = ReadOptions::default();
    let plain = read("f", STATION_FILE.as_bytes(), &options).unwrap();
    assert_eq!(plain.soundings.len(), 1);
    let gzipped = read("f", &gzip(STATION_FILE.as_bytes()), &options).unwrap();
    assert_eq!(gzipped, plain);
    let zipped = read(
        "f",
        &zip_of(&[("x.txt", STATION_FILE.as_bytes())]),
        &options,
    )
    .unwrap();
    assert_eq!(zipped, plain);
}

#[test]
fn members_are_told_apart_and_bad_ones_named() {
    let zipped = zip_of(&[
        ("a.csv", TABLE.as_bytes()),
        ("notes.bin", b"\0\0\0\0"),
        ("b.txt", STATION_FILE.as_bytes()),
        ("c.csv", b"pres,temp\n1,2\n"),
    ]);
    let loaded = read("all.zip", &zipped, &ReadOptions::default()).unwrap();
    let found: Vec<_> = loaded
        .soundings
        .iter()
        .map(|sounding| {
            let source = &sounding.source;
            (source.file.as_str(), source.index, source.format)
        })
        .collect();
    assert_eq!(found, [("all.zip", 0, "columns"), ("all.zip", 1, "IGRA")]);
    assert!(loaded.soundings[0].notes[0].what.contains("a.csv"));
    let notes: Vec<_> = loaded.notes.iter().map(|note| note.what.as_str()).collect();
    assert_eq!(notes.len(), 2, "{notes:?}");
    assert!(notes[0].contains("all.zip, notes.bin") && notes[1].contains("all.zip, c.csv"));
}

#[test]
fn a_zip_without_soundings_is_an_error() {
    let options = ReadOptions::default();
    let one = read("f", &zip_of(&[("a", b"\0\0\0")]), &options);
    assert!(matches!(one, Err(ReadError::LooksLike { .. })));
    let two = read("f", &zip_of(&[("a", b"\0\0\0"), ("b", b"")]), &options);
    assert!(matches!(two, Err(ReadError::NothingUsable { .. })));
    assert!(read("f", &zip_of(&[]), &options).is_err());
}

#[test]
fn a_file_cut_short_gives_what_is_there() {
    let many: String = (0..4000)
        .map(|i| {
            format!(
                "{},{}\n",
                1000.0 - f64::from(i) / 10.0,
                20.0 - f64::from(i * 7 % 500) / 10.0
            )
        })
        .collect();
    let packed = gzip(format!("pressure_hpa,temperature_c\n{many}").as_bytes());
    let loaded = read("f", &packed[..packed.len() / 2], &ReadOptions::default()).unwrap();
    assert!(loaded.soundings[0].levels.len() > 100);
    assert!(loaded.notes[0].what.contains("stopped early"));
}

#[test]
fn files_are_read_from_disk() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.csv.gz");
    std::fs::write(&path, gzip(TABLE.as_bytes())).unwrap();
    let loaded = read_path(&path, &ReadOptions::default()).unwrap();
    assert_eq!(loaded.soundings[0].source.file, path.display().to_string());
    assert_eq!(loaded.soundings[0].station.label(), "A");
}
