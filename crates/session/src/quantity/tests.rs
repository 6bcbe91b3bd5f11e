use super::*;
use crate::demo;
use crate::office::Office;
use crate::sounding::{Further, Numbers, OtherAscents, Profile};
use crate::thermo::{
    Air, Ascent, BuoyantLayer, Composite, Composites, Convective, Downdraft, HumidityKnown,
    InflowLayer, LayerNumbers, Lcl, LevelAt, ParcelNumbers, Pressure, StormMotion, Temperature,
    Term, Vector, WindLevel, WindNumbers, WindProfile,
};
use crate::{Analysed, Document, Results, report};
use serde_json::{Value as Json, json};
use std::collections::BTreeSet;
use std::sync::Arc;

#[test]
fn names_are_unique_and_every_text_is_there() {
    let mut names = BTreeSet::new();
    for quantity in all() {
        assert!(names.insert(quantity.key), "{} twice", quantity.key);
        assert!(names.insert(quantity.label), "{} twice", quantity.label);
        for text in [
            quantity.key,
            quantity.label,
            quantity.definition,
            quantity.method,
            quantity.source,
            quantity.inputs,
            quantity.absent,
        ] {
            assert!(!text.trim().is_empty(), "{}", quantity.key);
            assert_eq!(text.trim(), text, "{}", quantity.key);
        }
        assert!(quantity.definition.ends_with('.'), "{}", quantity.key);
        // Said after "absent when", or after "none:".
        let first = quantity.absent.chars().next();
        assert!(first.is_some_and(char::is_lowercase), "{}", quantity.key);
        assert!(!quantity.absent.ends_with('.'), "{}", quantity.key);
    }
    for name in AT_A_GLANCE {
        assert!(names.contains(name), "{name}");
    }
}

#[test]
fn keys_carry_their_unit() {
    for quantity in all() {
        let key = quantity.key;
        assert!(key.ends_with(quantity.unit.suffix()), "{key}");
        // The longest unit it could be read as is its own: "…_ms2" is no speed.
        let read = Unit::ALL
            .into_iter()
            .filter(|unit| key.ends_with(unit.suffix()))
            .max_by_key(|unit| unit.suffix().len());
        assert_eq!(read, Some(quantity.unit), "{key}");
        let plain = |c: char| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '_';
        assert!(key.chars().all(plain), "{key}");
    }
}

#[test]
fn each_stands_in_its_group_parcels_first() {
    for group in Group::ALL {
        let quantities = group.quantities();
        assert!(!quantities.is_empty());
        assert!(quantities.iter().all(|quantity| quantity.group == group));
        let of_profile = |quantity: &Quantity| !quantity.is_per_parcel();
        assert!(quantities.is_sorted_by_key(of_profile), "{group:?}");
    }
}

#[test]
fn the_page_is_what_the_declarations_say() {
    assert_eq!(
        include_str!("../../numbers.md"),
        markdown(),
        "write it anew: cargo run -p dewbound-cli -- explain --markdown > crates/session/numbers.md"
    );
}

fn pa(hpa: f64) -> Pressure {
    Pressure::from_hpa(hpa)
}

fn level(hpa: f64, height: f64) -> LevelAt {
    LevelAt {
        pressure: pa(hpa),
        height,
    }
}

fn wind(direction: f64, speed: f64) -> Vector {
    Vector::from_wind(direction, speed)
}

fn ascent(first: f64) -> Ascent {
    Ascent {
        start: Air {
            pressure: pa(first + 1.0),
            temperature: Temperature::from_c(first + 2.0),
            dewpoint: Temperature::from_c(first + 3.0),
        },
        lcl: Lcl {
            pressure: pa(first + 4.0),
            temperature: Temperature::from_c(first + 5.0),
        },
        theta_e: Temperature::from_k(first + 6.0),
        cape: first + 7.0,
        cin: Some(first + 8.0),
        lfc: Some(pa(first + 9.0)),
        el: Some(pa(first + 10.0)),
        at_least: false,
        buoyant: vec![BuoyantLayer {
            bottom: pa(0.0),
            top: pa(0.0),
            area: 0.0,
        }],
    }
}

/// What the keys of [`ascent`] and [`of_parcel`] must say.
fn parcel_expected(first: f64) -> Json {
    json!({
        "start_hpa": first + 1.0, "start_c": first + 2.0, "start_dewpoint_c": first + 3.0,
        "lcl_hpa": first + 4.0, "lcl_c": first + 5.0, "theta_e_k": first + 6.0, "cape_jkg": first + 7.0,
        "cin_jkg": first + 8.0, "lfc_hpa": first + 9.0, "el_hpa": first + 10.0,
        "cape_at_least": false, "buoyant_layers": 1.0,
        "lcl_m": first + 21.0, "lfc_m": first + 22.0, "el_m": first + 23.0,
        "cape_below_3km_jkg": first + 24.0, "cape_in_growth_zone_jkg": first + 25.0,
        "normalised_cape_ms2": first + 26.0, "lifted_index_k": first + 27.0,
        "convective_level_hpa": first + 28.0, "convective_level_m": first + 29.0,
        "convective_temperature_c": first + 30.0,
        "cape_humidity_held_jkg": first + 40.0,
        "cape_direct_jkg": first + 41.0, "cape_reversible_jkg": first + 42.0,
        "cape_without_virtual_jkg": first + 43.0, "cape_direct_with_ice_jkg": first + 44.0,
        "cape_reversible_with_ice_jkg": first + 45.0,
    })
}

fn of_parcel(first: f64) -> ParcelNumbers {
    ParcelNumbers {
        lcl_height: Some(first + 21.0),
        lfc_height: Some(first + 22.0),
        el_height: Some(first + 23.0),
        cape_below_3km: Some(first + 24.0),
        cape_in_growth_zone: Some(first + 25.0),
        normalised_cape: Some(first + 26.0),
        lifted_index: Some(first + 27.0),
        convective: Some(Convective {
            level: level(first + 28.0, first + 29.0),
            temperature: Temperature::from_c(first + 30.0),
        }),
    }
}

fn composite(value: f64) -> Option<Composite> {
    Some(Composite {
        value,
        terms: vec![Term {
            name: "term",
            input: 2.0,
            unit: "J/kg",
            factor: value,
        }],
    })
}

fn composite_expected(value: f64) -> Json {
    let term = json!({ "name": "term", "input": 2.0, "unit": "J/kg", "factor": value });
    json!({ "value": value, "terms": [term] })
}

/// Every field of every struct of numbers set to a value of its own. But for [`Further`], no field is left to a
/// default: a new one breaks this.
#[test]
fn every_field_is_read_by_its_declaration_and_no_other() {
    let firsts = [100.0, 200.0, 300.0];
    let numbers = Numbers {
        surface: Some(ascent(firsts[0])),
        mixed: Some(ascent(firsts[1])),
        most_unstable: Some(ascent(firsts[2])),
        // The start of the most unstable parcel tells it.
        most_unstable_row: Some(3),
        most_unstable_is_surface: true,
        humidity: Some(HumidityKnown {
            interpolated: 401,
            dry: 402,
            dry_above: Some(pa(403.0)),
            above_saturation: 404,
        }),
        cape_humidity_held: Some(firsts.map(|first| Some(first + 40.0))),
        starts_at: Some(pa(405.0)),
        // A reason, not a number.
        problem: None,
    };
    let layers = LayerNumbers {
        inflow: Some(InflowLayer {
            bottom: level(501.0, 502.0),
            top: level(503.0, 504.0),
        }),
        downdraft: Some(Downdraft {
            cape: 505.0,
            warmer: 523.0,
            theta_e: Temperature::from_k(524.0),
            origin: pa(506.0),
            wet_bulb: Temperature::from_c(507.0),
        }),
        precipitable_water: Some(508.0),
        freezing_level: Some(level(509.0, 510.0)),
        wet_bulb_zero: Some(level(511.0, 512.0)),
        lapse_rate_to_3km: Some(0.513),
        lapse_rate_3_to_6km: Some(0.514),
        lapse_rate_850_to_500hpa: Some(0.515),
        lapse_rate_700_to_500hpa: Some(0.516),
        humidity_lowest_100hpa: Some(0.517),
        humidity_700_to_500hpa: Some(0.518),
        mixed_layer_by_parcel: Some(level(519.0, 520.0)),
        mixed_layer_by_richardson: Some(level(521.0, 522.0)),
    };
    let motion = |first: f64| {
        Some(StormMotion {
            right: wind(first, 1.0),
            left: wind(first + 1.0, 1.0),
            mean: wind(first + 2.0, 1.0),
        })
    };
    let winds = WindNumbers {
        mean_0_to_6km: Some(wind(1.0, 1.0)),
        mean_0_to_6km_by_pressure: Some(wind(2.0, 1.0)),
        difference_0_to_1km: Some(wind(3.0, 1.0)),
        difference_0_to_3km: Some(wind(4.0, 1.0)),
        difference_0_to_6km: Some(wind(5.0, 1.0)),
        difference_effective: Some(wind(6.0, 1.0)),
        motion: motion(10.0),
        motion_effective: motion(20.0),
        motion_used: Some(wind(30.0, 1.0)),
        helicity_0_to_1km: Some(601.0),
        helicity_0_to_3km: Some(602.0),
        helicity_effective: Some(603.0),
        critical_angle: Some(60.4),
    };
    let top = [10.0, 605.0].map(|height| WindLevel {
        height,
        pressure: None,
        wind: wind(0.0, 1.0),
    });
    // Its other field is private: what the winds are made of.
    let mut further = Further::default();
    further.parcels = firsts.map(|first| Some(of_parcel(first)));
    further.layers = layers;
    further.wind_profile = WindProfile::new(top).map(Arc::new);
    further.winds = winds;
    further.composites = Composites {
        supercell: composite(701.0),
        significant_tornado_fixed: composite(702.0),
        significant_tornado_effective: composite(703.0),
    };
    let other = OtherAscents {
        direct: firsts.map(|first| Some(first + 41.0)),
        reversible: firsts.map(|first| Some(first + 42.0)),
        without_virtual: firsts.map(|first| Some(first + 43.0)),
        direct_with_ice: firsts.map(|first| Some(first + 44.0)),
        reversible_with_ice: firsts.map(|first| Some(first + 45.0)),
    };
    let from = |degrees: f64| json!({ "from_deg": degrees, "speed_ms": 1.0 });
    let mut profile = json!({
        "lowest_usable_hpa": 405.0, "most_unstable_is_surface": true,
        "levels_interpolated": 401.0, "levels_counted_dry": 402.0, "humidity_ends_hpa": 403.0,
        "levels_counted_saturated": 404.0,
        "inflow_bottom_hpa": 501.0, "inflow_bottom_m": 502.0, "inflow_top_hpa": 503.0, "inflow_top_m": 504.0,
        "downdraft_cape_jkg": 505.0, "downdraft_origin_hpa": 506.0, "downdraft_wet_bulb_c": 507.0,
        "downdraft_warmer_jkg": 523.0, "downdraft_theta_e_k": 524.0,
        "precipitable_water_mm": 508.0,
        "freezing_level_hpa": 509.0, "freezing_level_m": 510.0,
        "wet_bulb_zero_hpa": 511.0, "wet_bulb_zero_m": 512.0,
        "lapse_rate_0_to_3km_kkm": 513.0, "lapse_rate_3_to_6km_kkm": 514.0,
        "lapse_rate_850_to_500hpa_kkm": 515.0, "lapse_rate_700_to_500hpa_kkm": 516.0,
        "humidity_lowest_100hpa_pct": 51.7, "humidity_700_to_500hpa_pct": 51.8,
        "mixed_layer_by_parcel_hpa": 519.0, "mixed_layer_by_parcel_m": 520.0,
        "mixed_layer_by_richardson_hpa": 521.0, "mixed_layer_by_richardson_m": 522.0,
    });
    let wind = json!({
        "mean_0_to_6km_ms": from(1.0), "mean_0_to_6km_by_pressure_ms": from(2.0),
        "difference_0_to_1km_ms": from(3.0), "difference_0_to_3km_ms": from(4.0),
        "difference_0_to_6km_ms": from(5.0), "difference_effective_ms": from(6.0),
        "motion_right_ms": from(10.0), "motion_left_ms": from(11.0), "motion_mean_ms": from(12.0),
        "motion_effective_right_ms": from(20.0), "motion_effective_left_ms": from(21.0),
        "motion_effective_mean_ms": from(22.0), "motion_used_ms": from(30.0),
        "helicity_0_to_1km_m2s2": 601.0, "helicity_0_to_3km_m2s2": 602.0, "helicity_effective_m2s2": 603.0,
        "critical_angle_deg": 60.4, "wind_top_m": 605.0,
        "supercell_composite": composite_expected(701.0),
        "significant_tornado_fixed": composite_expected(702.0),
        "significant_tornado_effective": composite_expected(703.0),
    });
    if let (Json::Object(profile), Json::Object(wind)) = (&mut profile, wind) {
        profile.extend(wind);
    }
    let readings = Readings {
        numbers: &numbers,
        further: &further,
        other: Some(&other),
    };
    for (parcel, first) in Parcel::ALL.into_iter().zip(firsts) {
        check(&readings, parcel, true, &parcel_expected(first));
    }
    check(&readings, Parcel::Surface, false, &profile);
}

/// The numbers of a parcel (or of the profile) are those expected, and no others.
fn check(readings: &Readings, parcel: Parcel, per_parcel: bool, expected: &Json) {
    let expected = expected.as_object().unwrap();
    let mut seen = 0;
    for quantity in all().filter(|quantity| quantity.is_per_parcel() == per_parcel) {
        let value = quantity.value(readings, parcel);
        let value = value.map_or(Json::Null, |value| quantity.json(&value));
        assert_eq!(
            expected.get(quantity.key),
            Some(&value),
            "{} of {parcel:?}",
            quantity.key
        );
        seen += 1;
    }
    assert_eq!(seen, expected.len());
}

/// Every demonstration sounding with its results.
fn demos() -> Vec<(Analysed, Results)> {
    let office = Office::default();
    let read = demo::FILES.iter().flat_map(|file| {
        crate::read_bytes(file.name, file.bytes, None, &office, Some(demo::AS_OF))
            .unwrap()
            .soundings
    });
    read.map(|sounding| {
        let analysed = Analysed::of(sounding, &office.thresholds);
        let results = Results::of(&analysed, &Document::default());
        (analysed, results)
    })
    .collect()
}

#[test]
fn values_of_the_demonstration_soundings_are_finite_or_explained() {
    let mut seen = 0;
    for (analysed, results) in demos() {
        let other = OtherAscents::of(&results.working.profile, &results.numbers);
        let readings = results.readings(Some(&other));
        for quantity in all() {
            for parcel in Parcel::ALL {
                // Past the filter, so that a value that is no number is found here.
                let value = match quantity.of {
                    Of::Parcel(of) => of(&readings, parcel),
                    Of::Profile(of) => of(&readings),
                };
                match value {
                    Some(value) => {
                        assert!(value.is_finite(), "{} {value:?}", quantity.key);
                        let text = quantity.text(&value, Unit::of_reports());
                        assert!(text.chars().any(char::is_alphanumeric), "{text}");
                    }
                    None => assert!(!quantity.why_absent(&readings, parcel).is_empty()),
                }
                seen += 1;
            }
        }
        let text = report::table_with_all(&analysed, &results, &other);
        for quantity in all() {
            assert!(
                text.contains(quantity.label),
                "{} of {}",
                quantity.key,
                analysed.sounding.station.label()
            );
        }
    }
    assert!(seen > 1000);
}

#[test]
fn the_object_comes_back_from_json_as_it_was() {
    for (analysed, results) in demos() {
        let other = OtherAscents::of(&results.working.profile, &results.numbers);
        let line = report::json_line_with_all(&analysed, &results, &other).unwrap();
        let object: Json = serde_json::from_str(&line).unwrap();
        assert_eq!(
            serde_json::from_str::<Json>(&object.to_string()).unwrap(),
            object
        );
        let numbers = &object["numbers"];
        let readings = results.readings(Some(&other));
        for (name, parcel, per_parcel) in [
            ("surface", Parcel::Surface, true),
            ("mixed", Parcel::Mixed, true),
            ("most_unstable", Parcel::MostUnstable, true),
            ("profile", Parcel::Surface, false),
        ] {
            check(&readings, parcel, per_parcel, &numbers[name]);
        }
        // The same number has the same value in both places of the object.
        for name in ["surface", "mixed", "most_unstable"] {
            let parcel = &object["parcels"][name];
            for key in [
                "cape_jkg",
                "cin_jkg",
                "lcl_hpa",
                "lfc_hpa",
                "el_hpa",
                "theta_e_k",
                "lcl_c",
            ] {
                assert_eq!(parcel[key], numbers[name][key], "{name}: {key}");
            }
        }
        // Without it the object is that of schema 1.
        let plain: Json =
            serde_json::from_str(&report::json_line(&analysed, &results).unwrap()).unwrap();
        let mut without = object.clone();
        without.as_object_mut().unwrap().remove("numbers");
        assert_eq!(plain, without);
    }
}

#[test]
fn absence_is_explained_by_what_this_profile_lacks() {
    let (analysed, _) = demos().into_iter().next().unwrap();
    let empty = Profile {
        dewpoint: vec![None; analysed.profile.len()],
        ..(*analysed.profile).clone()
    };
    let numbers = Numbers::of(&empty);
    let further = Further::default();
    let readings = Readings {
        numbers: &numbers,
        further: &further,
        other: None,
    };
    let why = |name: &str| {
        find(name)
            .unwrap()
            .why_absent(&readings, Parcel::MostUnstable)
    };
    assert!(
        why("cape_jkg").starts_with("no parcel: "),
        "{}",
        why("cape_jkg")
    );
    assert!(why("freezing_level_m").starts_with("no parcel: "));
    assert_eq!(
        why("helicity_0_to_1km_m2s2"),
        "fewer than two winds of known height"
    );
    // With a parcel that nowhere floats, and with one that floats to the top.
    let mut numbers = Numbers {
        problem: None,
        surface: Some(Ascent {
            el: None,
            buoyant: Vec::new(),
            ..ascent(0.0)
        }),
        ..numbers
    };
    let why = |numbers: &Numbers| {
        let readings = Readings {
            numbers,
            further: &further,
            other: None,
        };
        find("el_hpa")
            .unwrap()
            .why_absent(&readings, Parcel::Surface)
    };
    assert!(why(&numbers).starts_with("no free convection"));
    numbers.surface = Some(Ascent {
        el: None,
        ..ascent(0.0)
    });
    assert!(why(&numbers).contains("where the profile ends"));
}

/// Two winds, at these heights, with everything else absent but what `change` puts there.
fn why_of_winds(heights: [f64; 2], name: &str, change: impl FnOnce(&mut Further)) -> String {
    let numbers = Numbers {
        problem: None,
        ..Numbers::of(&Profile::default())
    };
    let mut further = Further::default();
    let levels = heights.map(|height| WindLevel {
        height,
        pressure: None,
        wind: wind(200.0, 10.0),
    });
    further.wind_profile = WindProfile::new(levels).map(Arc::new);
    change(&mut further);
    let readings = Readings {
        numbers: &numbers,
        further: &further,
        other: None,
    };
    find(name).unwrap().why_absent(&readings, Parcel::Surface)
}

#[test]
fn absent_wind_numbers_tell_where_the_wind_ends() {
    let check = |heights: [f64; 2], name: &str, expected: &str| {
        assert_eq!(why_of_winds(heights, name, |_| ()), expected, "{name}");
    };
    check(
        [0.0, 4210.0],
        "difference_0_to_6km_ms",
        "the wind ends at 4.2 km",
    );
    // Rounded to tenths of a kilometre it would be as high as is needed.
    check([0.0, 5980.0], "mean_0_to_6km_ms", "the wind ends at 5980 m");
    check(
        [450.0, 9000.0],
        "difference_0_to_1km_ms",
        "the lowest wind is at 450 m",
    );
    check(
        [1500.0, 9000.0],
        "motion_right_ms",
        "the lowest wind is at 1.5 km",
    );
    let unchanged = "no shear from 0–500 m to 5.5–6 km";
    check([0.0, 9000.0], "motion_left_ms", unchanged);
    let none = "no storm motion: the wind ends at 4.2 km";
    for name in [
        "motion_used_ms",
        "helicity_0_to_1km_m2s2",
        "critical_angle_deg",
    ] {
        check([0.0, 4210.0], name, none);
    }
    // With a motion of one's own only the height counts.
    let own = |further: &mut Further| further.winds.motion_used = Some(wind(240.0, 10.0));
    assert_eq!(
        why_of_winds([0.0, 2500.0], "helicity_0_to_3km_m2s2", own),
        "the wind ends at 2.5 km"
    );
}

#[test]
fn absent_numbers_of_the_storms_layer_tell_what_it_lacks() {
    let inflow = InflowLayer {
        bottom: level(950.0, 100.0),
        top: level(800.0, 1900.0),
    };
    let with_el = |el_height: Option<f64>| {
        move |further: &mut Further| {
            further.layers.inflow = Some(inflow);
            further.winds.motion_used = Some(wind(240.0, 10.0));
            further.parcels = [
                None,
                None,
                Some(ParcelNumbers {
                    el_height,
                    ..of_parcel(0.0)
                }),
            ];
        }
    };
    for name in ["difference_effective_ms", "motion_effective_right_ms"] {
        let why = why_of_winds([0.0, 9000.0], name, |_| ());
        assert!(why.starts_with("no effective inflow layer"), "{why}");
        assert_eq!(
            why_of_winds([0.0, 9000.0], name, with_el(None)),
            "the most unstable parcel has no known EL"
        );
    }
    // Half of the way from 100 m to 10.1 km is 5.1 km.
    assert_eq!(
        why_of_winds(
            [0.0, 5000.0],
            "difference_effective_ms",
            with_el(Some(10_100.0))
        ),
        "the wind ends at 5.0 km"
    );
    assert_eq!(
        why_of_winds(
            [0.0, 1800.0],
            "helicity_effective_m2s2",
            with_el(Some(10_100.0))
        ),
        "the wind ends at 1.8 km"
    );
}
