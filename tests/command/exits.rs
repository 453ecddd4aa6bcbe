//! Exit codes and streams, apart from bad files.

use std::fs::File;
use std::process::{Command, Stdio};

use crate::{CAST, Folder, SITE, program, run, with};

#[test]
fn scenario_a_command_line_that_cannot_be_understood_exits_2() {
    let folder = Folder::usual();
    let site = folder.named();
    for (arguments, phrase) in [
        (vec!["pool", site, "--deepest"], "--deepest"),
        (vec!["pool"], "SITE"),
        (vec!["pool", site, "--units", "metric"], "metric"),
        (vec!["pool", site, "--color", "purple"], "purple"),
        (vec!["mix", site, "--set", "N9=30"], "there are N1, Sluice"),
        (vec!["mix", site, "--set", "n1=30"], "there are N1, Sluice"),
        (vec!["mix", site, "--set", "N1=thirty"], "not a number"),
        (vec!["mix", site, "--set", "N1=1,5"], "comma"),
        (vec!["mix", site, "--set", "N1=nan"], "not a number"),
        (vec!["mix", site, "--set", "N1=1e999"], "too large"),
        (vec!["mix", site, "--set", "N1=30ft"], "unit of length, not of flow"),
        (vec!["mix", site, "--set", "N1=-3"], "negative"),
        (vec!["mix", site, "--set", "N1"], "give a flow"),
        (vec!["mix", site, "--set", "N1="], "not a number"),
        (vec!["mix", site, "--set", "N1=30", "--set", "N1=31"], "set twice"),
        (vec!["pool", site, "--pool", "high"], "not a number"),
        (vec!["pool", site, "--pool", "60cfs"], "unit of flow, not of length"),
        (vec!["pool", site, "--on", "2025-02-30"], "2025-02-30"),
        (vec!["pool", site, "--on", "tomorrow"], "tomorrow"),
        (vec!["pool", site, "--profile", "a.csv", "--taken", "2025-13-01"], "2025-13-01"),
        (vec!["pool", site, "--taken", "2025-07-14"], "name the cast with --profile"),
        (vec!["completions", "cmd"], "cmd"),
    ] {
        let run = run(&arguments);
        assert!(run.failed_with(2).contains(phrase), "{arguments:?}: {}", run.err);
    }
}

#[test]
fn scenario_mix_without_any_setting_asks_for_one() {
    let on_a_well = with(SITE, "outlets:", "wells:\n  - { name: North, conduit: 2 }\noutlets:");
    let on_a_well = with(&on_a_well, "name: N1,", "name: N1, well: North,");
    for (site, now) in [(SITE, ""), (&on_a_well, "now: { N1: 50% }\n")] {
        let site = with(site, "now: { N1: 30, Sluice: 5 }\n", now);
        let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
        assert!(run(&["mix", folder.named()]).failed_with(2).contains("--set GATE=FLOW"));
        assert_eq!(run(&["pool", folder.named()]).code, Some(0));
    }
}

#[test]
fn scenario_strict_exits_4_where_a_target_is_missed_and_answers_all_the_same() {
    let wide =
        with(SITE, "low: 9, preferred: 12, high: 14, oxygen_min: 7", "low: 1, high: 30, oxygen_min: 1");
    let (strict, easy) = (Folder::usual(), Folder::new(&wide, &[("a.csv", CAST.as_bytes())]));
    // too cold; inside, but short of oxygen; and both under rules that any water meets
    let cold = &["--set", "Sluice=30"][..];
    let stale = &["--set", "N1=30", "--set", "Sluice=5"][..];
    for (folder, set, code) in [(&strict, cold, 4), (&strict, stale, 4), (&easy, cold, 0), (&easy, stale, 0)]
    {
        let plain = run(&[&["mix", folder.named()], set].concat());
        let strict = run(&[&["mix", folder.named(), "--strict"], set].concat());
        assert_eq!((plain.code, strict.code), (Some(0), Some(code)), "{set:?}: {}", strict.out);
        assert_eq!((&strict.out, strict.err.as_str()), (&plain.out, ""));
    }
}

#[test]
fn scenario_a_pool_below_a_gate_is_an_ordinary_state() {
    let cast = with(CAST, "# pool: 60", "# pool: 40").replace("45,6.5,4.5\n59,6.2,3.5\n", "");
    let folder = Folder::new(SITE, &[("low.csv", cast.as_bytes())]);
    assert_eq!(run(&["check", folder.named()]).code, Some(0));
    let pool = run(&["pool", folder.named(), "--json"]).json();
    let wet: Vec<(&str, bool)> = pool["outlets"]
        .as_array()
        .unwrap()
        .iter()
        .map(|o| (o["name"].as_str().unwrap(), o["wet"].as_bool().unwrap()))
        .collect();
    assert_eq!(wet, [("N1", false), ("Sluice", true)]);
    let mix = run(&["mix", folder.named(), "--set", "Sluice=10", "--json"]).json();
    assert_eq!(mix["levels"].as_array().unwrap().len(), 1);
}

#[test]
fn scenario_help_version_completions_and_manual() {
    let version = run(&["--version"]);
    assert_eq!((version.code, version.out), (Some(0), format!("gatemix {}\n", env!("CARGO_PKG_VERSION"))));
    for arguments in [
        &["--help"][..],
        &["pool", "--help"],
        &["mix", "-h"],
        &["rank", "--help"],
        &["check", "--help"],
        &["demo", "--help"],
    ] {
        let help = run(arguments);
        assert_eq!((help.code, help.err.as_str()), (Some(0), ""));
        assert!(help.out.contains("Usage: gatemix"), "{}", help.out);
    }
    assert!(run(&["--help"]).out.contains("responsible licensed engineer"));
    for (shell, sign) in
        [("bash", "_gatemix()"), ("zsh", "#compdef gatemix"), ("fish", "complete -c gatemix")]
    {
        let script = run(&["completions", shell]);
        assert_eq!((script.code, script.err.as_str()), (Some(0), ""));
        assert!(script.out.contains(sign) && script.out.contains("strict"), "{shell}");
    }
    let manual = run(&["man"]);
    assert!(manual.code == Some(0) && manual.out.contains(".TH gatemix 1"), "{}", manual.out);
}

/// Whoever reads the answer may stop reading at any time.
#[test]
fn scenario_a_closed_pipe_is_no_error() {
    let folder = Folder::usual();
    let site = folder.named();
    for arguments in [
        &["pool", site][..],
        &["mix", site, "--json"],
        &["rank", site],
        &["check", site],
        &["completions", "bash"],
        &["man"],
        &["--help"],
        &["--version"],
    ] {
        let (reader, writer) = std::io::pipe().unwrap();
        drop(reader);
        let output = Command::new(env!("CARGO_BIN_EXE_gatemix"))
            .args(arguments)
            .stdin(Stdio::null())
            .stdout(writer)
            .stderr(Stdio::piped())
            .spawn()
            .unwrap()
            .wait_with_output()
            .unwrap();
        let err = String::from_utf8(output.stderr).unwrap();
        assert_eq!((output.status.code(), err.as_str()), (Some(0), ""), "{arguments:?}");
    }
}

#[cfg(target_os = "linux")]
#[test]
fn scenario_a_full_disk_is_an_error_and_told() {
    for arguments in [&["pool", "ashlar"][..], &["--help"]] {
        let full = File::options().write(true).open("/dev/full").unwrap();
        let output = Command::new(env!("CARGO_BIN_EXE_gatemix"))
            .args(arguments)
            .stdout(full)
            .stderr(Stdio::piped())
            .spawn()
            .unwrap()
            .wait_with_output()
            .unwrap();
        let err = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(1));
        assert!(err.contains("the answer cannot be written"), "{err}");
    }
}

#[test]
fn scenario_an_argument_that_is_no_text_is_refused() {
    use std::os::unix::ffi::OsStrExt;
    let odd = std::ffi::OsStr::from_bytes(b"\xff\xfe\x1b[2J");
    let output = program().arg("pool").arg(odd).env("CLICOLOR_FORCE", "1").output().unwrap();
    assert_eq!(output.status.code(), Some(2));
    assert!(!output.stderr.contains(&0x1b));
}
