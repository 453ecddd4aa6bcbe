//! What is known around the river: its weather, its side streams, what its stations recorded.

use std::collections::BTreeMap;

use crate::series::Record;
use crate::weather::Weather;

/// What the files of a folder tell beside the site and its casts.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Conditions {
    /// Weather, recorded and forecast.
    pub weather: Weather,
    /// Series of side streams, by the name of the stream.
    pub streams: BTreeMap<String, Record>,
    /// What stations recorded, by the name of the point; `dam` is the tailwater.
    pub observed: BTreeMap<String, Record>,
}
