//! From a point back to the dam, and down again.

use gatemix::river::{
    Conditions, Figure, Floor, MOST_OXYGEN_MG_L, RELEASES_C, Wanted, course, least_oxygen, window,
};
use proptest::prelude::*;

use crate::columns::config;

use super::{GIVEN, WEATHER, day, hourly, long, part};

proptest! {
    #![proptest_config(config(24))]

    #[test]
    fn law_a_window_put_forward_lands_on_its_range(
        low in 9.0..20.0_f64, width in 0.2..4.0_f64, flow in 10.0..70.0_f64, weather: bool, blocks: bool, which in 0..3_usize,
        point in 0..2_usize
    ) {
        let (site, conditions) =
            if weather { (long(WEATHER), hourly(0.8)) } else { (long(GIVEN), Conditions::default()) };
        let flows = if blocks { vec![(6.0, 2.0 * flow), (18.0, flow)] } else { vec![(24.0, flow)] };
        let of = [Figure::Mean, Figure::Greatest, Figure::Least][which];
        let wanted = Wanted { low_c: Some(low), high_c: Some(low + width), of };
        let found = window(&site, &conditions, day(), &flows, point, wanted).unwrap();
        let forward = |c: f64| {
            let parts: Vec<_> = flows.iter().map(|f| part(f.0, f.1, c, 8.0)).collect();
            let f = course(&site, &conditions, day(), &parts).unwrap().points[point].figures;
            match of {
                Figure::Mean => f.mean_c,
                Figure::Greatest => f.range_c.map_or(f.mean_c, |r| r.0),
                Figure::Least => f.range_c.map_or(f.mean_c, |r| r.1),
            }
        };
        let (coldest, warmest) = (forward(RELEASES_C.0), forward(RELEASES_C.1));
        prop_assert!(!found.step, "{found:?}");
        prop_assert_eq!(found.reachable, coldest <= low + width && warmest >= low);
        for (end, at) in [(found.low_c, low), (found.high_c, low + width)] {
            if let Some(c) = end {
                prop_assert!((forward(c) - at).abs() < 0.01, "{} for {}", forward(c), at);
            }
        }
        // an end that is not told is not needed
        if found.reachable && found.low_c.is_none() {
            prop_assert!(coldest >= low);
        }
        if found.reachable && found.high_c.is_none() {
            prop_assert!(warmest <= low + width);
        }
    }

    #[test]
    fn law_the_least_oxygen_put_forward_lands_on_its_floor(
        floor in 3.0..9.0_f64, release_c in 5.0..22.0_f64, flow in 10.0..70.0_f64, share: bool, mean: bool
    ) {
        let (site, conditions) = (long(WEATHER), hourly(0.8));
        let wanted = if share { floor / 10.0 } else { floor };
        let kind = match (share, mean) {
            (false, false) => Floor::Least(wanted),
            (false, true) => Floor::Mean(wanted),
            (true, false) => Floor::LeastShare(wanted),
            (true, true) => Floor::MeanShare(wanted),
        };
        let found = least_oxygen(&site, &conditions, day(), &[(24.0, flow)], (1, release_c), kind).unwrap();
        let forward = |oxygen: f64| {
            let course = course(&site, &conditions, day(), &[part(24.0, flow, release_c, oxygen)]).unwrap();
            let f = course.points[1].figures;
            match kind {
                Floor::Least(_) => f.oxygen_min_mg_l.unwrap(),
                Floor::Mean(_) => f.oxygen_mean_mg_l.unwrap(),
                Floor::LeastShare(_) => f.oxygen_share.unwrap().0,
                Floor::MeanShare(_) => f.oxygen_share.unwrap().1,
            }
        };
        match found.least_mg_l {
            Some(0.0) => prop_assert!(forward(0.0) >= wanted),
            Some(oxygen) => prop_assert!((forward(oxygen) - wanted).abs() < 0.005),
            None => prop_assert!(forward(MOST_OXYGEN_MG_L) < wanted),
        }
    }
}

#[test]
fn scenario_a_range_out_of_reach_is_an_answer() {
    let site = long(GIVEN);
    let ask = |low_c, high_c| {
        window(
            &site,
            &Conditions::default(),
            day(),
            &[(24.0, 10.0)],
            1,
            Wanted { low_c, high_c, of: Figure::Mean },
        )
        .unwrap()
    };
    // after a day on the way no release is so cold, and none so warm
    let cold = ask(Some(2.0), Some(5.0));
    assert!(!cold.reachable && cold.low_c.is_none() && cold.high_c.is_none());
    assert!(!ask(Some(34.0), None).reachable);
    // any release is warm enough for 2 C, so no coldest one is told
    let warm = ask(Some(2.0), Some(18.0));
    assert!(warm.reachable && warm.low_c.is_none() && warm.high_c.is_some());
    assert_eq!(
        window(
            &site,
            &Conditions::default(),
            day(),
            &[(24.0, 10.0)],
            9,
            Wanted { low_c: None, high_c: Some(9.0), of: Figure::Mean }
        ),
        None
    );
}
