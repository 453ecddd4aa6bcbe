//! What to beware of in a setting: thin assumptions, overlaps, missing oxygen, spill.
//!
//! Methods: `docs/methods.md`, section 5.

mod wells;

use std::f64::consts::PI;

use crate::intake;
use crate::problem::Problem;
use crate::profile::{Column, buoyancy_s2};
use crate::site::Site;
use crate::units::say;
use crate::water::Aeration;
use crate::withdrawal::{End, Side};

use super::band::Spread;
use super::blend::{Blend, Drawn, overlapping, release_joined};
use super::levels::Setting;

pub(super) use wells::{vortices, wells};

/// A zone thinner than this many opening heights is no longer that of a point sink (common practice, no source).
const THIN_HEIGHTS: f64 = 2.0;
/// A free limit stands in mixed water when density changes less than this over a metre there, kg/m3: what a
/// hundredth of a degree makes of cold water (choice).
const MIXED_KG_M3_M: f64 = 3e-4;
/// More of the release than this from water below 1 mg/L makes the oxygen an upper bound (choice).
pub const LOW_OXYGEN_SHARE: f64 = 0.05;
/// Rotation of the Earth, rad/s (standard).
const EARTH_RAD_S: f64 = 7.292_115e-5;

fn level_name(site: &Site, drawn: &Drawn) -> String {
    let names: Vec<&str> = drawn.level.outlets.iter().map(|&i| site.outlets[i].name.as_str()).collect();
    names.join(", ")
}

/// Where the zone's assumptions are thin.
pub(super) fn zones(site: &Site, column: &Column, drawn: &[Drawn], warnings: &mut Vec<Problem>) {
    for d in drawn {
        let Some(zone) = &d.zone else { continue };
        let name = level_name(site, d);
        let mixed = |side: &Side| {
            let density = |by: f64| column.density_kg_m3(side.limit_m + by);
            side.end == End::Free && (density(-0.5) - density(0.5)).abs() < MIXED_KG_M3_M
        };
        let limits: Vec<String> = [(&zone.lower, "lower"), (&zone.upper, "upper")]
            .into_iter()
            .filter(|(side, _)| mixed(side))
            .map(|(side, what)| format!("{what} limit ({})", say::m(side.limit_m, 1)))
            .collect();
        if !limits.is_empty() {
            warnings.push(Problem::flag(
                "mixed-layer-limit",
                format!(
                    "{name}: the {} lies in mixed water, where nothing holds it",
                    limits.join(" and the ")
                ),
                "read it as a guess",
            ));
        }
        // a bounded side is cut by the boundary, not thin
        let reach = [&zone.lower, &zone.upper]
            .into_iter()
            .filter(|side| side.end == End::Free)
            .map(|side| (side.limit_m - zone.centre_m).abs())
            .fold(f64::INFINITY, f64::min);
        if reach < THIN_HEIGHTS * d.level.height_m {
            warnings.push(Problem::flag(
                "thin-zone",
                format!(
                    "{name}: the zone reaches only {} from its centre, less than {THIN_HEIGHTS:.0} opening heights: its shape is rough",
                    say::m(reach, 1)
                ),
                "",
            ));
        }
    }
    if !column.has_width() {
        warnings.push(Problem::note(
            "width-assumed",
            "the pool table gives no widths: the pool is taken as equally wide at every elevation",
        ));
    }
}

pub(super) fn overlaps(
    site: &Site,
    column: &Column,
    drawn: &[Drawn],
    release: &Blend,
    warnings: &mut Vec<Problem>,
) {
    let groups = overlapping(drawn);
    if groups.is_empty() {
        return;
    }
    if let Some(joined) = release_joined(column, drawn, &groups, site.zone_factor()) {
        warnings.push(Problem::flag(
            "zones-overlap",
            format!(
                "open levels draw from each other's zones; taken as one sink they would change the release by {}, which the band includes",
                say::dc(joined.temperature_c - (release.temperature_c - release.bias_c), 1).signed()
            ),
            "",
        ));
    }
}

pub(super) fn oxygen(
    site: &Site,
    drawn: &[Drawn],
    release: &Blend,
    spread: &Spread,
    warnings: &mut Vec<Problem>,
) {
    let unread = spread.cases.iter().filter(|c| c.1.is_none()).count();
    if release.oxygen_mg_l.is_some() && unread > 0 {
        let words = format!(
            "in {unread} of {} perturbed cases too much water comes from where no oxygen reading reaches: no oxygen band and no share",
            spread.cases.len()
        );
        warnings.push(Problem::flag("oxygen-band", words, "measure oxygen over the whole zone"));
    }
    for d in drawn {
        let Some(draw) = &d.draw else { continue };
        if draw.oxygen_mg_l.is_none() {
            let words = if draw.oxygen_missing_share >= 1.0 - 1e-9 {
                format!("there is no oxygen reading in the zone of {}", level_name(site, d))
            } else {
                format!(
                    "{:.0} % of the water of {} comes from where there is no oxygen reading",
                    100.0 * draw.oxygen_missing_share,
                    level_name(site, d)
                )
            };
            warnings.push(Problem::flag(
                "oxygen-missing",
                format!("{words}: release oxygen stays unknown"),
                "measure oxygen over the whole depth next time",
            ));
        }
    }
    if release.oxygen_low_share > LOW_OXYGEN_SHARE && release.oxygen_mg_l.is_some() {
        warnings.push(Problem::flag(
            "oxygen-upper-bound",
            format!(
                "{:.0} % of the release comes from water below 1 mg/L, whose sulphide, iron and manganese take up oxygen after mixing",
                100.0 * release.oxygen_low_share
            ),
            "read the release oxygen as an upper bound",
        ));
    }
}

/// Conduits through which water of this setting passes and that add to its oxygen, by name; the second list holds those
/// that let air or oxygen in.
fn gaining<'a>(site: &'a Site, drawn: &[Drawn]) -> [Vec<&'a str>; 2] {
    let mut names = [Vec::new(), Vec::new()];
    for &outlet in drawn.iter().filter(|d| d.draw.is_some()).flat_map(|d| &d.level.outlets) {
        let Some(aeration) = site.aeration(outlet) else { continue };
        let Some(outlet) = site.outlets.get(outlet) else { continue };
        let well = outlet.well.and_then(|well| site.wells.get(well));
        let name = well.map_or(outlet.name.as_str(), |well| well.name.as_str());
        let [all, let_in] = &mut names;
        all.push(name);
        if let Aeration::Gain(_) = aeration.by {
            let_in.push(name);
        }
    }
    for list in &mut names {
        list.sort_unstable();
        list.dedup();
    }
    names
}

/// Where the oxygen of the answer is told, once a conduit adds to it.
pub(super) fn gain(site: &Site, drawn: &[Drawn], release: &Blend, warnings: &mut Vec<Problem>) {
    let [all, let_in] = gaining(site, drawn);
    if let (false, Some(pool)) = (all.is_empty(), release.oxygen_mg_l) {
        let words = format!(
            "oxygen is told and held against targets below the dam, after {}; {pool:.1} mg/L leave the pool",
            all.join(", ")
        );
        warnings.push(Problem::note("oxygen-gain", words));
    }
    if !let_in.is_empty() {
        let words =
            format!("{} lets air or oxygen in; total dissolved gas is not predicted", let_in.join(", "));
        let cure = "measure it below the dam (110 % is the usual criterion)";
        warnings.push(Problem::flag("dissolved-gas", words, cure));
    }
}

/// Openings that stand out of the water in part.
pub(super) fn half_dry(site: &Site, setting: &Setting, pool_m: f64, warnings: &mut Vec<Problem>) {
    for gate in &setting.gates {
        let Some(outlet) = site.outlets.get(gate.outlet).filter(|o| !o.is_crest()) else { continue };
        let out_m = -intake::submergence_m(outlet, gate.opening, pool_m);
        if out_m > 0.0 && gate.flow_m3s > 0.0 {
            let words = format!(
                "{}: the top of its opening stands {} out of the water; computed as if it were covered",
                outlet.name,
                say::m(out_m, 2)
            );
            warnings.push(Problem::flag("half-dry", words, "it draws air: do not rely on its figures"));
        }
    }
}

/// Shut gates that leak.
pub(super) fn leaks(site: &Site, setting: &Setting, drawn: &[Drawn], warnings: &mut Vec<Problem>) {
    let set = |i: &usize| setting.gates.iter().any(|g| g.outlet == *i);
    // density can hold a leak into a well as it can a gate
    let held = |i: &usize| setting.leaks.iter().any(|g| g.outlet == *i && g.flow_m3s <= 0.0);
    let mut names: Vec<&str> = drawn
        .iter()
        .flat_map(|d| &d.level.outlets)
        .filter(|i| !set(i) && !held(i))
        .map(|&i| site.outlets[i].name.as_str())
        .collect();
    names.sort_unstable();
    if !names.is_empty() {
        let words = format!("leaking though shut, and part of the release: {}", names.join(", "));
        warnings.push(Problem::note("leak", words));
    }
}

pub(super) fn cautions(site: &Site, column: &Column, drawn: &[Drawn], warnings: &mut Vec<Problem>) {
    let spills = drawn.iter().any(|d| d.level.outlets.iter().any(|&i| site.outlets[i].is_crest()));
    if spills {
        warnings.push(Problem::flag(
            "dissolved-gas",
            "spill takes up air; total dissolved gas is not predicted",
            "measure it below the dam (110 % is the usual criterion)",
        ));
    }
    if let (Some(latitude), Some(width)) = (site.place.latitude_deg, site.pool.width_m(column.surface_m())) {
        let (bed, surface) = (column.bed_m(), column.surface_m());
        let lower = (bed, column.density_kg_m3(bed));
        let upper = (surface, column.density_kg_m3(surface));
        let buoyancy = buoyancy_s2(lower, upper).max(0.0).sqrt();
        let coriolis = (2.0 * EARTH_RAD_S * latitude.to_radians().sin()).abs();
        if coriolis > 0.0 && buoyancy * (surface - bed) / (PI * coriolis) < width {
            warnings.push(Problem::flag(
                "rotation",
                "the pool is so wide that the Earth's rotation matters: zones may be thicker than computed",
                "",
            ));
        }
    }
}
