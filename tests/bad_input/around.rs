//! The files beside the casts: read by what names them, watched, part of the fingerprint, and passed over by name
//! where they cannot be read.

use std::fs;
use std::path::Path;

use gatemix::files::folder::{Folder, check, stamps};
use gatemix::problem::{Problem, any_refused};
use gatemix::tasks::{Asked, open};
use tempfile::TempDir;

use super::said;

const SITE: &str = "name: Bare
units: {}
utc_offset: \"-08:00\"
place: { altitude: 0 }
pool: { bed: 0, full: 10, table: [[0, 0], [10, 1000]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 } ]
river:
  name: Bare River
  equilibrium: 20
  exchange_w_m2_c: 30
  reaches:
    - name: Upper
      length_km: 10
      width: 20
      depth: 1
      travel_hours: [[10, 5], [20, 3]]
      inflows:
        - { name: Tansy, at_km: 2, flow: 1, temperature: 12, series: streams/tansy.csv }
  points:
    - { name: Mill, at_km: 5, observed: \"mill bridge.csv\" }
";
const CAST: &str =
    "# taken: 2026-07-14T10:30\n# pool: 9\ndepth_m,temperature_C,oxygen_mg_l\n0,20,8\n4,15,8\n8,10,7\n";
const RECORD: &str = "time,temperature_C\n2026-07-01T10:00,10\n2026-07-01T11:00,11\n";

fn folder() -> TempDir {
    let dir = tempfile::tempdir().unwrap();
    let at = |name: &str| dir.path().join(name);
    fs::create_dir_all(at("profiles")).unwrap();
    fs::create_dir_all(at("streams")).unwrap();
    for (name, text) in [
        ("site.yaml", SITE),
        ("profiles/a.csv", CAST),
        ("tailwater.csv", RECORD),
        ("mill bridge.csv", RECORD),
        ("streams/tansy.csv", "time,temperature_C,flow_m3s\n2026-07-01T10:00,9,2\n"),
    ] {
        fs::write(at(name), text).unwrap();
    }
    dir
}

fn named(dir: &TempDir) -> &str {
    dir.path().to_str().unwrap()
}

/// What is said, without the folder.
fn short(problems: &[Problem], dir: &Path) -> Vec<String> {
    said(problems).into_iter().map(|p| p.replace(&format!("{}/", dir.display()), "")).collect()
}

fn context(dir: &TempDir) -> gatemix::tasks::Context {
    let asked = Asked { site: Some(named(dir).to_owned()), ..Asked::default() };
    open(&asked, "2026-07-15T00:00:00Z".parse().unwrap()).unwrap()
}

#[test]
fn scenario_records_are_read_by_the_points_and_streams_that_name_them() {
    let dir = folder();
    let context = context(&dir);
    let points: Vec<&String> = context.conditions.observed.keys().collect();
    assert_eq!(points, ["Mill", "dam"]);
    assert_eq!(context.conditions.streams["Tansy"].flow_m3s.readings().len(), 1);
    assert_eq!((context.said.len(), check(named(&dir)).0.len()), (0, 0), "{:?}", said(&check(named(&dir)).0));
}

#[test]
fn scenario_without_records_there_is_nothing_to_say() {
    let dir = folder();
    for name in ["tailwater.csv", "mill bridge.csv", "streams/tansy.csv"] {
        fs::remove_file(dir.path().join(name)).unwrap();
    }
    let bare = SITE.replace(", observed: \"mill bridge.csv\"", "").replace(", series: streams/tansy.csv", "");
    fs::write(dir.path().join("site.yaml"), bare).unwrap();
    assert_eq!((context(&dir).said.len(), check(named(&dir)).0.len()), (0, 0));
}

#[test]
fn scenario_a_file_that_is_named_and_not_there_is_refused_at_its_place_and_passed_over_by_answers() {
    let dir = folder();
    fs::remove_file(dir.path().join("mill bridge.csv")).unwrap();
    let outside = SITE
        .replace("streams/tansy.csv", "streams/../streams/tansy.csv")
        .replace("  points:\n", "  points:\n    - { name: Lower, at_km: 9 }\n");
    fs::write(dir.path().join("site.yaml"), outside).unwrap();
    let (problems, _) = check(named(&dir));
    let cure = "correct the name, or take it out; a file lies in the folder of site.yaml or below it";
    let words = |weight: &str| {
        [
            format!(
                "site.yaml:21: {weight}: river.points[1].observed: there is no file `mill bridge.csv` in the folder of \
                 the site; {cure}"
            ),
            format!(
                "site.yaml:18: {weight}: river.reaches[0].inflows[0].series: there is no file `streams/../streams/tansy.csv` in the \
                 folder of the site; {cure}"
            ),
        ]
    };
    assert_eq!(short(&problems, dir.path()), words("refused"));
    assert!(any_refused(&problems));
    assert_eq!(short(&context(&dir).said, dir.path()), words("flag"));
}

#[test]
fn scenario_a_record_that_cannot_be_read_is_passed_over_by_name() {
    let dir = folder();
    fs::write(dir.path().join("tailwater.csv"), "time,temperature_C\nnoon,warm\n").unwrap();
    fs::write(dir.path().join("mill bridge.csv"), b"PK\x03\x04\x00\x00").unwrap();
    let context = context(&dir);
    assert!(context.conditions.observed.is_empty() && !context.conditions.streams.is_empty());
    let told = short(&context.said, dir.path());
    assert_eq!(told.len(), 2, "{told:?}");
    assert!(
        told[0].starts_with(
            "tailwater.csv: flag: tailwater.csv cannot be read and is passed over: `noon` is not a date"
        ) && told[0].ends_with("(and 1 more); run `gatemix check` on the site"),
        "{told:?}"
    );
    assert!(told[1].contains("a zip archive"), "{told:?}");
    let all = short(&check(named(&dir)).0, dir.path());
    assert_eq!(all.iter().filter(|p| p.starts_with("tailwater.csv:2: refused:")).count(), 2, "{all:?}");
    // every answer tells it, the list of casts does not
    let flags = |problems: &[Problem]| problems.iter().filter(|p| p.kind == "file-unreadable").count();
    assert_eq!(flags(&context.profile.flags), 2);
    assert_eq!(gatemix::tasks::casts(&context).iter().map(|c| flags(&c.problems)).sum::<usize>(), 0);
    assert_eq!(gatemix::tasks::pool(&context).outlets.len(), 1, "the pool is answered all the same");
}

#[test]
fn law_every_byte_of_a_record_is_in_the_fingerprint_and_watched() {
    let dir = folder();
    let mut prints = vec![context(&dir).fingerprint];
    let mut watched = vec![stamps(named(&dir))];
    assert_eq!(watched[0].len(), 5);
    for name in ["tailwater.csv", "mill bridge.csv", "streams/tansy.csv"] {
        let path = dir.path().join(name);
        let text = fs::read_to_string(&path).unwrap();
        fs::write(
            &path,
            format!("{text}2026-07-01T12:00,12{}\n", if name.starts_with('s') { ",3" } else { "" }),
        )
        .unwrap();
        let print = context(&dir).fingerprint;
        let stamps = stamps(named(&dir));
        assert!(!prints.contains(&print) && !watched.contains(&stamps), "{name}");
        prints.push(print);
        watched.push(stamps);
    }
    // a folder that is read once knows its files as they were
    let folder = Folder::open(named(&dir)).unwrap();
    let before = folder.around().sources.len();
    fs::remove_file(dir.path().join("tailwater.csv")).unwrap();
    assert_eq!((folder.around().sources.len(), before), (3, 3));
}
