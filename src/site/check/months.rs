//! Weather of the months, as the site file gives it, into the air over the river.

use crate::problem::Problem;
use crate::site::RawMonthly;
use crate::weather::Air;

pub(super) fn air(m: &RawMonthly, problems: &mut Vec<Problem>) -> Option<[Air; 12]> {
    let _ = (m, problems);
    None
}
