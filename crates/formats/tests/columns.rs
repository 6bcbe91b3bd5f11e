//! Whole tables through the public door, all invented.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use approx::assert_relative_eq;
use dewbound_formats::{Loaded, ReadError, ReadOptions, StationTable, read};
use dewbound_sounding::{HumidityReported, LevelKind, Place, Position, Sounding, Wind};

const NAME: &str = "vale.csv";

fn load(text: &str) -> Loaded {
    read(NAME, text.as_bytes(), &ReadOptions::default()).unwrap()
}

#[track_caller]
fn one(text: &str) -> Sounding {
    let mut loaded = load(text);
    assert_eq!(loaded.notes, []);
    assert_eq!(loaded.soundings.len(), 1);
    loaded.soundings.pop().unwrap()
}

fn whats(sounding: &Sounding) -> Vec<&str> {
    sounding
        .notes
        .iter()
        .map(|note| note.what.as_str())
        .collect()
}

#[test]
fn a_whole_table() {
    let sounding = one("\
# station: Upper Vale
# wmo: 01234
# time: 2031-05-17T17:31:05Z
# nominal: 2031-05-17T18:00Z
# position: 47.5, 8.25, 430
# demo: true
time_s,pressure_hpa,temperature_c,dewpoint_c,rh_pct,wind_dir_deg,wind_speed_kt,height_m
0,965.0,27.4,16.1,50.1,200,10,430
90,900.0,21.3,14.8,66.3,210,20,1040
");
    assert_eq!(sounding.notes, []);
    assert_eq!(
        sounding.station.canonical_id().as_deref(),
        Some("wmo:01234")
    );
    assert_eq!(sounding.times.launch, "2031-05-17T17:31:05Z".parse().ok());
    assert_eq!(sounding.times.nominal, "2031-05-17T18:00:00Z".parse().ok());
    assert!(sounding.demo);
    assert_eq!(
        sounding.humidity_reported,
        HumidityReported::RelativeHumidity
    );
    assert_eq!(
        (
            sounding.source.file.as_str(),
            sounding.source.index,
            sounding.source.format
        ),
        (NAME, 0, "columns")
    );
    assert_eq!(sounding.source.parts.len(), 1);
    let [ground, aloft] = sounding.levels[..] else {
        panic!("{:?}", sounding.levels);
    };
    assert_eq!(
        (ground.kind, aloft.kind),
        (LevelKind::Surface, LevelKind::Other)
    );
    assert_relative_eq!(ground.pressure.unwrap(), 96_500.0);
    assert_relative_eq!(ground.temperature.unwrap(), 300.55);
    // The dew point as written, not the one that follows from the humidity.
    assert_relative_eq!(ground.dewpoint.unwrap(), 289.25);
    assert_relative_eq!(ground.relative_humidity.unwrap(), 0.501);
    assert_eq!(ground.height, Some(430.0));
    let Wind { direction, speed } = ground.wind.unwrap();
    assert_relative_eq!(direction, 200.0);
    assert_relative_eq!(speed, 18_520.0 / 3600.0);
    assert_eq!((aloft.elapsed, aloft.line), (Some(90.0), Some(9)));
}

/// One profile, written in every way a table may be: all give the same levels.
#[test]
fn every_way_to_write_one_profile() {
    let plain = one(
        "pressure_hpa,temperature_c,dewpoint_c,height_m\n965,27.4,16.1,430\n900,21.3,14.8,1040\n",
    );
    for text in [
        "temperature_c\theight_m\tpressure_hpa\tdewpoint_c\n27.4\t430\t965\t16.1\n21.3\t1040\t900\t14.8\n",
        "pressure_hpa;temperature_c;dewpoint_c;height_m\r\n965;27,4;16,1;430\r\n900;21,3;14,8;1040\r\n",
        "\u{FEFF}Pressure [hPa],Temperature (°C),Dewpoint [°C],Height (m)\n965,27.4,16.1,430\n900,21.3,14.8,1040\n",
        "\"pressure_pa\",\"temperature_c\",\"dewpoint_c\",\"height_m\"\n\"96500\",\"27.4\",\"16.1\",\"430\"\n90000,21.3,14.8,1040\n",
        "pressure_hpa,temperature_c,dewpoint_c,height_m\r965,27.4,16.1,430\r900,21.3,14.8,1040\r",
        "# position: 47.5, 8.25, 430\npressure_hpa,temperature_c,dewpoint_c,height_agl_m\n965,27.4,16.1,0\n900,21.3,14.8,610\n",
        "# elevation_m: 430\n# heights: above ground\npressure_hpa,temperature_c,dewpoint_c,height_m\n965,27.4,16.1,0\n900,21.3,14.8,610\n",
        "# pressure_hpa,temperature_c,dewpoint_c,height_m\n965,27.4,16.1,430\n900,21.3,14.8,1040\n",
    ] {
        let other = one(text);
        assert_eq!(other.notes, [], "{text}");
        for (a, b) in plain.levels.iter().zip(&other.levels) {
            let (mut a, b) = (*a, *b);
            a.line = b.line;
            assert_eq!(a, b, "{text}");
        }
        assert_eq!(other.levels.len(), 2);
    }
    // Fahrenheit and kelvins, to rounding.
    let other = one("pressure_hpa,temperature_f,dewpoint_k\n965,81.32,289.25\n900,70.34,287.95\n");
    for (a, b) in plain.levels.iter().zip(&other.levels) {
        assert_relative_eq!(
            a.temperature.unwrap(),
            b.temperature.unwrap(),
            epsilon = 1e-9
        );
        assert_relative_eq!(a.dewpoint.unwrap(), b.dewpoint.unwrap(), epsilon = 1e-9);
    }
}

#[test]
fn line_ends_don_t_change_the_digest_but_values_do() {
    let text = "# station: A\npressure_hpa,temperature_c\n965,27.4\n";
    let digest = |text: &str| one(text).source.parts;
    assert_eq!(digest(text), digest(&text.replace('\n', "\r\n")));
    assert_ne!(digest(text), digest(&text.replace("27.4", "27.5")));
}

/// Dew points from humidity: Bolton (1980) eq. 10 worked by hand. 20 degC, 50 %: e = 0.5 * 6.112 exp(17.67 * 20 / 263.5)
/// = 11.686 hPa; ln(e / 6.112) = 0.64816; Td = 243.5 * 0.64816 / (17.67 - 0.64816) = 9.272 degC. 8 g/kg at 1000 hPa:
/// e = 1000 * 0.008 / (0.62197 + 0.008) = 12.699 hPa; ln = 0.73126; Td = 10.512 degC.
#[test]
fn dew_points_from_humidity() {
    let sounding =
        one("pressure_hpa,temperature_c,rh_pct\n1000,20,50\n990,,50\n980,20,0\n970,20,-3\n");
    let dewpoint = |index: usize| sounding.levels[index].dewpoint;
    assert_relative_eq!(dewpoint(0).unwrap(), 273.15 + 9.272, epsilon = 2e-3);
    assert_eq!((dewpoint(1), dewpoint(2), dewpoint(3)), (None, None, None));
    assert_eq!(sounding.levels[2].relative_humidity, Some(0.0));
    assert_eq!(
        whats(&sounding),
        [
            "relative humidity 0 %: no dew point follows from it",
            "relative humidity -3.0 % is impossible and was set aside"
        ]
    );
    let sounding = one("pressure_hpa,temperature_c,mixing_ratio_gkg\n1000,20,8\n");
    assert_eq!(sounding.humidity_reported, HumidityReported::MixingRatio);
    assert_relative_eq!(
        sounding.levels[0].dewpoint.unwrap(),
        273.15 + 10.512,
        epsilon = 5e-3
    );
    let sounding = one("pressure_hpa,temperature_c,dewpoint_c,rh_pct\n1000,20,,50\n");
    assert!(
        sounding.levels[0].dewpoint.is_some(),
        "a gap in one is filled from the other"
    );
}

#[test]
fn one_bad_row_costs_only_itself() {
    let sounding = one("\
pressure_hpa,temperature_c,wind_dir_deg,wind_speed_ms,flag
1000,20,100,5,a
990,2o,100,5,a
980,18,400,5,a
970,\"17,100,5,a
960,16,100,5,a,9,9
950,15
940,14,,0,a
");
    let lines: Vec<_> = sounding
        .levels
        .iter()
        .filter_map(|level| level.line)
        .collect();
    assert_eq!(lines, [2, 3, 4, 5, 7, 8]);
    assert_eq!(sounding.levels[1].temperature, None);
    assert_eq!(sounding.levels[2].wind, None);
    assert_eq!(sounding.levels[3].temperature, None);
    assert_eq!(
        sounding.levels[5].wind,
        Some(Wind {
            direction: 0.0,
            speed: 0.0
        })
    );
    let places: Vec<_> = sounding.notes.iter().map(|note| note.place).collect();
    assert_eq!(
        places,
        [1, 3, 4, 5, 6].map(Place::Line),
        "{:#?}",
        sounding.notes
    );
}

#[test]
fn a_wrong_unit_is_told_and_not_used() {
    let sounding = one("pressure_hpa,temperature_c\n1000,293\n900,286\n800,280\n");
    assert!(
        sounding
            .levels
            .iter()
            .all(|level| level.temperature.is_none())
    );
    assert!(whats(&sounding)[0].contains("temperature_k"));
}

#[test]
fn several_tables_in_a_file() {
    let loaded = load(
        "\
# station: A
pressure_hpa,temperature_c
1000,20
# end of the first
# station: B
temperature_c,pressure_hpa
19,990
18,980
",
    );
    let found: Vec<_> = loaded
        .soundings
        .iter()
        .map(|sounding| {
            let source = &sounding.source;
            (
                sounding.station.label(),
                source.index,
                sounding.levels.len(),
            )
        })
        .collect();
    assert_eq!(found, [("A", 0, 1), ("B", 1, 2)]);
    assert_ne!(
        loaded.soundings[0].source.parts,
        loaded.soundings[1].source.parts
    );
}

#[test]
fn elevation_comes_from_the_ground_row_but_not_under_a_dropsonde() {
    let rows = "pressure_hpa,temperature_c,height_m\n1000,20,52\n990,19,137\n";
    assert_eq!(one(rows).station.elevation, Some(52.0));
    assert!(!one(rows).released_aloft);
    let dropped = one(&format!("# site: dropsonde over the sea\n{rows}"));
    assert_eq!(dropped.station.elevation, None);
    assert!(dropped.released_aloft);
    assert_eq!(dropped.levels[0].height, Some(52.0));
    let doubted = one(&format!("# elevation_m: 600\n{rows}"));
    assert_eq!(doubted.station.elevation, Some(600.0));
    assert!(whats(&doubted)[0].contains("600 m"));
}

#[test]
fn heights_above_ground_wait_for_the_station_table() {
    let text =
        "# station: Upper Vale\npressure_hpa,temperature_c,height_agl_m\n965,27,0\n900,21,610\n";
    let alone = one(text);
    assert_eq!(alone.levels[1].height, None);
    assert!(whats(&alone)[0].contains("above ground"));
    let (table, notes) =
        StationTable::parse("name,lat,lon,elevation_m\nUpper Vale,47.5,8.25,430\n");
    assert_eq!(notes, []);
    let options = ReadOptions {
        stations: Some(&table),
        ..ReadOptions::default()
    };
    let known = read(NAME, text.as_bytes(), &options)
        .unwrap()
        .soundings
        .pop()
        .unwrap();
    assert_eq!(known.levels[1].height, Some(1040.0));
    assert_eq!(
        known.station.position,
        Some(Position {
            latitude: 47.5,
            longitude: 8.25
        })
    );
    assert_eq!(known.notes, []);
}

#[test]
fn the_sondes_own_position_outweighs_a_far_one() {
    let rows = "pressure_hpa,temperature_c,lat,lon\n1000,20,,\n990,19,0,0\n985,19,7.1,60.25\n980,18,7.11,60.26\n";
    let near = one(&format!("# position: 7.105, 60.252, 16\n{rows}"));
    assert_eq!(near.station.position.unwrap().longitude, 60.252);
    assert_eq!(near.notes, []);
    let far = one(&format!("# position: 7.105, 68.9, 16\n{rows}"));
    assert_eq!(far.station.position.unwrap().longitude, 60.25);
    assert_eq!(far.notes.len(), 1);
    let none = one(rows);
    assert_eq!(none.station.position.unwrap().longitude, 60.25);
    assert_eq!(none.notes.len(), 1);
}

#[test]
fn station_table_and_file_that_disagree_are_told_apart() {
    let (table, _) = StationTable::parse("wmo,lat,lon,elevation_m\n01234,47.5,8.25,430\n");
    let options = ReadOptions {
        stations: Some(&table),
        ..ReadOptions::default()
    };
    let text = "# wmo: 01234\n# position: 47.5, 12.25, 430\npressure_hpa,temperature_c\n965,27\n";
    let sounding = &read(NAME, text.as_bytes(), &options).unwrap().soundings[0];
    assert_eq!(sounding.station.position.unwrap().longitude, 12.25);
    assert_eq!(sounding.notes.len(), 1);
}

#[track_caller]
fn error(text: &str) -> String {
    read(NAME, text.as_bytes(), &ReadOptions::default())
        .unwrap_err()
        .to_string()
}

#[test]
fn errors_say_what_and_what_to_do() {
    let text = error("pres,temp,td\n1000,20,15\n");
    for part in [
        NAME,
        "line 1",
        "names found: pres, temp, td",
        "pressure_hpa or pressure_pa",
        "temperature_f",
        "names understood: pressure_hpa, pressure_pa, temperature_c",
    ] {
        assert!(text.contains(part), "{part} in {text}");
    }
    let text = error("temperature_c,rh_pct\n20,50\n");
    assert!(text.contains("no column of pressure"), "{text}");
    let text = error("# station: A\n1000,20,15\n990,19,14\n");
    assert!(
        text.contains("line 2") && text.contains("no header"),
        "{text}"
    );
    let text = error("wmo,name,lat,lon\n01234,A,47,8\n");
    assert!(text.contains("table of stations"), "{text}");
    let text = error("pressure_hpa,temperature_c\n");
    assert!(text.contains("no row under this header"), "{text}");
    assert!(error("").contains("empty"));
    assert!(error(" \r\n\n").contains("empty"));
    assert!(error("BUFR\0\0\x01\x04").contains("BUFR"));
    let not_a_number_in_it = error("pressure_hpa,temperature_c\nx,y\nz,w\n");
    assert!(
        not_a_number_in_it.contains("not a number"),
        "{not_a_number_in_it}"
    );
}

#[test]
fn a_missing_file_is_named() {
    let error = dewbound_formats::read_path("no/such/file.csv".as_ref(), &ReadOptions::default());
    assert!(matches!(error, Err(ReadError::Io { .. })));
    assert!(
        error
            .unwrap_err()
            .to_string()
            .starts_with("no/such/file.csv: ")
    );
}
