//! Outlets at one elevation act as one sink: the levels of a site.
//!
//! Methods: `docs/methods.md`, section 4.

use std::cmp::Ordering;

use super::Outlet;

/// Crests this near in elevation draw as one, m (choice).
const SAME_CREST_M: f64 = 0.1;
/// Angles this near are equal, rad (choice: round-off).
const SAME_ANGLE: f64 = 1e-6;

/// Groups of linked outlets, from the lowest up: equal angle, and fully open centre-lines no more than half
/// the smaller full height apart; crests at one elevation. Fixed for a site, whatever is open.
pub fn level_groups(outlets: &[Outlet]) -> Vec<Vec<usize>> {
    let mut order: Vec<usize> = (0..outlets.len()).collect();
    order.sort_by(|&a, &b| by_place(&outlets[a], &outlets[b]));
    let mut groups: Vec<Vec<usize>> = Vec::new();
    for index in order {
        let links = |group: &Vec<usize>| group.iter().any(|&g| linked(&outlets[g], &outlets[index]));
        let mut joined: Vec<usize> = Vec::new();
        // an outlet can link two groups; they then become one
        groups.retain_mut(|group| {
            let link = links(group);
            if link {
                joined.append(group);
            }
            !link
        });
        joined.push(index);
        joined.sort_by(|&a, &b| by_place(&outlets[a], &outlets[b]));
        groups.push(joined);
    }
    groups.sort_by(|a, b| match (a.first(), b.first()) {
        (Some(&a), Some(&b)) => by_place(&outlets[a], &outlets[b]),
        _ => Ordering::Equal,
    });
    groups
}

fn by_place(a: &Outlet, b: &Outlet) -> Ordering {
    a.centre_m.total_cmp(&b.centre_m).then_with(|| a.name.cmp(&b.name))
}

fn linked(a: &Outlet, b: &Outlet) -> bool {
    let apart = (a.centre_m - b.centre_m).abs();
    match (a.is_crest(), b.is_crest()) {
        (true, true) => apart <= SAME_CREST_M,
        (false, false) => {
            (a.angle_rad - b.angle_rad).abs() < SAME_ANGLE && apart <= 0.5 * a.height_m().min(b.height_m())
        }
        _ => false,
    }
}
