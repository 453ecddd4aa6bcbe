//! The demonstration sites: inside the program, and written out.

use std::fs;

use serde_json::Value;

use crate::{Folder, program, run};

#[test]
fn scenario_without_a_terminal_the_screens_say_what_to_do_instead() {
    let folder = Folder::usual();
    for arguments in [&[][..], &["ashlar"], &[folder.named()]] {
        let run = run(arguments);
        let words = run.failed_with(2);
        assert!(words.contains("need a terminal") && words.contains("gatemix mix"), "{words}");
        // nothing steers whatever stands in the place of the terminal
        assert!(!words.contains('\u{1b}'), "{words:?}");
    }
}

#[test]
fn scenario_the_written_demonstration_gives_the_numbers_of_the_one_inside() {
    let dir = tempfile::tempdir().unwrap();
    let folder = dir.path().join("new/place");
    let named = folder.to_str().unwrap();
    let written = run(&["demo", named]);
    assert_eq!((written.code, written.err.as_str()), (Some(0), ""));
    let site = format!("{named}/ashlar");
    assert!(written.out.contains(&site), "{}", written.out);
    for task in ["pool", "mix"] {
        let [mut inside, mut outside] = ["ashlar", &site].map(|site| run(&[task, site, "--json"]).json());
        for answer in [&mut inside, &mut outside] {
            // the only thing that may differ: how the casts are named
            let file = answer["profile"]["file"].take();
            assert!(file.as_str().unwrap().ends_with("ashlar/profiles/2026-07-14.csv"));
            if let Some(before) = answer.pointer_mut("/since/file").map(Value::take) {
                assert!(before.as_str().unwrap().ends_with("ashlar/profiles/2026-06-30.csv"));
            }
        }
        assert_eq!(inside, outside);
    }
    let [inside, outside] = ["ashlar", &site].map(|site| {
        let checked = run(&["check", site]);
        assert_eq!(checked.code, Some(0), "{}", checked.out);
        checked.out.replace(named, "").replace("/ashlar", "ashlar")
    });
    assert_eq!(inside, outside);
    assert_eq!(run(&["demo", named]), written, "the same files again are no conflict");
}

#[test]
fn scenario_demo_leaves_a_differing_file_alone_and_writes_nothing() {
    let dir = tempfile::tempdir().unwrap();
    let mine = dir.path().join("ashlar/profiles/2026-07-14.csv");
    fs::create_dir_all(mine.parent().unwrap()).unwrap();
    fs::write(&mine, "my own cast\n").unwrap();
    let run = run(&["demo", dir.path().to_str().unwrap()]);
    assert!(run.failed_with(1).contains("2026-07-14.csv: refused: a file with other contents is there"));
    assert_eq!(fs::read_to_string(&mine).unwrap(), "my own cast\n");
    assert!(!dir.path().join("ashlar/site.yaml").exists());
    assert_eq!(fs::read_dir(mine.parent().unwrap()).unwrap().count(), 1);
}

#[test]
fn scenario_demo_below_a_file_fails_with_its_name() {
    let dir = tempfile::tempdir().unwrap();
    let file = dir.path().join("file");
    fs::write(&file, "x").unwrap();
    let run = run(&["demo", file.join("sites").to_str().unwrap()]);
    assert!(run.failed_with(1).contains("name a folder you may write to"), "{}", run.err);
    assert_eq!(fs::read_to_string(&file).unwrap(), "x");
}

#[test]
fn scenario_a_folder_on_disk_goes_before_a_demonstration_of_its_name() {
    let dir = tempfile::tempdir().unwrap();
    fs::create_dir(dir.path().join("ashlar")).unwrap();
    let output = program().args(["pool", "ashlar"]).current_dir(dir.path()).output().unwrap();
    assert_eq!(output.status.code(), Some(3));
    assert!(String::from_utf8(output.stderr).unwrap().contains("no site.yaml"));
}

#[test]
fn scenario_a_cast_of_the_demonstration_is_found_by_its_name() {
    let pool = run(&["pool", "ashlar", "--profile", "2025-09-23.csv", "--json"]).json();
    assert_eq!(pool["profile"]["file"], "ashlar/profiles/2025-09-23.csv");
    assert_eq!(pool["profile"]["taken"], "2025-09-23T10:05:00-08:00");
    assert_eq!(pool["on"], "2026-07-14T10:30:00-08:00", "the newest cast's time, whatever cast is looked at");
}
