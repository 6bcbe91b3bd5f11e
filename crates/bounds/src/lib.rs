//! How far the numbers move inside the credible surface moisture.
//!
//! [`candidates`] names the dew points the surface might truly have, [`interval`] spans them, and [`response`] recomputes the
//! parcels across the span. Every range shown anywhere is [`Response::range`]: the smallest and largest value met inside the interval.
//!
//! This is the first form: the interval is widened by a provisional allowance for the sensor, neighbours don't take part yet, and
//! the interval says so itself ([`Interval::provisional`]).
//!
//! Deliberately absent: any choice among the candidates. The numbers support an authorised forecaster; official warnings and the
//! office's own procedures rule.
//!
//! ```
//! use dewbound_bounds::{Pins, Plan, candidates, interval, response};
//! use dewbound_trust::Thresholds;
//! use dewbound_trust::sounding::{Amendments, Daylight, Level, Parcel, Profile, Sounding};
//!
//! let level = |hpa: f64, t: f64, td: f64| Level {
//!     pressure: Some(hpa * 100.0),
//!     temperature: Some(t + 273.15),
//!     dewpoint: Some(td + 273.15),
//!     ..Level::default()
//! };
//! let sounding = Sounding {
//!     levels: vec![
//!         level(970.0, 31.0, 21.0), // the hygrometer of the station
//!         level(955.0, 29.0, 16.5), // the sonde
//!         level(900.0, 23.9, 15.6),
//!         level(850.0, 18.9, 14.8),
//!         level(800.0, 16.0, 4.0),
//!         level(500.0, -12.0, -30.0),
//!         level(300.0, -41.0, -60.0),
//!         level(150.0, -62.0, -80.0),
//!     ],
//!     ..Sounding::default()
//! };
//! let (received, _) = Profile::received(&sounding);
//! let candidates = candidates(&received, Daylight::Day, &Thresholds::default());
//! let interval = interval(&candidates, candidates.surface_temperature, Pins::default())?;
//! let response = response(&received, &Amendments::default(), Daylight::Day, &candidates, &interval, Plan::default());
//! let range = response.range(Parcel::Surface).unwrap();
//! assert!(range.cape.most.value > range.cape.least.value + 500.0);
//! # Ok::<(), dewbound_bounds::NoInterval>(())
//! ```

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod candidates;
mod interval;
mod range;
mod response;
#[cfg(test)]
mod testing;

pub use candidates::*;
pub use interval::*;
pub use range::*;
pub use response::*;

pub use dewbound_trust as trust;
