//! Files damaged at random: whatever comes, the readers answer with soundings, notes or an error.
//!
//! A small fixed share always runs; `DEWBOUND_LONG=1` runs a hundred times as much. Real files are damaged in
//! `open_data.rs`.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod support;

use dewbound_formats::StationTable;
use support::{Random, STATIONS, damage, mutated, runs};

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
