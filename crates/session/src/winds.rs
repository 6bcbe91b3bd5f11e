//! The wind numbers as people read them: one line each, with unit, and the reason where one is absent.

use crate::Item;
use crate::chart::{SpeedUnit, bearing, drawn_heights, speed_text, wind_text};
use crate::sounding::Further;
use crate::thermo::{StormMotion, Vector, WindNumbers, WindProfile};
use crate::wording::number;
use std::fmt::Write as _;

/// One wind number.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct WindLine {
    /// What it is.
    pub name: &'static str,
    /// Value with unit; `None`: absent.
    pub value: Option<String>,
    /// What belongs to the value (its direction, the motion it is measured against), or why there is none.
    pub note: String,
    /// Definition and source.
    pub about: &'static str,
}

impl WindLine {
    /// "Difference 0–1 km: 18 kt, from 214°".
    pub fn text(&self) -> String {
        let value = self.value.as_deref().unwrap_or("none");
        if self.note.is_empty() {
            format!("{}: {value}", self.name)
        } else {
            format!("{}: {value}, {}", self.name, self.note)
        }
    }
}

/// Why there is no page of the winds; `None` when there is one.
pub fn no_winds(item: &Item) -> Option<String> {
    let further = &item.results().further;
    match &further.wind_profile {
        Some(profile) if drawn_heights(profile).is_some() => None,
        Some(_) => Some(
            "No wind of this sounding lies between the ground and 12 km, so there is nothing to draw."
                .to_owned(),
        ),
        None => {
            let winds = item.received().wind.iter().flatten().count();
            Some(match winds {
                0 => "This sounding has no winds, so there is no hodograph.".to_owned(),
                1 => "This sounding has only one wind; a hodograph needs two.".to_owned(),
                _ => format!(
                    "This sounding has {winds} winds, but fewer than two with a known height above the ground, so there is no hodograph."
                ),
            })
        }
    }
}

/// The motion helicity is measured against, in words: "right 254° 26 kt", "your own 270° 20 kt".
pub fn motion_in_use(
    numbers: &WindNumbers,
    set: Option<Vector>,
    unit: SpeedUnit,
) -> Option<String> {
    let used = numbers.motion_used?;
    let word = match (set, numbers.motion) {
        (Some(_), _) => "your own",
        (None, Some(motion)) if motion.left == used && motion.right != used => "left",
        _ => "right",
    };
    Some(format!("{word} {}", wind_text(used, unit)))
}

/// All of them, what a forecaster asks first first; empty without a wind profile.
pub fn wind_lines(item: &Item, unit: SpeedUnit) -> Vec<WindLine> {
    let further = &item.results().further;
    let Some(profile) = further.wind_profile.as_deref() else {
        return Vec::new();
    };
    let set = item.document().storm_motion();
    Lines {
        profile,
        further,
        numbers: &further.winds,
        set,
        unit,
    }
    .all()
}

/// The lines as text, for copying.
pub fn winds_as_text(item: &Item, unit: SpeedUnit) -> String {
    let mut text = format!("{}: wind\n", item.sounding().station.label());
    if let Some(why) = no_winds(item) {
        text.push_str(&why);
        text.push('\n');
    }
    for line in wind_lines(item, unit) {
        let value = line.value.as_deref().unwrap_or("none");
        // Writing to a String can't fail.
        let _ = writeln!(text, "{}\t{value}\t{}", line.name, line.note);
    }
    text.push_str(crate::wording::CAUTION);
    text.push('\n');
    text
}

struct Lines<'a> {
    profile: &'a WindProfile,
    further: &'a Further,
    numbers: &'a WindNumbers,
    set: Option<Vector>,
    unit: SpeedUnit,
}

const DIFFERENCE: &str = "The wind at the upper height minus the wind at the ground, as a vector: its length, and where it comes from. Also called bulk shear.";
const FIXED: &str = "Bunkers et al. (2000): the mean wind of 0–6 km, and 7.5 m/s to the side of it, at a right angle to the shear between the lowest and the highest 500 m.";
const EFFECTIVE: &str = "Bunkers et al. (2014): the same deviation, from the mean wind between the base of the effective inflow layer and 65 % of the height of the equilibrium level.";
const HELICITY: &str = "Storm-relative helicity (Davies-Jones et al. 1990): twice the area that the wind, as the storm feels it, sweeps over on the hodograph. Measured against the motion in use.";

impl Lines<'_> {
    fn all(&self) -> Vec<WindLine> {
        let numbers = self.numbers;
        let km = 1000.0;
        vec![
            self.in_use(),
            self.helicity("Helicity 0–1 km", numbers.helicity_0_to_1km, || {
                self.out_of_reach(0.0, km)
            }),
            self.helicity("Helicity 0–3 km", numbers.helicity_0_to_3km, || {
                self.out_of_reach(0.0, 3.0 * km)
            }),
            self.helicity("Helicity, effective", numbers.helicity_effective, || {
                self.no_inflow()
            }),
            self.difference("Difference 0–1 km", numbers.difference_0_to_1km, km),
            self.difference("Difference 0–3 km", numbers.difference_0_to_3km, 3.0 * km),
            self.difference("Difference 0–6 km", numbers.difference_0_to_6km, 6.0 * km),
            self.difference_effective(),
            self.critical_angle(),
            WindLine {
                name: "Mean wind 0–6 km",
                value: numbers.mean_0_to_6km.map(|wind| wind_text(wind, self.unit)),
                note: match numbers.mean_0_to_6km {
                    Some(_) => "by height".to_owned(),
                    None => self.out_of_reach(0.0, 6.0 * km),
                },
                about: "Mean of the wind from the ground to 6 km, each metre counting alike.",
            },
            self.motion(
                "Motion, right",
                numbers.motion,
                |motion| motion.right,
                FIXED,
            ),
            self.motion("Motion, left", numbers.motion, |motion| motion.left, FIXED),
            self.motion(
                "Right, effective",
                numbers.motion_effective,
                |motion| motion.right,
                EFFECTIVE,
            ),
            self.motion(
                "Left, effective",
                numbers.motion_effective,
                |motion| motion.left,
                EFFECTIVE,
            ),
        ]
    }

    fn in_use(&self) -> WindLine {
        let value = self
            .numbers
            .motion_used
            .map(|motion| wind_text(motion, self.unit));
        let note = match (self.set, &value) {
            (Some(_), _) => "set by you".to_owned(),
            (None, Some(_)) => {
                let named = motion_in_use(self.numbers, None, self.unit).unwrap_or_default();
                let side = named.split(' ').next().unwrap_or_default();
                format!("estimated, {side} of the mean wind")
            }
            (None, None) => self.no_motion(),
        };
        WindLine {
            name: "Motion in use",
            value,
            note,
            about: "The storm motion that helicity is measured against: where it comes from and how fast. Drag its ring on the hodograph, or move it with the arrow keys.",
        }
    }

    fn helicity(
        &self,
        name: &'static str,
        value: Option<f64>,
        why: impl Fn() -> String,
    ) -> WindLine {
        let note = match (value, self.numbers.motion_used) {
            (Some(_), _) => motion_in_use(self.numbers, self.set, self.unit)
                .map_or_else(String::new, |motion| format!("against {motion}")),
            (None, None) => self.no_motion(),
            (None, Some(_)) => why(),
        };
        WindLine {
            name,
            value: value.map(|value| format!("{} m²/s²", number(value, 0))),
            note,
            about: HELICITY,
        }
    }

    fn difference(&self, name: &'static str, value: Option<Vector>, top: f64) -> WindLine {
        WindLine {
            name,
            value: value.map(|value| speed_text(value.speed(), self.unit)),
            note: match value {
                Some(value) => format!("from {}", bearing(value)),
                None => self.out_of_reach(0.0, top),
            },
            about: DIFFERENCE,
        }
    }

    fn difference_effective(&self) -> WindLine {
        let value = self.numbers.difference_effective;
        WindLine {
            name: "Difference, effective",
            value: value.map(|value| speed_text(value.speed(), self.unit)),
            note: value.map_or_else(
                || self.no_inflow(),
                |value| format!("from {}", bearing(value)),
            ),
            about: "Thompson et al. (2007): over the lower half of the storm's depth, from the base of the effective inflow layer to halfway up to the equilibrium level of the most unstable parcel.",
        }
    }

    fn critical_angle(&self) -> WindLine {
        let value = self.numbers.critical_angle;
        let note = match (value, self.numbers.motion_used) {
            (Some(_), _) => "90° would be streamwise".to_owned(),
            (None, None) => self.no_motion(),
            (None, Some(_)) => self.out_of_reach(0.0, 500.0),
        };
        WindLine {
            name: "Critical angle",
            value: value.map(|value| format!("{}°", number(value, 0))),
            note,
            about: "Esterheld & Giuliano (2008): between the storm-relative wind at the ground and the wind difference of the lowest 500 m. At 90° the vorticity the storm takes in there is streamwise.",
        }
    }

    fn motion(
        &self,
        name: &'static str,
        motion: Option<StormMotion>,
        side: fn(StormMotion) -> Vector,
        about: &'static str,
    ) -> WindLine {
        let fixed = about == FIXED;
        WindLine {
            name,
            value: motion.map(|motion| wind_text(side(motion), self.unit)),
            note: match motion {
                Some(_) if fixed => "from 0–6 km".to_owned(),
                Some(_) => "from the inflow layer up".to_owned(),
                None if fixed => self.no_motion(),
                None => self.no_inflow(),
            },
            about,
        }
    }

    /// Why there is nothing for a layer between two heights, m.
    fn out_of_reach(&self, from: f64, to: f64) -> String {
        let levels = self.profile.levels();
        let height = |metres: f64| format!("{} km", number(metres / 1000.0, 1));
        match (levels.first(), levels.last()) {
            (Some(first), _) if self.profile.at(from).is_none() && first.height > from => {
                format!("the lowest wind is at {}", height(first.height))
            }
            (_, Some(last)) if last.height < to => {
                format!("the wind ends at {}", height(last.height))
            }
            _ => "not known".to_owned(),
        }
    }

    fn no_motion(&self) -> String {
        let reason = self.out_of_reach(0.0, 6000.0);
        match (self.set, self.numbers.motion) {
            (None, None) if reason != "not known" => format!("no estimate: {reason}"),
            (None, None) => "no estimate: the wind doesn't change up to 6 km".to_owned(),
            _ => reason,
        }
    }

    fn no_inflow(&self) -> String {
        match self.further.layers.inflow {
            None => "no effective inflow layer".to_owned(),
            Some(_) if self.further.parcels[2].is_none_or(|p| p.el_height.is_none()) => {
                "the most unstable parcel has no EL".to_owned()
            }
            Some(_) => "the wind doesn't cover that layer".to_owned(),
        }
    }
}
