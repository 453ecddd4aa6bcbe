//! The pool by its cast as a picture of a written piece.

use crate::report::page::PoolPicture;
use crate::tasks::Context;
use crate::units::Dimension;

/// Heights at which the curves of the pool are read (choice).
const HEIGHTS: usize = 90;

/// The pool with its outlets, each by the opening that its place in the site has where it is open, and zones: name, lower
/// and upper end in the units shown.
pub(super) fn pooled(
    context: &Context,
    opening: impl Fn(usize) -> Option<f64>,
    zones: Vec<(String, f64, f64)>,
) -> PoolPicture {
    let (column, system) = (&context.profile.column, context.system);
    let (length, degree) = (system.unit(Dimension::Length), system.unit(Dimension::Temperature));
    let (bed_m, surface_m) = (column.bed_m(), column.surface_m());
    let heights = (0..=HEIGHTS).map(|k| bed_m + (surface_m - bed_m) * k as f64 / HEIGHTS as f64);
    let readings: Vec<_> = heights.map(|z_m| (length.from_si(z_m), column.reading(z_m))).collect();
    let outlets = context.site().outlets.iter().enumerate().map(|(index, outlet)| {
        let open = opening(index);
        let part = outlet.open_part(open.unwrap_or(1.0));
        let [low, top] = [part.top_m - part.height_m, part.top_m].map(|z_m| length.from_si(z_m));
        (outlet.name.clone(), low, top, open.is_some())
    });
    PoolPicture {
        elevation_unit: length.symbol().to_owned(),
        ends: (length.from_si(bed_m), length.from_si(surface_m)),
        temperature_unit: degree.symbol().to_owned(),
        temperature: readings.iter().map(|(z, r)| (*z, degree.from_si(r.temperature_c))).collect(),
        oxygen: readings.iter().filter_map(|(z, r)| Some((*z, r.oxygen_mg_l?))).collect(),
        outlets: outlets.collect(),
        zones,
    }
}
