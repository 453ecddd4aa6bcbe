//! Gate schedules: what is read, what is refused, with its line and what to do.

use gatemix::files::schedule::schedule;
use gatemix::files::site::site;
use gatemix::files::text::{Format, read_from};
use gatemix::mix::Gate;
use gatemix::problem::Problem;
use gatemix::season::Schedule;

use super::said;

const SITE: &str = "name: Bare
units: { length: ft, flow: cfs }
utc_offset: \"-08:00\"
place: { altitude: 0 }
pool: { bed: 0, full: 60, table: [[0, 1.0e6], [60, 1.0e6]] }
outlets:
  - { name: N1, centre: 30, height: 3, width: 3, positions: [0, 50, 100] }
  - { name: N3, centre: 9, height: 3, width: 3 }
  - { name: Leaves, kind: crest, gated: true, centre: 50, width: 6, positions: [ { name: two leaves, crest: 45 }, { name: 3 leaves, crest: 50 } ] }
";
const SOUND: &str = "# what the crew wrote down
date,N1,N3,Leaves
2026-07-14,600,200cfs,
2026-08-01,300@50%,,10m3/s @ two leaves
";

fn read(text: &str) -> (Option<Schedule>, Vec<Problem>) {
    let source = read_from("s.csv", text.as_bytes(), Format::Csv).unwrap();
    schedule(&source, &site(SITE, "site.yaml").site.unwrap())
}

#[test]
fn scenario_a_schedule_tells_what_is_set_from_each_date_on() {
    let (found, problems) = read(SOUND);
    let schedule = found.unwrap_or_else(|| panic!("{:#?}", said(&problems)));
    let cfs = |flow: f64| flow * 0.3048_f64.powi(3);
    assert_eq!(schedule.changes[0].0.to_string(), "2026-07-14");
    let gate = |outlet, opening, flow_m3s| Gate { outlet, opening, flow_m3s };
    assert_eq!(schedule.changes[0].1, [gate(0, 1.0, cfs(600.0)), gate(1, 1.0, cfs(200.0))]);
    assert_eq!(schedule.changes[1].1, [gate(0, 0.5, cfs(300.0)), gate(2, 1.0, 10.0)]);
    assert!(problems.is_empty(), "{:#?}", said(&problems));
}

#[test]
fn scenario_what_is_wrong_with_a_schedule_is_on_its_line_with_its_cure() {
    let cases = [
        ("date,", "day,", "no-header", None, "no line begins with `date`"),
        ("N3,", "N2,", "unknown-outlet", Some(2), "no outlet is named `N2`; use N1, N3, Leaves"),
        ("2026-08-01", "2026-07-01", "plan-order", Some(4), "2026-07-01 comes after 2026-07-14"),
        ("2026-08-01", "2026-07-14", "plan-order", Some(4), "2026-07-14 stands there twice"),
        ("2026-08-01", "1 August", "time", Some(4), "`1 August` is not a date"),
        (",600,", ",much,", "set", Some(3), "N1"),
        (",600,", ",-600,", "set", Some(3), "no gate passes such a flow"),
        (",600,", ",600 C,", "set", Some(3), "unit of temperature"),
        ("@50%", "@40%", "set", Some(4), "the gate has the positions 0, 50, 100"),
        ("200cfs", "200@0", "set", Some(3), "an opening lies above 0"),
        ("200cfs", "200@120%", "set", Some(3), "an opening lies above 0"),
        (",600,200cfs,", ",,0,", "set", Some(3), "nothing is set in this row"),
    ];
    for (from, to, kind, line, words) in cases {
        let text = SOUND.replacen(from, to, 1);
        assert_ne!(text, SOUND, "{from}");
        let (schedule, problems) = read(&text);
        assert!(schedule.is_none(), "{to}");
        let found = problems.iter().find(|p| p.kind == kind);
        let found = found.unwrap_or_else(|| panic!("{to}: {:#?}", said(&problems)));
        assert_eq!(found.place.line, line, "{found}");
        assert!(found.to_string().contains(words) && !found.cure.is_empty(), "{found}");
    }
    let (schedule, problems) = read("date,N1\n");
    assert!(schedule.is_none() && problems.iter().any(|p| p.kind == "plan-short"), "{:#?}", said(&problems));
}
