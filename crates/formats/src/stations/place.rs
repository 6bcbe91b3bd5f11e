//! Numbers of stations and places on the globe.

use dewbound_sounding::Position;

/// A WMO number in five digits: zeros in front, lost in a spreadsheet, are put back.
pub(crate) fn wmo_number(text: &str) -> Option<String> {
    let text = text.trim();
    let digits = (1..=5).contains(&text.len()) && text.bytes().all(|byte| byte.is_ascii_digit());
    let zero = text.bytes().all(|byte| byte == b'0');
    (digits && !zero).then(|| format!("{text:0>5}"))
}

/// A position, longitude brought to -180..=180; `None` off the globe.
pub(crate) fn position(latitude: f64, longitude: f64) -> Option<Position> {
    let longitude = if longitude > 180.0 && longitude <= 360.0 {
        longitude - 360.0
    } else {
        longitude
    };
    let on_globe = (-90.0..=90.0).contains(&latitude) && (-180.0..=180.0).contains(&longitude);
    on_globe.then_some(Position {
        latitude,
        longitude,
    })
}

/// Great-circle distance (haversine formula on a sphere of 6371 km).
pub(crate) fn distance_km(a: Position, b: Position) -> f64 {
    let half = |from: f64, to: f64| ((to - from).to_radians() / 2.0).sin().powi(2);
    let along = half(a.latitude, b.latitude);
    let across = half(a.longitude, b.longitude)
        * a.latitude.to_radians().cos()
        * b.latitude.to_radians().cos();
    2.0 * 6371.0 * (along + across).clamp(0.0, 1.0).sqrt().asin()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn longitudes_run_to_360_and_no_further() {
        let longitude = |east| position(40.0, east).map(|place| place.longitude);
        assert_eq!(longitude(350.0), Some(-10.0));
        assert_eq!([longitude(361.0), longitude(500.0)], [None, None]);
    }

    #[test]
    fn numbers_have_five_digits() {
        assert_eq!(wmo_number(" 1234 ").as_deref(), Some("01234"));
        for text in ["", "0", "00000", "123456", "12a45", "-1234"] {
            assert_eq!(wmo_number(text), None);
        }
    }

    #[test]
    fn longitudes_of_both_habits() {
        assert_eq!(position(1.0, 190.0), position(1.0, -170.0));
        assert_eq!(position(90.1, 0.0), None);
        assert_eq!(position(0.0, 360.1 + 180.0), None);
        assert_eq!(position(f64::NAN, 0.0), None);
    }

    /// A quarter of the circumference of the sphere used.
    #[test]
    fn distances() {
        let pole = position(90.0, 0.0).unwrap();
        let equator = position(0.0, 8.0).unwrap();
        assert_relative_eq!(
            distance_km(pole, equator),
            6371.0 * std::f64::consts::FRAC_PI_2,
            max_relative = 1e-12
        );
        assert_eq!(distance_km(equator, equator), 0.0);
    }
}
