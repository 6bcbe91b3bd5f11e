//! Files damaged at random: whatever comes, the readers answer with soundings, notes or an error.
//!
//! A small fixed share always runs; `DEWBOUND_LONG=1` runs a hundred times as much.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_formats::{Loaded, ReadOptions, StationTable, read};
use std::path::Path;

/// A small generator of its own (xorshift64*, Vigna 2016), so that a seed means the same bytes for ever.
struct Random(u64);

impl Random {
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        self.0.wrapping_mul(0x2545_F491_4F6C_DD1D)
    }

    fn below(&mut self, limit: usize) -> usize {
        (self.next() >> 33) as usize % limit.max(1)
    }
}

const TABLE: &str = "\
# station: Upper Vale / 01234
# time: 2031-05-17T17:31:05Z
# position: 47.5, 8.25, 430
time_s,pressure_hpa,temperature_c,rh_pct,wind_dir_deg,wind_speed_kt,height_m,lat,lon
-5,965.0,27.4,50.1,200,10,430,47.5,8.25
0,965.0,27.4,50.1,200,10,430,47.5,8.25
90,900.0,21.3,66.3,210,20,1040,47.51,8.26
180,800.0,15.3,46.3,230,30,2040,47.53,8.30
270,700.0,5.3,36.3,250,40,3040,47.55,8.34
360,600.0,-5.3,26.3,260,50,4240,47.57,8.38
300,700.0,5.3,36.3,250,40,3040,47.55,8.34
";

const SEMICOLONS: &str = "\
pressure_pa;temperature_k;dewpoint_f;mixing_ratio_gkg;time_utc;height_agl_m
96500;300,5;61,0;11,9;2031-05-17T17:31:05Z;0
90000;294,5;NaN;-9999;17:32:05;610
";

const STATION_FILE: &str = "\
#ZZM00001234 2031 05 17 00 2303    4 ncdc-gts ncdc-gts  475000    82500
21     0  96500B  430B  274B  512   113   200    51 
10   100  92500   780B  240A-9999   100 -9999 -9999 
22  4512  20000 11900B -575B   50 -9999   230   350 
30   200  -9999   600 -9999 -9999 -9999   205    60 
";

const STATIONS: &str = "\
wmo,wigos,icao,name,lat,lon,elevation_m
01234,0-20000-0-01234,ZZUV,\"Upper Vale, hill\",47.5,8.25,430
";

/// Pieces that trouble parsers.
const PIECES: [&[u8]; 22] = [
    b",",
    b";",
    b"\t",
    b"\n",
    b"\r",
    b"\"",
    b"#",
    b"-",
    b"1e308",
    b"1e-320",
    b"NaN",
    b"inf",
    b"-9999",
    b"99999999999999999999",
    b"\xE4",
    b"\xC3\xA4",
    b"\xE2\x88\x92",
    b"\0",
    b":",
    b"=",
    b"/",
    b" ",
];

fn mutated(original: &[u8], random: &mut Random) -> Vec<u8> {
    let mut bytes = original.to_vec();
    for _ in 0..=random.below(6) {
        let at = random.below(bytes.len() + 1);
        match random.below(6) {
            0 => bytes.truncate(at),
            1 => {
                let piece = PIECES[random.below(PIECES.len())];
                bytes.splice(at..at, piece.iter().copied());
            }
            2 => {
                let to = (at + random.below(12)).min(bytes.len());
                bytes.drain(at..to);
            }
            3 => {
                let to = (at + random.below(200)).min(bytes.len());
                let again = bytes[at..to].to_vec();
                let there = random.below(bytes.len() + 1);
                bytes.splice(there..there, again);
            }
            _ => {
                if let Some(byte) = bytes.get_mut(at) {
                    *byte = match random.below(3) {
                        0 => b'0' + random.below(10) as u8,
                        1 => (random.next() >> 40) as u8,
                        _ => b"-.,;# /9\n"[random.below(9)],
                    };
                }
            }
        }
    }
    bytes
}

fn check(loaded: &Loaded) {
    assert!(!loaded.soundings.is_empty());
    for sounding in &loaded.soundings {
        assert!(!sounding.levels.is_empty());
        if let Some(place) = sounding.station.position {
            assert!(place.latitude.abs() <= 90.0 && place.longitude.abs() <= 180.0);
        }
        assert!(sounding.station.elevation.is_none_or(f64::is_finite));
        for level in &sounding.levels {
            let wind = level.wind;
            for value in [
                level.pressure,
                level.height,
                level.temperature,
                level.dewpoint,
                level.relative_humidity,
                level.elapsed,
                wind.map(|wind| wind.direction),
                wind.map(|wind| wind.speed),
            ] {
                assert!(value.is_none_or(f64::is_finite), "{level:?}");
            }
        }
    }
}

fn runs(share: usize) -> usize {
    match std::env::var("DEWBOUND_LONG") {
        Ok(long) if long == "1" => share * 100,
        _ => share,
    }
}

fn damage(original: &[u8], seed: u64, share: usize) -> usize {
    let (table, _) = StationTable::parse(STATIONS);
    let options = ReadOptions {
        stations: Some(&table),
        ..ReadOptions::default()
    };
    let mut random = Random(seed);
    let mut loaded = 0;
    for _ in 0..runs(share) {
        let bytes = mutated(original, &mut random);
        if let Ok(found) = read("20310517.csv", &bytes, &options) {
            check(&found);
            loaded += 1;
        }
    }
    loaded
}

#[test]
fn damaged_tables() {
    // Most damage is small: most files still load.
    assert!(damage(TABLE.as_bytes(), 1, 2000) > runs(1000));
    assert!(damage(SEMICOLONS.as_bytes(), 2, 2000) > runs(800));
}

#[test]
fn damaged_station_files() {
    assert!(damage(STATION_FILE.as_bytes(), 3, 2000) > runs(1000));
}

#[test]
fn damaged_containers() {
    use std::io::Write;
    let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::default());
    encoder.write_all(TABLE.as_bytes()).unwrap();
    damage(&encoder.finish().unwrap(), 4, 1000);
    let mut writer = zip::ZipWriter::new(std::io::Cursor::new(Vec::new()));
    for name in ["a.csv", "b.csv"] {
        let options = zip::write::SimpleFileOptions::default();
        writer.start_file(name, options).unwrap();
        writer.write_all(TABLE.as_bytes()).unwrap();
    }
    damage(&writer.finish().unwrap().into_inner(), 5, 1000);
}

#[test]
fn damaged_station_tables() {
    let mut random = Random(6);
    for _ in 0..runs(2000) {
        let bytes = mutated(STATIONS.as_bytes(), &mut random);
        let text = String::from_utf8_lossy(&bytes);
        let (table, _) = StationTable::parse(&text);
        for station in table.iter() {
            assert!(station.elevation.is_none_or(f64::is_finite));
            assert!(
                station
                    .position
                    .is_none_or(|place| place.latitude.abs() <= 90.0)
            );
        }
        // What was read is read again from what is written.
        let (again, _) = StationTable::parse(&table.to_csv());
        assert!(again.iter().eq(table.iter()), "{text}");
        // So it is after an addition, whatever else stands there.
        let added = dewbound_sounding::Station {
            wmo: Some("09876".into()),
            elevation: Some(7.0),
            ..dewbound_sounding::Station::default()
        };
        let table = table.with(added).unwrap();
        let (again, _) = StationTable::parse(&table.to_csv());
        assert_eq!(
            again.by_wmo("09876").and_then(|station| station.elevation),
            Some(7.0),
            "{text:?} became {:?}",
            table.to_csv()
        );
    }
}

/// Real files damaged in the same way, where they are at hand (see `open_data.rs` for what is said when not).
#[test]
fn damaged_real_files() {
    let Some(folder) = std::env::var_os("DEWBOUND_OPEN_DATA") else {
        return;
    };
    let folder = Path::new(&folder);
    for (name, seed) in [
        ("csv/GTS_BUFR_HANZHONG_201910251115_62_SONDE.csv", 7),
        ("igra/SWM00002527_observation_multi.txt", 8),
        ("igra/ASM00094703-data.txt.zip", 9),
    ] {
        let bytes = std::fs::read(folder.join(name)).unwrap();
        damage(&bytes, seed, 50);
    }
}
