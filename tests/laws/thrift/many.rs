//! A hundred random seasons: thrift is never worse than the best of each day where it was solved.

use gatemix::season::{Choosing, Score};
use gatemix::site::Strategy;
use rand_distr::Distribution as _;
use rand_distr::Uniform;
use rand_pcg::Pcg32;

use super::tiny::{Of, Tiny};

const SEASONS: usize = 100;
/// Of them so many are followed gate by gate; the others are searched by aims.
const FOLLOWED: usize = 88;

fn random(seed: usize) -> Of {
    let mut random = Pcg32::new(seed as u64, 11);
    let mut between = |low: f64, high: f64| Uniform::new(low, high).unwrap().sample(&mut random);
    let cold_c = between(5.0, 9.0);
    Of {
        gates: if seed < FOLLOWED { 3 } else { 2 },
        on_a_well: seed < FOLLOWED,
        days: 6,
        every: 2,
        thermocline_m: between(5.0, 13.0),
        warm_c: between(18.0, 24.0),
        cold_c,
        release_m3s: between(1.0, 4.0),
        early_high_c: between(15.0, 20.0),
        late_high_c: cold_c + between(1.5, 5.0),
        equilibrium_c: between(18.0, 25.0),
    }
}

#[test]
fn law_thrift_is_never_worse_than_day_by_day() {
    let (mut solved, mut unseen, mut worse) = (0, 0, 0);
    for seed in 0..SEASONS {
        let tiny = Tiny::new(random(seed));
        let seen = tiny.skies(0.0);
        let other = tiny.skies(2.0);
        let score = |skies, choosing: Choosing| {
            let run = tiny.run(skies, choosing.clone());
            (Score::of(&tiny.setup(skies, choosing), &run), run)
        };
        let (thrift, run) = score(&seen, Choosing::By(Strategy::Thrift));
        let (daily, _) = score(&seen, Choosing::By(Strategy::Best));
        assert!(!thrift.order(&daily).is_gt(), "{seed}: {thrift:?} is worse than {daily:?}");
        solved += usize::from(thrift.order(&daily).is_lt());
        let (again, _) = score(&other, run.again(&Choosing::By(Strategy::Thrift)));
        let (daily, _) = score(&other, Choosing::By(Strategy::Best));
        unseen += usize::from(again.order(&daily).is_lt());
        worse += usize::from(again.order(&daily).is_gt());
    }
    println!("of {SEASONS} seasons thrift is better on {solved} where it was solved;");
    println!("in weather it had not seen it is better on {unseen} and worse on {worse}");
    assert!(solved > 0 && unseen > 0, "{solved} solved, {unseen} unseen");
}
