//! The office's station table.

/// Stations by WMO number, WIGOS id and ICAO indicator (`stations.csv`: columns `wmo,wigos,icao,name,lat,lon,elevation_m`, any order).
#[derive(Debug, Clone, Default, PartialEq)]
pub struct StationTable {
    _private: (),
}
