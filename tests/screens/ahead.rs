//! Invented seasons for the season screen: a pool that falls, a gate that is lost, a target missed late. They answer a
//! question at once, so that what the screen does with answers can be tried without running any.

use std::collections::BTreeMap;
use std::sync::Arc;

use chrono::Days;
use gatemix::mix::limits::Move;
use gatemix::mix::{Asked, Gate, Setting, draw_levels, groups, levels, release};
use gatemix::rank::Criterion;
use gatemix::season::{
    Amount, Balance, Change, Choosing, Decision, Difference, Found, Layers, Needed, Plan, PlanDay, Price,
    Run, SeasonDay, Setup, Skies, Why, outcome,
};
use gatemix::site::Strategy;
use gatemix::tasks::Context;
use gatemix::tasks::season::{CaseNeeded, NeededAnswer, Prices, SeasonAnswer, SeasonRun};
use gatemix::tui::model::{Ahead, Left, Priced, SeasonQuestion};
use gatemix::tui::{Done, Event, Lane, Sent, Work};
use gatemix::withdrawal::CrestForm;

use crate::driver::Driver;

/// Days of the season, and between its decisions.
const DAYS: u64 = 120;
const EVERY: u64 = 7;
/// Release, m3/s.
const RELEASE_M3S: f64 = 30.0;

/// Answers the question about the season, or about the price of mixes, that waits.
pub(crate) fn answer(driver: &mut Driver) {
    answer_with(driver, |_| {});
}

/// The same, a season changed before it is told.
pub(crate) fn answer_with(driver: &mut Driver, change: impl FnOnce(&mut Ahead)) {
    let (generation, work) = driver.question(Lane::Ahead).unwrap();
    let done = match work {
        Work::Season(question) => {
            let mut ahead = invented(*question);
            change(&mut ahead);
            Done::Ahead(Ok(Box::new(ahead)))
        }
        Work::Prices { context, ranking, asked } => {
            let prices = priced(&context, ranking.mixes.len());
            Done::Priced(Ok(Box::new(Priced { context, asked, prices })))
        }
        _ => panic!("the lane is that of the season"),
    };
    driver.send(Event::Sent(Sent::Done(Lane::Ahead, generation, done)));
}

/// Answers the question about the cold water needed on a date that waits: in the middling case too little is left, in
/// the warm one enough, in the cool one nobody knows.
pub(crate) fn answer_left(driver: &mut Driver) {
    let (generation, work) = driver.question(Lane::Needed).unwrap();
    let Work::Needed(question, date) = work else { panic!("the lane is that of what is needed") };
    let context = question.base.changed(&question.changed).map_or_else(|_| question.base.clone(), Arc::new);
    let amount = |usable_m3: f64, days_outside| Amount {
        total_m3: usable_m3,
        usable_m3: Some(usable_m3),
        lost: 0,
        days_outside,
        oxygen_days: 0,
    };
    let case = |(name, least): (&str, Option<Amount>)| CaseNeeded {
        case: name.to_owned(),
        needed: Needed {
            date,
            threshold_c: 12.0,
            made: Some(amount(50e6, 9)),
            found: least
                .map(|least| Found { least, lower: None, remain: Vec::new(), tried: vec![least] })
                .ok_or_else(|| "no outlet is usable".to_owned()),
            not_judged: Vec::new(),
        },
        foresight: false,
    };
    let of = [("middling", Some(amount(62e6, 3))), ("warm", Some(amount(41e6, 0))), ("cool", None)];
    let main = season(&context, "early", "middling", "best");
    let answer = NeededAnswer {
        date,
        threshold_c: 12.0,
        plan: main.plan,
        strategy: "best".to_owned(),
        begins: context.on.date_naive(),
        decide_days: 7,
        cases: of.map(case).to_vec(),
        notes: Vec::new(),
        fingerprint: context.fingerprint.clone(),
    };
    let left = Box::new(Left { question: *question, context, answer });
    driver.send(Event::Sent(Sent::Done(Lane::Needed, generation, Done::Needed(Ok(left)))));
}

/// Prices of so many mixes: the first no sooner or later, each one after it a day later than the one before.
fn priced(context: &Context, mixes: usize) -> Prices {
    let from = context.on.date_naive();
    let price = |day| {
        let against = Difference {
            exhausted: Some(Change { days: day, range: (day, 2 * day) }),
            lasts: [false, false],
            runs_out: [6, 6],
            outside: Some(Change { days: -day, range: (-day, day) }),
        };
        Price { against, than_first: against, casts: 6 }
    };
    Prices {
        plan: "early".to_owned(),
        case: "middling".to_owned(),
        until: from.checked_add_days(Days::new(EVERY)).unwrap(),
        from,
        against_now: true,
        members: 5,
        mixes: (0..).map(price).take(mixes).collect(),
        notes: Vec::new(),
        fingerprint: context.fingerprint.clone(),
    }
}

/// Seasons of two plans and three cases.
fn invented(question: SeasonQuestion) -> Ahead {
    let context = question.base.changed(&question.changed).map(Arc::new);
    let context = context.unwrap_or_else(|_| question.base.clone());
    let asked = &question.asked;
    let strategy = asked.chooses().unwrap_or_else(|| "best".to_owned());
    let file = asked.plan.as_deref().unwrap_or("plans/early.csv");
    let plan = file.trim_start_matches("plans/").trim_end_matches(".csv").to_owned();
    let case = asked.case.clone().unwrap_or_else(|| "middling".to_owned());
    let other = if plan == "early" { "late" } else { "early" };
    let cases = context.site().season.cases.iter().map(|c| c.name.clone()).filter(|name| *name != case);
    let mut main = season(&context, &plan, &case, &strategy);
    main.foresight = strategy == "thrift";
    let others = cases.map(|name| season(&context, &plan, &name, &strategy));
    let others: Vec<SeasonRun> = others.chain([season(&context, other, &case, &strategy)]).collect();
    let begins = context.on.date_naive();
    let answer = SeasonAnswer {
        without: None,
        main,
        others,
        begins,
        decides: begins,
        decide_days: asked.every.as_deref().map_or(7, |days| days.parse().unwrap()),
        order: Criterion::USUAL.to_vec(),
        schedules: context.folder.schedules(),
        every_case: false,
        notes: Vec::new(),
        fingerprint: context.fingerprint.clone(),
    };
    Ahead { question, context, answer }
}

/// A gate opened, or shut.
fn turned(outlet: usize, open: bool) -> Move {
    let (from, to) = if open { (0.0, 1.0) } else { (1.0, 0.0) };
    Move { outlet, from, to, from_m3s: RELEASE_M3S * from, to_m3s: RELEASE_M3S * to }
}

/// A pool that loses its upper water, a little warmer each day.
fn season(context: &Context, plan: &str, case: &str, strategy: &str) -> SeasonRun {
    let site = context.site();
    let begins = context.on.date_naive();
    let dates: Vec<_> = (0..DAYS).map(|i| begins.checked_add_days(Days::new(i)).unwrap()).collect();
    let warmer = match case {
        "warm" => 4.0,
        "cool" => 0.0,
        _ => 2.0,
    };
    let fall = if plan == "early" { 0.6 } else { 0.4 };
    let start = Layers::of_profile(site, &context.profile, 1.0).unwrap();
    let begin = start.volume_m3();
    let mut decisions: Vec<Decision> = Vec::new();
    let days = dates.iter().zip(0..DAYS).map(|(date, i)| {
        let share = i as f64 / DAYS as f64;
        let mut layers = start.clone();
        let mut left = begin * (1.0 - fall * share);
        layers.layers.retain_mut(|layer| {
            layer.temperature_c += warmer * share;
            layer.volume_m3 = layer.volume_m3.min(left);
            left -= layer.volume_m3;
            layer.volume_m3 > 0.0
        });
        let pool_m = layers.pool_m(&site.pool);
        // the upper gate as long as it has water over it, then the lower
        let outlet = usize::from(pool_m < 56.0);
        let gates = vec![Gate { outlet, opening: 1.0, flow_m3s: RELEASE_M3S }];
        let moved = decisions.last().is_none_or(|d| d.asked.direct != gates);
        if moved || i.is_multiple_of(EVERY) {
            let why = if decisions.is_empty() { Why::Begin } else { Why::Due };
            decisions.push(Decision {
                date: *date,
                why,
                asked: Asked { direct: gates.clone(), ..Asked::default() },
                moves: if moved { 2 } else { 0 },
                moved: if moved { vec![turned(1 - outlet, false), turned(outlet, true)] } else { Vec::new() },
                crew_hours: 1.0,
                lead_days: 3.0,
                past: Vec::new(),
                attainable_c: Some([6.0 + 3.0 * share, 18.0]),
            });
        }
        let column = layers.column(site).unwrap();
        let setting = Setting::of(gates.clone());
        let drawn = draw_levels(
            &column,
            &levels(site, &groups(site), &setting, pool_m, 0.5, CrestForm::default()),
            1.0,
        );
        let release = release(&drawn).unwrap();
        SeasonDay {
            date: *date,
            pool_m,
            inflow_m3s: 12.0,
            gates,
            drawn,
            release: Some(release),
            points: None,
            layers,
            balance: Balance::default(),
            overturned: false,
        }
    });
    let days: Vec<SeasonDay> = days.collect();
    let run = Run {
        plan: plan.to_owned(),
        case: case.to_owned(),
        strategy: strategy.to_owned(),
        start: start.clone(),
        days,
        decisions,
        ended: None,
        aims: (strategy == "thrift").then(|| Arc::new(Vec::new())),
    };
    let plan = Arc::new(Plan {
        name: plan.to_owned(),
        file: format!("plans/{plan}.csv"),
        days: dates
            .iter()
            .map(|date| PlanDay {
                date: *date,
                pool_m: None,
                release_m3s: Some(RELEASE_M3S),
                inflow_m3s: 12.0,
                inflow_c: 12.0,
                inflow_mg_l: None,
                inflow_salt_g_per_kg: None,
                inflow_suspended_mg_l: None,
            })
            .collect(),
        outages: Vec::new(),
        notes: Vec::new(),
    });
    let of_case = site.season.cases.iter().find(|c| c.name == case).unwrap().clone();
    let skies = Arc::new(Skies {
        case: of_case,
        year: None,
        days: BTreeMap::new(),
        site: Arc::new(site.clone()),
        conditions: context.conditions.clone(),
        from: "invented".to_owned(),
    });
    let outcome = {
        let setup = Setup {
            start: &context.profile,
            begins,
            decides: begins,
            now: None,
            plan: &plan,
            skies: &skies,
            choosing: Choosing::By(Strategy::Best),
            decide_days: 7,
            order: &gatemix::rank::Criterion::USUAL,
        };
        outcome(&setup, &run)
    };
    SeasonRun { plan, skies, run, outcome, foresight: false, order: Vec::new() }
}
