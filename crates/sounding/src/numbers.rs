//! The three parcels of a profile.

use crate::Profile;
use dewbound_thermo::{
    Ascent, Environment, EnvironmentError, HumidityKnown, MIXED_DEPTH, MOST_UNSTABLE_DEPTH, Method,
    Pressure, lift, mixed_start, most_unstable_start,
};

/// Which of the three parcels.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Parcel {
    /// From the surface level.
    Surface,
    /// Mean of the lowest 100 hPa.
    Mixed,
    /// Largest theta-e in the lowest 300 hPa.
    MostUnstable,
}

impl Parcel {
    /// All three, in the order shown.
    pub const ALL: [Self; 3] = [Self::Surface, Self::Mixed, Self::MostUnstable];
}

/// The three parcels of one profile, and what limits them.
#[derive(Debug, Clone, PartialEq)]
pub struct Numbers {
    /// Surface parcel; `None` until the surface has temperature and dew point.
    pub surface: Option<Ascent>,
    /// Mixed parcel.
    pub mixed: Option<Ascent>,
    /// Most unstable parcel.
    pub most_unstable: Option<Ascent>,
    /// Row of the profile the most unstable parcel starts at.
    pub most_unstable_row: Option<usize>,
    /// The most unstable parcel is the surface parcel.
    pub most_unstable_is_surface: bool,
    /// What is known of the humidity.
    pub humidity: Option<HumidityKnown>,
    /// CAPE with relative humidity held above the last known dew point, per parcel (order of [`Parcel::ALL`]); present when that
    /// point is below 500 hPa (at a higher pressure).
    pub cape_humidity_held: Option<[Option<f64>; 3]>,
    /// Where the other parcels start when the surface is unusable.
    pub starts_at: Option<Pressure>,
    /// Why there are no numbers at all.
    pub problem: Option<EnvironmentError>,
}

/// Humidity that ends below this level (at a higher pressure) is worth a second CAPE with humidity held.
const HUMIDITY_HELD_BELOW: Pressure = Pressure::from_hpa(500.0);

impl Numbers {
    /// Computes all three.
    ///
    /// The mixed parcel starts at the lowest level of the environment: the surface, or the lowest complete level, see [`Numbers::starts_at`].
    /// The most unstable parcel chooses among received levels; inserted rows are not candidates.
    pub fn of(profile: &Profile) -> Self {
        Self::and_environment(profile).0
    }

    /// The same, with the environment they were computed in, for what else is asked of it; `None` when there is no environment.
    pub fn and_environment(profile: &Profile) -> (Self, Option<Environment>) {
        match profile.environment() {
            Ok(environment) => (Self::within(profile, &environment), Some(environment)),
            Err(problem) => {
                let none = Self {
                    problem: Some(problem),
                    ..Self::none()
                };
                (none, None)
            }
        }
    }

    fn none() -> Self {
        Self {
            surface: None,
            mixed: None,
            most_unstable: None,
            most_unstable_row: None,
            most_unstable_is_surface: false,
            humidity: None,
            cape_humidity_held: None,
            starts_at: None,
            problem: None,
        }
    }

    fn within(profile: &Profile, environment: &Environment) -> Self {
        let mut numbers = Self::none();
        let method = Method::default();
        let rows = profile.environment_rows();
        let surface = profile.surface_air();
        if surface.is_none() {
            numbers.starts_at = Some(environment.bottom().pressure);
        }
        let surface_row = surface.and(profile.surface);
        let mixed = mixed_start(environment, MIXED_DEPTH);
        let candidate = |level: usize| {
            rows.get(level)
                .is_some_and(|&row| matches!(profile.received.get(row), Some(Some(_))))
        };
        let unstable = most_unstable_start(environment, MOST_UNSTABLE_DEPTH, candidate);
        numbers.surface = surface.and_then(|start| lift(environment, start, method));
        numbers.mixed = mixed.and_then(|start| lift(environment, start, method));
        if let Some((level, start)) = unstable {
            numbers.most_unstable_row = rows.get(level).copied();
            numbers.most_unstable_is_surface =
                numbers.most_unstable_row.is_some() && numbers.most_unstable_row == surface_row;
            numbers.most_unstable = if numbers.most_unstable_is_surface {
                numbers.surface.clone()
            } else {
                lift(environment, start, method)
            };
        }
        let humidity = environment.humidity();
        numbers.humidity = Some(humidity);
        if humidity
            .dry_above
            .is_some_and(|p| p.pa() > HUMIDITY_HELD_BELOW.pa())
        {
            let held = environment.with_humidity_held();
            let cape = |ascent: &Option<Ascent>| {
                let start = ascent.as_ref()?.start;
                lift(&held, start, method).map(|ascent| ascent.cape)
            };
            numbers.cape_humidity_held = Some([
                cape(&numbers.surface),
                cape(&numbers.mixed),
                cape(&numbers.most_unstable),
            ]);
        }
        numbers
    }

    /// One of the three.
    pub fn parcel(&self, parcel: Parcel) -> Option<&Ascent> {
        match parcel {
            Parcel::Surface => self.surface.as_ref(),
            Parcel::Mixed => self.mixed.as_ref(),
            Parcel::MostUnstable => self.most_unstable.as_ref(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{afternoon, level, received};
    use crate::{Amendments, Daylight, Reach};
    use dewbound_thermo::Temperature;

    #[test]
    fn most_unstable_is_the_surface_by_day() {
        let (profile, _) = received(afternoon());
        let numbers = Numbers::of(&profile);
        assert_eq!(numbers.most_unstable_row, Some(0));
        assert!(numbers.most_unstable_is_surface);
        assert_eq!(numbers.most_unstable, numbers.surface);
        assert_eq!(numbers.parcel(Parcel::Mixed), numbers.mixed.as_ref());
        // Mixed from the surface pressure, drier than the surface here.
        let (surface, mixed) = (numbers.surface.unwrap(), numbers.mixed.unwrap());
        assert_eq!(mixed.start.pressure, surface.start.pressure);
        assert!(mixed.start.dewpoint < surface.start.dewpoint && mixed.cape < surface.cape);
    }

    #[test]
    fn most_unstable_aloft_is_a_received_level() {
        // A cold pool at the ground with warm moist air over it.
        let mut levels = afternoon();
        levels[0] = level(960.0, 17.0, 13.0);
        levels[1] = level(935.0, 16.0, 13.0);
        let (profile, _) = received(levels);
        let numbers = Numbers::of(&profile);
        assert!(!numbers.most_unstable_is_surface);
        // Largest theta-e of the levels within 300 hPa of the ground.
        let best = (0..profile.len())
            .filter(|&row| profile.pressure[row] >= 66_000.0)
            .max_by(|&a, &b| {
                let theta_e = |row| profile.air(row).unwrap().theta_e().k();
                theta_e(a).total_cmp(&theta_e(b))
            });
        assert_eq!(numbers.most_unstable_row, best);
    }

    #[test]
    fn an_inserted_row_is_never_the_most_unstable() {
        // Two levels far apart; the dried surface leaves the moist air of before in the row inserted 10 hPa up.
        let mut levels = afternoon();
        levels.drain(1..3);
        let (profile, _) = received(levels);
        let list = Amendments {
            reach: Some(Reach::Level),
            ..Amendments::default()
        };
        let working = list
            .with_surface_dewpoint(Temperature::from_c(5.0))
            .apply(&profile, Daylight::Day);
        let theta_e = |row| working.profile.air(row).unwrap().theta_e().k();
        assert_eq!(working.profile.received[1], None);
        assert!(theta_e(1) > theta_e(0) && theta_e(1) > theta_e(2));
        let row = Numbers::of(&working.profile).most_unstable_row.unwrap();
        assert_eq!(row, 2);
    }

    #[test]
    fn humidity_held_beside_when_it_ends_low() {
        let humidity_to = |hpa: f64| {
            let mut levels = afternoon();
            for level in &mut levels {
                if level.pressure.unwrap() < hpa * 100.0 {
                    level.dewpoint = None;
                }
            }
            Numbers::of(&received(levels).0)
        };
        let low = humidity_to(700.0);
        assert_eq!(low.humidity.unwrap().dry_above.unwrap().hpa(), 700.0);
        let held = low.cape_humidity_held.unwrap();
        for (parcel, held) in Parcel::ALL.into_iter().zip(held) {
            // Moister surroundings are virtually warmer: less buoyancy.
            assert!(held.unwrap() < low.parcel(parcel).unwrap().cape);
        }
        assert_eq!(humidity_to(400.0).cape_humidity_held, None);
        assert_eq!(humidity_to(100.0).cape_humidity_held, None);
    }

    #[test]
    fn says_why_there_are_none() {
        let mut levels = afternoon();
        for level in &mut levels {
            level.dewpoint = None;
        }
        let numbers = Numbers::of(&received(levels).0);
        assert!(
            numbers.surface.is_none() && numbers.mixed.is_none() && numbers.most_unstable.is_none()
        );
        assert!(
            matches!(numbers.problem, Some(EnvironmentError::BottomWithoutHumidity { pressure }) if pressure == 96_000.0)
        );
    }
}
