//! Weather as a station or a forecast wrote it, by the hour or by the day.

use crate::problem::Problem;
use crate::site::Site;
use crate::weather::Weather;

use super::text::Source;

/// Reads a weather file. The list holds everything said of it; the weather is `None` when anything refuses it.
pub fn weather(source: &Source, site: &Site) -> (Option<Weather>, Vec<Problem>) {
    let _ = (source, site);
    (None, Vec::new())
}
