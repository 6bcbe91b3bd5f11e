//! Values that can't be.

use super::repair;
use crate::words::number;
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::thermo::{Pressure, ZERO_CELSIUS};
use dewbound_sounding::{Amendment, Level, Sampling};

/// Good levels between bad ones that don't part them, in fine data.
const FINE_GAP: usize = 10;

/// Temperature limits: at pressures above this (hPa), the names of the coldest and the warmest possible.
const LIMITS: [(f64, &str, &str); 5] = [
    (
        700.0,
        "impossible-value.coldest_700_and_below_c",
        "impossible-value.warmest_700_and_below_c",
    ),
    (
        500.0,
        "impossible-value.coldest_700_to_500_c",
        "impossible-value.warmest_700_to_500_c",
    ),
    (
        300.0,
        "impossible-value.coldest_500_to_300_c",
        "impossible-value.warmest_500_to_300_c",
    ),
    (
        100.0,
        "impossible-value.coldest_300_to_100_c",
        "impossible-value.warmest_300_to_100_c",
    ),
    (
        0.0,
        "impossible-value.coldest_above_100_c",
        "impossible-value.warmest_above_100_c",
    ),
];

/// Beyond physical limits.
pub struct ImpossibleValue;

/// What is wrong with one value of one level.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Fault {
    /// Temperature, °C, and the limit it is beyond.
    Temperature { value: f64, limit: f64 },
    /// Dew point above temperature, K.
    DewpointExcess(f64),
    /// Relative humidity below zero, %.
    NegativeHumidity(f64),
    /// Wind speed, m/s.
    WindSpeed(f64),
    /// Wind direction, degrees.
    WindDirection(f64),
    /// Not a number.
    NotANumber(&'static str),
}

impl Fault {
    fn is_wind(self) -> bool {
        matches!(
            self,
            Self::WindSpeed(_) | Self::WindDirection(_) | Self::NotANumber("wind")
        )
    }

    /// How bad, for picking the one to be told; comparable within a kind only.
    fn size(self) -> f64 {
        match self {
            Self::Temperature { value, limit } => (value - limit).abs(),
            Self::DewpointExcess(k) => k,
            Self::NegativeHumidity(pct) => -pct,
            Self::WindSpeed(ms) => ms.abs(),
            Self::WindDirection(degrees) => degrees.abs(),
            Self::NotANumber(_) => 0.0,
        }
    }

    fn says(self) -> String {
        match self {
            Self::Temperature { value, limit } => format!(
                "temperature {} \u{b0}C is beyond the {} \u{b0}C possible there",
                number(value, 1),
                number(limit, 0)
            ),
            Self::DewpointExcess(k) => {
                format!("dew point {} K above the temperature", number(k, 1))
            }
            Self::NegativeHumidity(pct) => format!("relative humidity {} %", number(pct, 1)),
            Self::WindSpeed(ms) => format!("wind speed {} m/s", number(ms, 0)),
            Self::WindDirection(degrees) => format!("wind direction {}\u{b0}", number(degrees, 0)),
            Self::NotANumber(what) => format!("{what} is not a number"),
        }
    }

    fn evidence(self) -> Option<Evidence> {
        Some(match self {
            Self::Temperature { value, .. } => {
                Evidence::new("temperature_c", "temperature", value, "\u{b0}C", 1)
            }
            Self::DewpointExcess(k) => Evidence::new(
                "dewpoint_excess_k",
                "dew point above temperature by",
                k,
                "K",
                1,
            ),
            Self::NegativeHumidity(pct) => {
                Evidence::new("rh_pct", "relative humidity", pct, "%", 1)
            }
            Self::WindSpeed(ms) => Evidence::new("wind_ms", "wind speed", ms, "m/s", 0),
            Self::WindDirection(degrees) => {
                Evidence::new("wind_direction_deg", "wind direction", degrees, "\u{b0}", 0)
            }
            Self::NotANumber(_) => return None,
        })
    }
}

impl Rule for ImpossibleValue {
    fn id(&self) -> &'static str {
        "impossible-value"
    }

    fn title(&self) -> &'static str {
        "Impossible value"
    }

    fn source(&self) -> &'static str {
        "Durre, Vose, Wuertz 2008, JAMC 47 (limits as the first of their tests); the limits themselves: common practice, \
         no source"
    }

    fn about(&self) -> &'static str {
        "A temperature outside what is possible at its pressure, a dew point above the temperature beyond rounding, a \
         wind no atmosphere has. Neighbouring bad levels are one finding."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        const NAMES: [&str; 12] = [
            LIMITS[0].1,
            LIMITS[0].2,
            LIMITS[1].1,
            LIMITS[1].2,
            LIMITS[2].1,
            LIMITS[2].2,
            LIMITS[3].1,
            LIMITS[3].2,
            LIMITS[4].1,
            LIMITS[4].2,
            "impossible-value.dewpoint_excess_k",
            "impossible-value.wind_ms",
        ];
        &NAMES
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let sounding = view.context.sounding;
        let limits = Limits::of(view);
        let gap = match view.context.profile.sampling {
            Sampling::Fine => FINE_GAP,
            Sampling::Coded => 0,
        };
        let mut runs: Vec<Vec<(usize, Fault)>> = Vec::new();
        for (index, level) in sounding.levels.iter().enumerate() {
            for fault in limits.faults(level) {
                let near = |run: &&mut Vec<(usize, Fault)>| {
                    run.last().is_some_and(|&(last, other)| {
                        index <= last + gap + 1 && other.is_wind() == fault.is_wind()
                    })
                };
                match runs.iter_mut().rev().find(near) {
                    Some(run) => run.push((index, fault)),
                    None => runs.push(vec![(index, fault)]),
                }
            }
        }
        runs.iter().map(|run| self.finding(view, run)).collect()
    }
}

struct Limits {
    temperature: [(f64, f64, f64); 5],
    dewpoint_excess: f64,
    wind: f64,
}

impl Limits {
    fn of(view: &View) -> Self {
        let step = view.context.sounding.temperature_step;
        Self {
            temperature: LIMITS.map(|(hpa, coldest, warmest)| {
                (hpa, view.threshold(coldest), view.threshold(warmest))
            }),
            // Temperature and dew point are each rounded by half a step.
            dewpoint_excess: view.threshold("impossible-value.dewpoint_excess_k") + step,
            wind: view.threshold("impossible-value.wind_ms"),
        }
    }

    fn faults(&self, level: &Level) -> Vec<Fault> {
        let mut faults = Vec::new();
        // Without a pressure the widest limits still hold.
        let hpa = level.pressure.filter(|p| p.is_finite()).map(|p| p / 100.0);
        if let Some(t) = level.temperature {
            let c = t - ZERO_CELSIUS;
            let (coldest, warmest) = self.possible(hpa);
            if !c.is_finite() {
                faults.push(Fault::NotANumber("temperature"));
            } else if c < coldest || c > warmest {
                let limit = if c < coldest { coldest } else { warmest };
                faults.push(Fault::Temperature { value: c, limit });
            }
        }
        if let Some(td) = level.dewpoint {
            if !td.is_finite() {
                faults.push(Fault::NotANumber("dew point"));
            } else if let Some(excess) = level
                .temperature
                .map(|t| td - t)
                .filter(|&k| k > self.dewpoint_excess)
            {
                faults.push(Fault::DewpointExcess(excess));
            }
        }
        if let Some(rh) = level.relative_humidity.filter(|&rh| rh < 0.0) {
            faults.push(Fault::NegativeHumidity(100.0 * rh));
        }
        if let Some(wind) = level.wind {
            if !(wind.speed.is_finite() && wind.direction.is_finite()) {
                faults.push(Fault::NotANumber("wind"));
            } else if wind.speed < 0.0 || wind.speed > self.wind {
                faults.push(Fault::WindSpeed(wind.speed));
            } else if !(0.0..=360.0).contains(&wind.direction) {
                faults.push(Fault::WindDirection(wind.direction));
            }
        }
        faults
    }

    fn possible(&self, hpa: Option<f64>) -> (f64, f64) {
        let here = hpa.and_then(|hpa| self.temperature.iter().find(|(above, _, _)| hpa >= *above));
        match here {
            Some(&(_, coldest, warmest)) => (coldest, warmest),
            None => self
                .temperature
                .iter()
                .fold((f64::INFINITY, f64::NEG_INFINITY), |(c, w), limit| {
                    (c.min(limit.1), w.max(limit.2))
                }),
        }
    }
}

impl ImpossibleValue {
    fn finding(&self, view: &View, run: &[(usize, Fault)]) -> Finding {
        let levels = &view.context.sounding.levels;
        let mut indices: Vec<usize> = run.iter().map(|&(index, _)| index).collect();
        indices.dedup();
        let pressures: Vec<f64> = indices
            .iter()
            .filter_map(|&index| levels.get(index)?.pressure)
            .filter(|p| p.is_finite() && *p > 0.0)
            .collect();
        let bottom = pressures
            .iter()
            .copied()
            .reduce(f64::max)
            .map(Pressure::from_pa);
        let top = pressures
            .iter()
            .copied()
            .reduce(f64::min)
            .map(Pressure::from_pa);
        // The worst of each kind is told.
        let mut told: Vec<(usize, Fault)> = Vec::new();
        for &(index, fault) in run {
            match told
                .iter_mut()
                .find(|(_, other)| std::mem::discriminant(other) == std::mem::discriminant(&fault))
            {
                Some(worst) if fault.size() > worst.1.size() => *worst = (index, fault),
                Some(_) => {}
                None => told.push((index, fault)),
            }
        }
        let place = |index: usize| {
            let level = levels.get(index);
            let pressure = level
                .and_then(|level| level.pressure)
                .filter(|p| p.is_finite())
                .map(|p| format!(" at {}", repair::at(p)));
            let line = level
                .and_then(|level| level.line)
                .map(|line| format!(" (line {line})"));
            [pressure, line].into_iter().flatten().collect::<String>()
        };
        let said: Vec<String> = told
            .iter()
            .map(|&(index, fault)| format!("{}{}", fault.says(), place(index)))
            .collect();
        let mut summary = said.join("; ");
        if let Some(first) = summary.get(..1).map(str::to_uppercase) {
            summary.replace_range(..1, &first);
        }
        if indices.len() > 1 {
            summary.push_str(&format!("; {} levels in all", indices.len()));
        }
        summary.push('.');
        let mut evidence: Vec<Evidence> = told
            .iter()
            .filter_map(|(_, fault)| fault.evidence())
            .collect();
        evidence.push(Evidence::new(
            "levels",
            "levels affected",
            indices.len() as f64,
            "",
            0,
        ));
        let slight = run.iter().all(|(_, fault)| {
            matches!(fault, Fault::DewpointExcess(k) if *k < 2.0 * view.threshold("impossible-value.dewpoint_excess_k") + view.context.sounding.temperature_step)
        });
        let wind_only = run.iter().all(|(_, fault)| fault.is_wind());
        Finding {
            rule: self.id(),
            title: self.title(),
            grade: if slight {
                Grade::Doubtful
            } else {
                Grade::Erroneous
            },
            bottom,
            top,
            heights: bottom
                .zip(top)
                .and_then(|(bottom, top)| view.heights(bottom, top)),
            summary,
            evidence,
            guilty: "A failed sensor, a garbled transmission or a coding mistake.".into(),
            innocent: if slight {
                "In cloud a humidity sensor may read a little above 100 % within its own uncertainty.".into()
            } else {
                "None in the free atmosphere; the pressure of the level may be wrong instead of the value.".into()
            },
            caveat: String::new(),
            repairs: if wind_only {
                Vec::new()
            } else {
                repairs(view, bottom, top)
            },
            wind_only,
        }
    }
}

fn repairs(view: &View, bottom: Option<Pressure>, top: Option<Pressure>) -> Vec<Repair> {
    let (Some(bottom), Some(top)) = (bottom, top) else {
        return Vec::new();
    };
    let pressure = &view.context.profile.pressure;
    let first = pressure.partition_point(|&p| p > bottom.pa());
    let end = pressure.partition_point(|&p| p >= top.pa());
    // The surface level stays: without it there is no surface parcel, and its values can be set instead.
    let holds_surface = view
        .context
        .profile
        .surface
        .is_some_and(|surface| (first..end).contains(&surface));
    if end <= first || holds_surface {
        return Vec::new();
    }
    let drop = |what: String, bottom_pa: f64, top_pa: f64| Repair {
        id: "drop-levels",
        what,
        amendments: vec![Amendment::DropLevels { bottom_pa, top_pa }],
    };
    if end - first == 1 {
        let Some(&p) = pressure.get(first) else {
            return Vec::new();
        };
        return vec![drop(format!("Drop the level at {}", repair::at(p)), p, p)];
    }
    // Strictly between the neighbours believed on either side; at the top of the profile there is none above.
    match (
        first.checked_sub(1).and_then(|below| pressure.get(below)),
        pressure.get(end),
    ) {
        (Some(&below), Some(&above)) => vec![drop(
            format!(
                "Drop the {} levels between {} and {}",
                end - first,
                repair::at(below),
                repair::at(above)
            ),
            below,
            above,
        )],
        (Some(&below), None) => vec![Repair {
            id: "disregard-above",
            what: format!("Disregard everything above {}", repair::at(below)),
            amendments: vec![Amendment::DisregardAbove { pressure_pa: below }],
        }],
        _ => Vec::new(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, Scene, levels};
    use dewbound_sounding::Wind;

    #[test]
    fn clean_ascents_are_silent() {
        for sounding in [
            Air0::default().ascent().fine(),
            Air0::default().ascent().coded(),
        ] {
            assert!(Scene::day(sounding).check(&ImpossibleValue).is_empty());
        }
    }

    #[test]
    fn what_cant_be_is_erroneous_and_says_where() {
        let rows = [
            (1000.0, 25.0, 15.0),
            (850.0, 14.0, 5.0),
            (700.0, 55.0, -8.0),
            (500.0, -12.0, -2.0),
            (300.0, -38.0, -55.0),
        ];
        let found = Scene::day(levels(&rows)).check(&ImpossibleValue);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert_eq!(found[0].grade, Grade::Erroneous);
        assert!(
            found[0]
                .summary
                .starts_with("Dew point 10.0 K above the temperature at 500 hPa (line 4)"),
            "{}",
            found[0].summary
        );
        let mut rows = rows;
        rows[2].1 = 61.0;
        rows[3].2 = -30.0;
        let found = Scene::day(levels(&rows)).check(&ImpossibleValue);
        assert_eq!(found[0].key(), "impossible-value@700-700");
        assert!(
            found[0].summary.contains("61.0 \u{b0}C")
                && found[0].summary.contains("60 \u{b0}C possible"),
            "{}",
            found[0].summary
        );
    }

    #[test]
    fn a_failed_sensor_is_one_finding() {
        let mut sounding = Air0::default().ascent().fine();
        for level in sounding.levels.iter_mut().skip(1000).take(400).step_by(2) {
            level.temperature = Some(150.0);
        }
        let found = Scene::day(sounding).check(&ImpossibleValue);
        assert_eq!(found.len(), 1);
        assert_eq!(found[0].evidence("levels"), Some(200.0));
        assert_eq!(found[0].repairs.len(), 1);
    }

    #[test]
    fn wind_has_no_cost_in_cape_and_not_a_number_is_told() {
        let mut sounding = Air0::default().ascent().coded();
        sounding.levels[3].wind = Some(Wind {
            direction: 270.0,
            speed: 220.0,
        });
        sounding.levels[5].temperature = Some(f64::NAN);
        let found = Scene::day(sounding).check(&ImpossibleValue);
        assert_eq!(found.len(), 2, "{found:#?}");
        assert!(found[0].wind_only && found[0].summary.contains("220 m/s"));
        assert!(!found[1].wind_only && found[1].summary.contains("not a number"));
    }
}
