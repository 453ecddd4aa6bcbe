use std::fs::{self, File};
use std::os::unix::fs::symlink;
use std::path::Path;
use std::time::{Duration, SystemTime};

use gatemix::files::folder::{sites_in, stamps};

fn site(folder: &Path) {
    fs::create_dir_all(folder.join("profiles")).unwrap();
    fs::write(folder.join("site.yaml"), "name: X\n").unwrap();
}

fn names(folder: &Path) -> Vec<String> {
    sites_in(folder).into_iter().map(|found| found.name).collect()
}

#[test]
fn scenario_a_folder_of_sites_lists_them_by_name_and_nothing_else() {
    let dir = tempfile::tempdir().unwrap();
    let at = |name: &str| dir.path().join(name);
    assert_eq!(names(dir.path()), [""; 0], "an empty folder");
    for name in ["willow", "Alder", "two words", ".hidden", "deep/er"] {
        site(&at(name));
    }
    fs::create_dir(at("plain")).unwrap();
    fs::write(at("site.txt"), "no site").unwrap();
    fs::create_dir_all(at("odd/site.yaml")).unwrap();
    symlink(at("deep/er"), at("linked")).unwrap();
    symlink(at("gone"), at("broken")).unwrap();
    assert_eq!(names(dir.path()), ["Alder", "linked", "two words", "willow"]);
    let found = sites_in(dir.path());
    assert_eq!(found[1].path, at("linked"));
    assert!(found.iter().all(|f| f.path.join("site.yaml").is_file()));
    assert_eq!(names(&at("deep")), ["er"]);

    site(dir.path());
    assert_eq!(names(dir.path()), [""; 0], "a site itself");
    assert_eq!(names(&at("site.yaml")), [""; 0], "a file");
    assert_eq!(names(&at("nowhere")), [""; 0]);
}

/// Sets the time a file was written, well apart from now.
fn written(path: &Path, seconds_ago: u64) {
    let file = File::options().write(true).open(path).unwrap();
    file.set_modified(SystemTime::now() - Duration::from_secs(seconds_ago)).unwrap();
}

#[test]
fn scenario_stamps_differ_with_every_change_an_answer_can_come_from_and_no_other() {
    let dir = tempfile::tempdir().unwrap();
    let at = |name: &str| dir.path().join(name);
    site(dir.path());
    fs::write(at("profiles/b.csv"), "depth_m\n").unwrap();
    let named = dir.path().to_str().unwrap();
    let first = stamps(named);
    let files: Vec<_> = first.iter().map(|s| (s.0.clone(), s.2)).collect();
    assert_eq!(files, [(at("site.yaml"), 8), (at("profiles/b.csv"), 8)]);
    assert_eq!(stamps(at("site.yaml").to_str().unwrap()), first, "named by its site file");

    fs::write(at("profiles/readme.txt"), "no cast").unwrap();
    fs::write(at("notes.csv"), "no cast").unwrap();
    assert_eq!(stamps(named), first);

    let mut seen = vec![first];
    let mut differs = |what: &str| {
        let now = stamps(named);
        assert_eq!(now, stamps(named), "{what}: the same files twice");
        assert!(!seen.contains(&now), "{what}");
        seen.push(now);
    };
    fs::write(at("profiles/A.CSV"), "depth_ft\n").unwrap();
    differs("a cast came");
    written(&at("profiles/A.CSV"), 60);
    differs("a cast of the same length was written at another time");
    for below in ["plans", "schedules"] {
        fs::create_dir(at(below)).unwrap();
        fs::write(at(below).join("a.csv"), "date\n").unwrap();
        differs("a plan or a gate schedule came");
    }
    fs::write(at("site.yaml"), "name: [broken\n").unwrap();
    differs("the site file was broken");
    fs::remove_file(at("profiles/b.csv")).unwrap();
    differs("a cast went");
    fs::rename(at("profiles/A.CSV"), at("profiles/c.csv")).unwrap();
    differs("a cast has another name");
    fs::remove_file(at("site.yaml")).unwrap();
    differs("the site file went");
    fs::remove_dir_all(at("profiles")).unwrap();
    differs("all casts went");
    for below in ["plans", "schedules"] {
        fs::remove_dir_all(at(below)).unwrap();
        differs("the plans or the gate schedules went");
    }
    assert_eq!(stamps(named), []);
}

#[test]
fn scenario_a_demonstration_in_memory_and_what_is_not_there_have_no_stamps() {
    assert_eq!(stamps("ashlar"), []);
    assert_eq!(stamps("no-such-place"), []);
}
