//! Damage done at random, and what must hold of whatever is read afterwards.

use dewbound_formats::{Loaded, ReadOptions, StationTable, read};
use dewbound_sounding::Level;

/// A small generator of its own (xorshift64*, Vigna 2016), so that a seed means the same bytes for ever.
pub struct Random(pub u64);

impl Random {
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        self.0.wrapping_mul(0x2545_F491_4F6C_DD1D)
    }

    pub fn below(&mut self, limit: usize) -> usize {
        (self.next() >> 33) as usize % limit.max(1)
    }
}

pub const STATIONS: &str = "\
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

/// A few faults of any kind.
pub fn mutated(original: &[u8], random: &mut Random) -> Vec<u8> {
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

/// Panics on a sounding without levels, a number that is none, a place off the globe.
pub fn check(loaded: &Loaded) {
    assert!(!loaded.soundings.is_empty());
    for sounding in &loaded.soundings {
        assert!(!sounding.levels.is_empty());
        if let Some(place) = sounding.station.position {
            assert!(place.latitude.abs() <= 90.0 && place.longitude.abs() <= 180.0);
        }
        assert!(sounding.station.elevation.is_none_or(f64::is_finite));
        for level in &sounding.levels {
            check_finite(level);
        }
    }
}

/// Panics on a number that is none.
pub fn check_finite(level: &Level) {
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

/// The fixed share, or a hundred times as much.
pub fn runs(share: usize) -> usize {
    match std::env::var("DEWBOUND_LONG") {
        Ok(long) if long == "1" => share * 100,
        _ => share,
    }
}

/// Reads damaged copies of a file; how many of them loaded.
pub fn damage(original: &[u8], seed: u64, share: usize) -> usize {
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
