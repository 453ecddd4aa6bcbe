//! Bad files: exit 3, file, line and cure on standard error, nothing on standard output.

use std::fs::{self, File};
use std::io::Write;
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

use serde_json::Value;

use crate::{CAST, Folder, Run, SITE, line_of, run, run_with, with};

/// The line of standard error that refuses a place, and says a phrase.
fn refuses(run: &Run, place: &str, phrase: &str) {
    let err = run.failed_with(3);
    let start = format!("{place}: refused: ");
    let found = err.lines().any(|line| line.contains(&start) && line.contains(phrase));
    assert!(found, "no line has `{start}` and `{phrase}`:\n{err}");
}

/// `check --json` holds a refusal of that kind on that line, with a cure or the accepted words in its text.
fn checked(folder: &Folder, kind: &str, line: Option<usize>) {
    let run = run(&["check", folder.named(), "--json"]);
    assert_eq!(run.code, Some(3), "{}", run.out);
    let problems: Vec<Value> = serde_json::from_str(&run.out).unwrap();
    let found = problems.iter().find(|p| {
        p["kind"] == kind && p["weight"] == "refused" && p["line"].as_u64() == line.map(|l| l as u64)
    });
    let found = found.unwrap_or_else(|| panic!("no {kind} on line {line:?}: {problems:#?}"));
    let cured = [&found["cure"], &found["text"]].map(|v| v.as_str().unwrap().to_owned());
    assert!(
        !cured[0].is_empty()
            || cured[1].contains("accepted")
            || cured[1].contains("write")
            || cured[1].contains("give"),
        "{found:#?}"
    );
}

/// One change to the site: what is written in place of what, the kind it is refused as, a phrase of it.
#[test]
fn scenario_a_site_that_cannot_be_is_refused_with_its_line() {
    let n1 = "min_submergence";
    for (from, to, line, kind, phrase) in [
        ("name: Sluice", "name: N1", "height: 2", "name-twice", "`N1`"),
        ("datum: local", "datum: local\ndatum: other", "datum: other", "duplicate-key", "datum"),
        ("width: 4", "width: 4, width: 5", n1, "duplicate-key", "width"),
        ("bed: 0", "bed: .nan", "bed:", "not-finite", "finite"),
        ("full: 62", "full: .inf", "full:", "not-finite", "finite"),
        ("[40, 5.0e6", "[40, -.inf", "[40", "not-finite", "finite"),
        ("bed: 0", "bed: NaN", "bed:", "quantity", "not a number"),
        ("width: 4", "width: -4", n1, "not-positive", "width"),
        ("height: 3", "height: 0", n1, "not-positive", "height"),
        ("from: 05-01", "from: 02-30", "holding", "date", "02-30"),
        ("to: 09-15", "to: 13-01", "holding", "date", "13-01"),
        ("centre: 45", "centre: 45cfs", n1, "quantity", "unit of flow, not of length"),
        ("max: 80", "max: 80 ft", n1, "quantity", "unit of length, not of flow"),
        ("length: m,", "length: cfs,", "length:", "unit", "unit of flow, not of length"),
        ("centre: 45", "centre: 145", n1, "outside-pool", "outside the pool"),
        ("altitude: 410", "altitude: 4,1", "altitude", "unknown-key", "with a point"),
        ("altitude: 410", "altitude: high", "altitude", "quantity", "not a number"),
        ("altitude: 410", "altitude: \"4,1\"", "altitude", "quantity", "comma"),
        ("name: Test Dam (invented)", "name: 12", "name:", "wrong-type", "a text"),
        ("[20, 2.0e6, 2.0e7]", "[20]", "[20]", "table-row", "row"),
        ("[20, 2.0e6", "[45, 2.0e6", "[40", "table-order", "from the bed upward"),
        ("low: 9", "low: 15", "holding", "target-range", "low"),
        ("now: { N1: 30", "now: { N9: 30", "now:", "unknown-outlet", "`N9`"),
        ("[0, 0, 0]", "[1e305, 0, 0]", "1e305", "table-span", "bed"),
        ("full: 62", "full:", "full:", "missing-key", "blank"),
        ("utc_offset: \"-07:00\"", "utc_offset: \"-7\"", "utc_offset", "offset", "-7"),
    ] {
        let site = with(SITE, from, to);
        let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
        let line = line_of(&site, line);
        refuses(&run(&["pool", folder.named()]), &format!("site.yaml:{line}"), phrase);
        checked(&folder, kind, Some(line));
    }
}

#[test]
fn scenario_a_figure_that_its_unit_makes_infinite_is_refused() {
    let site = with(SITE, "area: m2", "area: km2");
    let site = with(&site, "[20, 2.0e6", "[20, 1e304");
    let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
    let line = line_of(&site, "1e304");
    refuses(&run(&["mix", folder.named()]), &format!("site.yaml:{line}"), "too large");
    checked(&folder, "quantity", Some(line));
}

#[test]
fn scenario_all_unknown_keys_are_told_at_once() {
    let site = with(SITE, "datum: local", "datum: local\nriverr: x\nwatre: 3");
    let site = with(&site, "height: 3", "hieght: 3, colour: red");
    let site = with(&site, "oxygen_min: 7", "oxygen_mni: 7, nonsense: 1");
    let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
    let run = run(&["pool", folder.named()]);
    for (key, cure) in [
        ("riverr", "did you mean river?"),
        ("watre", "did you mean water?"),
        ("hieght", "did you mean height?"),
        ("colour", "allowed here: name, well, kind"),
        ("oxygen_mni", "did you mean oxygen_min?"),
        ("nonsense", "allowed here: name, from, to"),
    ] {
        let place = format!("site.yaml:{}", line_of(&site, key));
        refuses(&run, &place, &format!("unknown key {key}"));
        refuses(&run, &place, cure);
    }
}

#[test]
fn scenario_text_that_is_no_yaml_stands_alone() {
    let torn = &SITE[..SITE.find(", height: 3").unwrap()];
    let tabbed = with(SITE, "  bed: 0", "\tbed: 0");
    for (site, line, kind, phrase) in [
        (torn.to_owned(), torn.lines().count(), "yaml", "cannot be read as YAML"),
        (tabbed.clone(), line_of(&tabbed, "bed: 0"), "yaml-tab", "tab"),
    ] {
        let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
        let run = run(&["pool", folder.named()]);
        refuses(&run, &format!("site.yaml:{line}"), phrase);
        assert_eq!(run.err.lines().count(), 1, "{}", run.err);
        checked(&folder, kind, Some(line));
    }
}

#[test]
fn scenario_a_site_cut_off_between_lines_lacks_its_outlets() {
    let site = &SITE[..SITE.find("outlets:").unwrap()];
    let folder = Folder::new(site, &[("a.csv", CAST.as_bytes())]);
    refuses(&run(&["pool", folder.named()]), "site.yaml:1", "outlets is missing");
    checked(&folder, "missing-key", Some(1));
}

#[test]
fn scenario_a_cast_that_cannot_be_is_refused_with_its_line() {
    let shifted = SITE.replace("bed: 0", "bed: 300").replace("full: 62", "full: 362");
    let shifted =
        shifted.replace("[0, 0, 0]", "[300, 0, 0]").replace("[20, ", "[320, ").replace("[40, ", "[340, ");
    let shifted = shifted.replace("[62, ", "[362, ").replace("centre: 45", "centre: 345");
    let shifted = shifted.replace("centre: 8", "centre: 308");
    let one_point = &CAST[..CAST.find("5,21.8").unwrap()];
    let fahrenheit = CAST.replace("22.0", "71.6").replace("21.8", "71.2").replace("18.0", "64.4");
    let named_elevation = CAST.replace("depth_m", "elevation_m");
    let at_360 = named_elevation.replace("# pool: 60", "# pool: 360");
    for (site, cast, line, kind, phrase) in [
        (SITE, with(CAST, "18.0", "NaN"), Some("9,NaN"), "not-a-number", "not a finite number"),
        (SITE, with(CAST, "18.0", "inf"), Some("9,inf"), "not-a-number", "not a finite number"),
        (SITE, with(CAST, "18.0", "1e999"), Some("9,1e999"), "not-a-number", "not a finite number"),
        (SITE, with(CAST, "18.0", "warm"), Some("9,warm"), "not-a-number", "not a number"),
        (SITE, fahrenheit, Some("0.5,71.6"), "temperature-range", "temperature_F"),
        (SITE, with(CAST, "18.0,8.0", "18.0,-3"), Some("9,18.0,-3"), "negative", "oxygen"),
        (SITE, with(CAST, "18.0,8.0", "18.0,95"), Some("9,18.0,95"), "oxygen-range", "oxygen_percent"),
        (SITE, named_elevation, None, "upside-down", "denser than bed water"),
        (&shifted, at_360, None, "elevations-outside", "depth"),
        (SITE, one_point.to_owned(), None, "too-few", "1 usable sample"),
        (SITE, with(CAST, "# pool: 60\n", ""), None, "no-pool", "does not say the pool elevation"),
        (SITE, with(CAST, "# pool: 60", "# pool: 60cfs"), Some("# pool"), "pool", "not of length"),
        (SITE, with(CAST, "# pool: 60", "# pool: 75"), None, "pool-outside", "outside"),
        (SITE, with(CAST, "2025-07-14", "2025-02-30"), Some("# taken"), "time", "2025-02-30"),
        (SITE, with(CAST, "T10:30", "T25:30"), Some("# taken"), "time", "T25:30"),
        (SITE, with(CAST, "# pool", "# datum: sea level\n# pool"), Some("# datum"), "datum", "sea level"),
        (SITE, with(CAST, "# pool", "# pool: 55\n# pool"), Some("# pool: 60"), "said-twice", "on line 2"),
        (
            SITE,
            with(CAST, "depth_m", "depth"),
            Some("depth,"),
            "no-header",
            "depth or elevation with its unit",
        ),
        (
            SITE,
            with(CAST, "temperature_C", "temp"),
            Some("depth_m,"),
            "no-header",
            "temperature with its unit",
        ),
        (SITE, with(CAST, "oxygen_mg_l", "temperature_F"), Some("depth_m,"), "column-twice", "temperature_F"),
        (SITE, with(CAST, "9,18.0,8.0", "9,18,0,8,0"), Some("9,18,0"), "cell-count", "5 cells"),
    ] {
        let folder = Folder::new(site, &[("a.csv", cast.as_bytes())]);
        let line = line.map(|piece| line_of(&cast, piece));
        let place = line.map_or("a.csv".to_owned(), |line| format!("a.csv:{line}"));
        refuses(&run(&["pool", folder.named()]), &place, phrase);
        refuses(&run(&["mix", folder.named(), "--profile", "a.csv"]), &place, phrase);
        checked(&folder, kind, line);
    }
}

#[test]
fn scenario_every_bad_cell_of_a_cast_is_told() {
    let cast = CAST.replace("21.8", "?").replace("12.5", "x").replace("6.2", "-");
    let folder = Folder::new(SITE, &[("a.csv", cast.as_bytes())]);
    let run = run(&["pool", folder.named()]);
    for piece in ["5,?", "14,x", "59,-"] {
        refuses(&run, &format!("a.csv:{}", line_of(&cast, piece)), "not a number");
    }
}

#[test]
fn scenario_what_is_no_text_file_is_refused_for_what_it_is() {
    let folder = Folder::usual();
    let path = |name: &str| folder.path().join(name).to_str().unwrap().to_owned();
    fs::write(path("empty.csv"), "").unwrap();
    fs::write(path("blank.csv"), " \n\n").unwrap();
    fs::write(path("binary.csv"), [0_u8, 159, 146, 150].repeat(100)).unwrap();
    fs::write(path("book.csv"), b"PK\x03\x04rest of a workbook").unwrap();
    File::create(path("sparse.csv")).unwrap().set_len(200 << 20).unwrap();
    for (name, phrase) in [
        ("absent.csv", "no such file"),
        ("empty.csv", "nothing in it"),
        ("blank.csv", "nothing in it"),
        ("profiles", "a folder, not a file"),
        ("binary.csv", "not text"),
        ("book.csv", "zip archive"),
        ("sparse.csv", "larger than 64 MiB"),
    ] {
        let named = path(name);
        refuses(&run(&["pool", folder.named(), "--profile", &named]), name, phrase);
        if name == "profiles" {
            continue;
        }
        // the same as a site file, whose cap is smaller
        refuses(&run(&["pool", &named]), name, phrase.split(" than").next().unwrap());
    }
    refuses(&run_with(&["mix", folder.named(), "--profile", "-"], ""), "standard input", "nothing in it");
    refuses(&run(&["pool", "no-such-dam"]), "no-such-dam", "no such file");
    let empty = tempfile::tempdir().unwrap();
    refuses(&run(&["pool", empty.path().to_str().unwrap()]), "", "no site.yaml");
}

#[test]
fn scenario_a_site_without_a_cast_says_where_to_put_one() {
    let folder = Folder::new(SITE, &[("notes.txt", b"no cast")]);
    assert!(run(&["pool", folder.named()]).failed_with(3).contains("the site has no cast"));
    let checked = run(&["check", folder.named()]);
    assert_eq!(checked.code, Some(0));
    assert!(checked.out.contains("no cast in `profiles`"), "{}", checked.out);
}

/// A writer that never ends: the program must stop reading by itself.
#[test]
fn scenario_an_endless_pipe_ends_at_the_cap() {
    let folder = Folder::usual();
    let mut child = Command::new(env!("CARGO_BIN_EXE_gatemix"))
        .args(["pool", folder.named(), "--profile", "-"])
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    let mut input = child.stdin.take().unwrap();
    let start = Instant::now();
    let writer = std::thread::spawn(move || {
        let rows = "1,20,8\n".repeat(10_000);
        input.write_all(b"depth_m,temperature_C,oxygen_mg_l\n").unwrap();
        let mut written = 0_usize;
        while input.write_all(rows.as_bytes()).is_ok() {
            written += rows.len();
            assert!(start.elapsed() < Duration::from_mins(1), "still reading after {written} bytes");
        }
        written
    });
    let written = writer.join().unwrap();
    let output = child.wait_with_output().unwrap();
    assert!((63 << 20..66 << 20).contains(&written), "{written}");
    assert_eq!((output.status.code(), output.stdout.len()), (Some(3), 0));
    let err = String::from_utf8(output.stderr).unwrap();
    assert!(err.contains("standard input: refused: ") && err.contains("larger than 64 MiB"), "{err}");
}

#[test]
fn scenario_a_setting_that_the_water_or_the_gate_forbids_is_refused() {
    let folder = Folder::usual();
    let site = folder.named();
    for (arguments, phrase) in [
        (vec!["--set", "N1=81"], "above its capacity"),
        (vec!["--set", "Sluice=1500cfs"], "above its capacity"),
        (vec!["--set", "Sluice=1e300"], "above its capacity"),
        (vec!["--pool", "44", "--set", "N1=20"], "is dry"),
        (vec!["--pool", "75"], "outside"),
        (vec!["--set", "N1=0"], "nothing flows"),
    ] {
        let err = run(&[&["mix", site], &arguments[..]].concat());
        assert!(err.failed_with(3).contains(phrase), "{arguments:?}: {}", err.err);
    }
}
