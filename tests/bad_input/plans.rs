//! Plans of the season: what is read, what is refused, with its line and what to do.

use std::fs;

use gatemix::files::folder::{Folder, ListedPlan, check};
use gatemix::files::plan::plan;
use gatemix::files::site::site;
use gatemix::files::text::{Format, Source, read_from};
use gatemix::problem::{Problem, Weight, any_refused};
use gatemix::season::Plan;
use gatemix::site::Site;

use super::said;

const SITE: &str = "name: Bare
units: { flow: m3/s }
utc_offset: \"-08:00\"
place: { altitude: 0 }
pool: { bed: 0, full: 20, table: [[0, 1.0e6], [20, 1.0e6]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 }, { name: B, centre: 9, height: 1, width: 1 } ]
release: { min: 2, max: 40 }
limits: { max_drawdown_per_day: 0.5 }
";

/// Ten days each: up by nothing, down by 1 m (11.57 m3/s day of 1 km2 and 1 m).
const SOUND: &str = "# name: by the pool
# outage: B, 2026-08-05, 2026-08-09, hoist repair
# outage: A, 2026-09-01, , no end
date,pool_m,inflow_m3s,inflow_temperature_C
2026-08-01,15,10,18
2026-08-11,15,10,20
2026-08-21,14,12,16
";

fn dam() -> Site {
    site(SITE, "site.yaml").site.unwrap()
}

fn source(text: &str) -> Source {
    read_from("plans/p.csv", text.as_bytes(), Format::Csv).unwrap()
}

fn read(text: &str) -> (Option<Plan>, Vec<Problem>) {
    plan(&source(text), &dam())
}

#[test]
fn scenario_a_plan_by_the_pool_is_laid_out_by_days() {
    let (found, problems) = read(SOUND);
    let plan = found.unwrap_or_else(|| panic!("{:#?}", said(&problems)));
    assert_eq!((plan.name.as_str(), plan.file.as_str(), plan.days.len()), ("by the pool", "plans/p.csv", 21));
    assert!((plan.days[4].inflow_c - 18.8).abs() < 1e-12);
    assert_eq!((plan.days[15].pool_m, plan.days[15].release_m3s), (Some(14.5), None));
    assert!((plan.days[20].inflow_m3s - 12.0).abs() < 1e-12);
    let outages: Vec<(usize, bool, &str)> =
        plan.outages.iter().map(|o| (o.outlet, o.to.is_some(), o.reason.as_str())).collect();
    assert_eq!(outages, [(1, true, "hoist repair"), (0, false, "no end")]);
    // what is not told is said
    let kinds: Vec<&str> = problems.iter().map(|p| p.kind).collect();
    assert_eq!(kinds, ["inflow-oxygen", "inflow-solids"]);
    assert!(problems.iter().all(|p| p.weight == Weight::Note) && plan.notes == problems);
    assert_eq!((plan.days[0].inflow_mg_l, plan.days[0].inflow_salt_g_per_kg), (None, None));
}

#[test]
fn scenario_the_error_of_the_plan_is_on_its_line_with_its_cure() {
    let cases = [
        (
            "2026-08-11,15,10,20",
            "2026-07-30,15,10,20",
            "plan-order",
            6,
            "2026-07-30 comes after 2026-08-01 of line 5",
        ),
        (
            "2026-08-11,15,10,20",
            "2026-08-01,15,10,20",
            "plan-order",
            6,
            "2026-08-01 stands on line 5 already",
        ),
        ("2026-08-21,14,", "2026-08-21,21.5,", "outside-pool", 7, "pool 21.50 m lies 1.50 m above the table"),
        ("2026-08-21,14,", "2026-08-21,-1,", "outside-pool", 7, "1.00 m below the bed"),
        (
            "2026-08-21,14,",
            "2026-08-21,8,",
            "plan-drawdown",
            7,
            "0.200 m more than limits.max_drawdown_per_day",
        ),
        ("2026-08-11,15,10,20", "2026-08-11,,10,20", "plan-missing", 6, "tells no pool"),
        ("2026-08-11,15,10,20", "2026-08-11,15,,20", "plan-missing", 6, "tells no inflow"),
        ("2026-08-11,15,10,20", "2026-08-11,15,10,", "plan-missing", 6, "tells no inflow temperature"),
        ("2026-08-11,15,10,20", "2026-08-11,15,ten,20", "not-a-number", 6, "\"ten\" is not a number"),
        ("2026-08-11,15,10,20", "2026-08-11,15,-999,20", "not-a-number", 6, "no cell such as -999"),
        ("2026-08-11,15,10,20", "2026-08-32,15,10,20", "time", 6, "`2026-08-32` is not a date"),
        ("2026-08-11,15,10,20", "2026-08-11,15,-3,20", "plan-range", 6, "no inflow is -3.00 m3/s"),
        (
            "2026-08-11,15,10,20",
            "2026-08-11,15,10,70",
            "plan-range",
            6,
            "inflow of 70.0 C lies outside 0 C to 40 C",
        ),
        (",inflow_m3s,", ",inflow,", "no-column", 4, "no column tells the inflow"),
        (",inflow_temperature_C", ",inflow_temperature", "no-column", 4, "no column tells the temperature"),
        (",pool_m,", ",pool,", "no-column", 4, "no column tells the pool or the release"),
        (",inflow_m3s,", ",pool_ft,", "column-twice", 4, "both pool_m and pool_ft are given"),
        ("# outage: B,", "# outage: C,", "unknown-outlet", 2, "no outlet is named `C`; use one of A, B"),
        ("2026-08-05,", "August,", "day", 2, "`August` is not a date"),
        ("2026-08-09,", "2026-08-01,", "day-order", 2, "ends before it begins"),
        ("# outage: A, 2026-09-01, , no end", "# outage: B, 2026-08-05", "listed-twice", 3, "already listed"),
        (
            "# outage: A, 2026-09-01, , no end",
            "# name: another",
            "said-twice",
            3,
            "`# name` says another thing",
        ),
        ("date,", "day,", "no-header", 0, "no line names a date"),
        ("2026-08-21", "2036-08-21", "plan-long", 0, "1100 days are the most"),
    ];
    for (from, to, kind, line, words) in cases {
        let text = SOUND.replacen(from, to, 1);
        assert_ne!(text, SOUND, "{from}");
        let (plan, problems) = read(&text);
        assert!(plan.is_none(), "{to}");
        let found = problems.iter().find(|p| p.kind == kind);
        let found = found.unwrap_or_else(|| panic!("{kind}: {:#?}", said(&problems)));
        assert_eq!(found.weight, Weight::Refused);
        assert_eq!(found.place.line.unwrap_or(0), line, "{found}");
        assert_eq!(found.place.file.as_deref(), Some("plans/p.csv"));
        assert!(found.to_string().contains(words) && !found.cure.is_empty(), "{found}");
    }
}

#[test]
fn scenario_a_volume_that_cannot_follow_names_both_rows_and_by_how_much() {
    // 1 km2: 1 m in 10 days is 1.157 m3/s
    let cases = [
        ("2026-08-21,14,12", "2026-08-21,14,500", "240.66 m3/s above release.max 40.00 m3/s", "higher"),
        ("2026-08-21,14,12", "2026-08-21,18.5,1", "1.00 m3/s below release.min 2.00 m3/s", "lower"),
        ("2026-08-21,14,12", "2026-08-21,20,0", "the inflow cannot fill the pool so far", "lower"),
    ];
    for (from, to, words, cure) in cases {
        let (_, problems) = read(&SOUND.replacen(from, to, 1));
        let found: Vec<&Problem> = problems.iter().filter(|p| p.kind == "plan-volume").collect();
        let [found] = found.as_slice() else { panic!("{:#?}", said(&problems)) };
        assert_eq!(found.place.line, Some(7));
        let text = found.to_string();
        assert!(
            text.contains("from 2026-08-11 (line 6) to 2026-08-21 the volume asks for a mean release of"),
            "{text}"
        );
        assert!(text.contains(words) && text.contains(cure), "{text}");
    }
}

#[test]
fn scenario_a_plan_by_the_release_holds_it_and_says_where_its_pool_does_not_follow() {
    let text = "date;release_m3s;pool_m;inflow_m3s;inflow_temperature_F;inflow_oxygen_percent;inflow_solids_mg_l;inflow_suspended_mg_l
2026-08-01;10;15;10;64,4;90;100;5
2026-08-11;21,574074;14;10;64,4;90;100;
2026-08-21;10;15;10;64,4;90;100;25
";
    let (found, problems) = read(text);
    let plan = found.unwrap_or_else(|| panic!("{:#?}", said(&problems)));
    let release = |i: usize| plan.days[i].release_m3s.unwrap();
    assert_eq!((release(0), release(9), release(20)), (10.0, 10.0, 10.0));
    assert!((release(10) - 21.574074).abs() < 1e-12 && (release(19) - 21.574074).abs() < 1e-12);
    assert!(plan.days.iter().all(|day| day.pool_m.is_none()));
    let day = plan.days[10];
    assert!((day.inflow_c - 18.0).abs() < 1e-12 && day.inflow_suspended_mg_l == Some(15.0));
    // 90 % of 9.467 mg/L at sea level, 0.24 % less at the height of the full pool
    assert!((day.inflow_mg_l.unwrap() - 0.9 * 9.467 * 0.9976).abs() < 0.002, "{day:?}");
    assert!((day.inflow_salt_g_per_kg.unwrap() - 0.1).abs() < 1e-3);
    // a day of 11.574 m3/s more over 1 km2 is 1 m: one before the second row, nine after it
    let [flag] = &problems.iter().filter(|p| p.weight == Weight::Flag).collect::<Vec<_>>()[..] else {
        panic!("{:#?}", said(&problems))
    };
    assert_eq!((flag.kind, flag.place.line), ("plan-follows", Some(4)));
    assert!(
        flag.to_string().contains(
            "from 2026-08-11 (line 3) to 2026-08-21 inflow and release bring the pool to 5.00 m, not to 15.00 m: \
             10,000,000 m3 less than the plan says; the release is used"
        ),
        "{flag}"
    );
    for (to, kind, words) in [
        ("41", "plan-release", "the release is 41.00 m3/s, 1.00 m3/s above release.max 40.00 m3/s"),
        ("1", "plan-release", "1.00 m3/s below release.min"),
        ("-1", "plan-range", "no release is -1.00 m3/s"),
        ("", "plan-missing", "tells no release"),
    ] {
        let (plan, problems) = read(&text.replacen("21,574074", to, 1));
        assert!(plan.is_none(), "{to}");
        let found =
            problems.iter().find(|p| p.kind == kind).unwrap_or_else(|| panic!("{:#?}", said(&problems)));
        assert!(found.place.line == Some(3) && found.to_string().contains(words), "{found}");
    }
}

/// The one note or flag of a kind.
fn only(text: &str, kind: &str) -> Problem {
    let (plan, problems) = read(text);
    assert!(plan.is_some(), "{:#?}", said(&problems));
    let found: Vec<&Problem> = problems.iter().filter(|p| p.kind == kind).collect();
    let [found] = found.as_slice() else { panic!("{kind}: {:#?}", said(&problems)) };
    Problem::clone(found)
}

#[test]
fn scenario_a_line_that_was_meant_for_an_outage_is_flagged() {
    for (to, words) in
        [("# outages: B,", "`# outages:` is not read"), ("# Outtage: B,", "`# outtage:` is not read")]
    {
        let flag = only(&SOUND.replacen("# outage: B,", to, 1), "plan-line");
        assert_eq!((flag.weight, flag.place.line), (Weight::Flag, Some(2)));
        assert!(flag.words.contains(words) && flag.cure.contains("# outage: N2"), "{flag}");
    }
    let (_, problems) = read(&SOUND.replacen("# name", "# out of the drawer: 1\n# name", 1));
    assert!(!problems.iter().any(|p| p.weight == Weight::Flag), "{:#?}", said(&problems));
}

#[test]
fn scenario_what_some_rows_tell_of_the_inflow_is_said_to_hold_for_the_others() {
    let text = "date,pool_m,inflow_m3s,inflow_temperature_C,inflow_oxygen_mg_l,inflow_suspended_mg_l
2026-08-01,15,10,18,9,
2026-08-11,15,10,20,,4
2026-08-21,14,12,16,8,4
";
    let (_, problems) = read(text);
    let notes: Vec<&str> = problems.iter().map(|p| p.words.as_str()).collect();
    assert_eq!(
        notes,
        [
            "no dissolved solids of the inflow are given: it enters with those of the surface of the pool",
            "oxygen of the inflow: given on 2 of 3 rows, on straight lines between them, the nearest held before and \
             after",
            "suspended solids of the inflow: given on 2 of 3 rows, on straight lines between them, the nearest held \
             before and after",
        ]
    );
    let neither = only(SOUND, "inflow-solids");
    assert!(neither.words.starts_with("no dissolved or suspended solids"), "{neither}");
}

#[test]
fn scenario_a_pool_above_full_is_flagged_once_with_the_number_of_its_rows() {
    let dam = site(&SITE.replace("full: 20", "full: 14.5"), "site.yaml").site.unwrap();
    let flags = |text: &str| {
        let (plan, problems) = plan(&source(text), &dam);
        assert!(plan.is_some(), "{:#?}", said(&problems));
        problems.into_iter().filter(|p| p.weight == Weight::Flag).collect::<Vec<_>>()
    };
    let found = flags(SOUND);
    assert_eq!((found.len(), found[0].kind, found[0].place.line), (1, "plan-above-full", Some(5)));
    assert_eq!(
        found[0].to_string(),
        "plans/p.csv:5: flag: pool 15.00 m lies above full pool 14.50 m, as on 1 further rows; correct it where no \
         surcharge is meant"
    );
    let one = flags(&SOUND.replace("2026-08-11,15,", "2026-08-11,14.2,"));
    assert!(one[0].to_string().contains("full pool 14.50 m; correct"), "{}", one[0]);
}

#[test]
fn scenario_plans_of_one_name_are_told_apart_by_their_files() {
    let dir = tempfile::tempdir().unwrap();
    let at = |name: &str| dir.path().join(name);
    for below in ["plans", "schedules"] {
        fs::create_dir(at(below)).unwrap();
    }
    fs::write(at("site.yaml"), SITE).unwrap();
    for name in ["1-usual.csv", "2-low.csv", "by the pool.csv"] {
        fs::write(at("plans").join(name), SOUND).unwrap();
    }
    let folder = Folder::open(dir.path().to_str().unwrap()).unwrap();
    let names: Vec<&str> = folder.plans().iter().map(|p| p.plan.as_ref().unwrap().name.as_str()).collect();
    assert_eq!(names, ["by the pool", "2-low", "by the pool.csv"]);
    let flags = |listed: &ListedPlan| {
        let flags = listed.problems.iter().filter(|p| p.weight == Weight::Flag).cloned();
        flags.collect::<Vec<Problem>>()
    };
    let [first, second, _] = folder.plans() else { panic!() };
    assert!(flags(first).is_empty());
    let [flag] = &flags(second)[..] else { panic!("{:#?}", said(&second.problems)) };
    assert_eq!(
        (flag.kind, flag.place.line, flag.place.file.as_ref()),
        ("name-twice", Some(1), Some(&second.file))
    );
    assert!(flag.words.starts_with("the name `by the pool` is already that of"), "{flag}");
    assert!(flag.words.ends_with("1-usual.csv, so this plan is called `2-low`"), "{flag}");
    assert!(second.plan.as_ref().unwrap().notes.contains(flag), "told with the season too");
    let elsewhere = tempfile::tempdir().unwrap();
    let path = elsewhere.path().join("third.csv");
    fs::write(&path, SOUND).unwrap();
    let third = folder.plan(path.to_str().unwrap()).unwrap();
    assert_eq!(third.plan.unwrap().name, "third");

    // a schedule that fits one of the plans has nothing said of it
    fs::write(at("schedules/fits.csv"), "date,A\n2026-08-10,10\n2027-01-01,12\n").unwrap();
    assert!(folder.schedules_said().is_empty(), "{:#?}", said(&folder.schedules_said()));
    fs::write(at("schedules/early.csv"), "date,A\n2025-08-10,10\n").unwrap();
    fs::write(at("schedules/wrong.csv"), "date,A\n2026-08-10,ten\n").unwrap();
    let of = |problems: &[Problem]| problems.iter().map(|p| (p.kind, p.weight)).collect::<Vec<_>>();
    let said = of(&folder.schedules_said());
    assert_eq!(said, [("schedule-days", Weight::Flag), ("set", Weight::Refused)]);
    let checked = of(&check(dir.path().to_str().unwrap()).0);
    assert!(said.iter().all(|one| checked.contains(one)), "told by check: {checked:?}");
}

#[test]
fn scenario_all_that_is_wrong_is_told_at_once() {
    let text = "# outage: C, 2026-08-05
date,pool_m,inflow_m3s,inflow_temperature_C
2026-08-01,15,10,18
2026-08-11,25,10,x
2026-08-05,14,,16
2026-08-21,14,,16
";
    let (_, problems) = read(text);
    let kinds: Vec<(&str, Option<usize>)> =
        problems.iter().filter(|p| p.weight == Weight::Refused).map(|p| (p.kind, p.place.line)).collect();
    assert_eq!(
        kinds,
        [
            ("unknown-outlet", Some(1)),
            ("not-a-number", Some(4)),
            ("outside-pool", Some(4)),
            ("plan-missing", Some(5)),
            ("plan-order", Some(5)),
            ("plan-missing", Some(6)),
        ]
    );
    let (_, problems) = read("date,pool_m,inflow_m3s,inflow_temperature_C\n2026-08-01,15,10,18\n");
    assert!(any_refused(&problems) && problems.iter().any(|p| p.kind == "plan-short"));
}

#[test]
fn scenario_an_inflow_far_off_the_rows_beside_it_is_asked_about() {
    let rows = |flows: [f64; 5]| {
        let dates = ["08-01", "08-11", "08-21", "08-31", "09-10"];
        let rows = dates.iter().zip(flows).map(|(date, flow)| format!("2026-{date},10,{flow},18\n"));
        "date,release_m3s,inflow_m3s,inflow_temperature_C\n".to_owned() + &rows.collect::<String>()
    };
    let flags = |flows| {
        let (plan, problems) = read(&rows(flows));
        assert!(plan.is_some(), "asked about, not refused");
        let flags = problems.into_iter().filter(|p| p.kind == "plan-spike");
        flags.map(|p| (p.place.line.unwrap(), p.to_string())).collect::<Vec<_>>()
    };
    let lines = |flows| flags(flows).into_iter().map(|flag| flag.0).collect::<Vec<_>>();
    let slipped = flags([7.2, 5.6, 48.0, 4.6, 4.7]);
    assert_eq!(slipped.len(), 1);
    assert_eq!(
        slipped[0].1,
        "plans/p.csv:4: flag: inflow 48.00 m3/s stands far off that of the rows beside it, 5.60 m3/s and 4.60 m3/s; \
         correct it where a figure slipped; a flood of a few days needs rows for its rise and fall"
    );
    assert_eq!(lines([72.0, 5.6, 4.8, 4.6, 4.7]), [2]);
    assert_eq!(lines([7.2, 5.6, 4.8, 4.6, 0.47]), [6]);
    assert_eq!(lines([7.2, 5.6, 0.48, 4.6, 4.7]), [4]);
    // a river that falls through the summer, and one that dries up
    assert_eq!(lines([40.0, 12.0, 4.0, 1.5, 0.5]), Vec::<usize>::new());
    assert_eq!(lines([5.0, 2.0, 0.0, 0.0, 4.0]), Vec::<usize>::new());
    assert_eq!(lines([5.0, 5.0, 24.9, 5.0, 5.0]), Vec::<usize>::new());
}

#[test]
fn scenario_a_plan_by_the_release_that_fills_the_pool_above_full_is_flagged() {
    let dam = dam();
    // 1 km2: 10 m3/s more in than out are 0.864 m a day
    let text = "date,release_m3s,inflow_m3s,inflow_temperature_C\n2026-08-01,5,15,18\n2026-08-11,5,15,18\n";
    let plan = plan(&source(text), &dam).0.unwrap();
    let day = |text: &str| text.parse().unwrap();
    let flag = |from: &str, pool_m: f64| plan.above_full(&dam, day(from), pool_m).map(|p| p.to_string());
    assert_eq!(flag("2026-08-01", 10.0), None, "eleven days are 9.504 m");
    let told = flag("2026-08-01", 15.0).unwrap();
    assert!(told.starts_with("plans/p.csv: flag: from the pool of 2026-08-01, 15.00 m, its flows"), "{told}");
    assert!(told.contains("above full 20.00 m on 2026-08-06, with 4,504,000 m3 too much at most"), "{told}");
    // ten days before its first row hold its first flows; from its middle on only what is left counts
    assert!(flag("2026-07-22", 10.0).unwrap().contains("on 2026-08-02"));
    assert_eq!(flag("2026-08-08", 15.0), None);
}
