//! What a station in the river recorded: times, temperature, oxygen, flow, as its logger wrote them.

use crate::problem::Problem;
use crate::series::Record;
use crate::site::Site;

use super::text::Source;

/// Reads a station's file. The list holds everything said of it; the record is `None` when anything refuses it.
pub fn station(source: &Source, site: &Site) -> (Option<Record>, Vec<Problem>) {
    let _ = (source, site);
    (None, Vec::new())
}
