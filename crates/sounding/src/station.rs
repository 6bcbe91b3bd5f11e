//! Where a sounding comes from.

/// A place on the ground; north and east positive.
#[derive(Debug, Clone, Copy, PartialEq, serde::Serialize, serde::Deserialize)]
pub struct Position {
    /// Latitude, degrees, -90..=90.
    pub latitude: f64,
    /// Longitude, degrees, -180..=180.
    pub longitude: f64,
}

/// What is known of the station; every field may be absent.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Station {
    /// WIGOS identifier, e.g. `0-20000-0-72518`.
    pub wigos: Option<String>,
    /// WMO block and station number, five digits.
    pub wmo: Option<String>,
    /// ICAO location indicator.
    pub icao: Option<String>,
    /// Any other identifier the file gives (ship call sign, archive id, site code).
    pub text: Option<String>,
    /// Name for people.
    pub name: Option<String>,
    /// Position.
    pub position: Option<Position>,
    /// Height of the ground above mean sea level, m.
    pub elevation: Option<f64>,
}

impl Station {
    /// The identifier decisions are filed under: WIGOS, else WMO number, else ICAO, else text, else name; prefixed by its kind,
    /// e.g. `wmo:72518`. `None` when the file names no station at all.
    pub fn canonical_id(&self) -> Option<String> {
        let kinds = [
            ("wigos", &self.wigos),
            ("wmo", &self.wmo),
            ("icao", &self.icao),
            ("text", &self.text),
            ("name", &self.name),
        ];
        kinds
            .into_iter()
            .find_map(|(kind, id)| id.as_ref().map(|id| format!("{kind}:{id}")))
    }

    /// What people call it: name, else the barest identifier, else "unknown station".
    pub fn label(&self) -> &str {
        [&self.name, &self.icao, &self.wmo, &self.text, &self.wigos]
            .into_iter()
            .find_map(|field| field.as_deref())
            .unwrap_or("unknown station")
    }
}
