use std::fs;
use std::os::unix::fs::PermissionsExt;

use gatemix::files::settings::{Settings, load, load_from, path, save, save_to};
use gatemix::problem::Weight;

use crate::said;

fn chosen() -> Settings {
    Settings {
        units: Some("us".into()),
        symbols: Some("ascii".into()),
        theme: Some("dark".into()),
        mouse: Some(false),
    }
}

#[test]
fn scenario_no_settings_file_is_the_usual_without_a_word() {
    let dir = tempfile::tempdir().unwrap();
    for name in ["settings.yaml", "no/such/folder/settings.yaml"] {
        assert_eq!(load_from(&dir.path().join(name)), (Settings::default(), Vec::new()));
    }
}

#[test]
fn law_settings_come_back_as_they_were_saved() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("new/gatemix/settings.yaml");
    let odd = Settings { theme: Some("no: [#1] 'x'\n\"true".into()), units: Some("true".into()), ..chosen() };
    let some = Settings { mouse: Some(true), ..Settings::default() };
    // saved over one another, and the last one holds no choice at all
    for settings in [chosen(), odd, some, Settings::default()] {
        save_to(&path, &settings).unwrap();
        assert_eq!(load_from(&path), (settings, Vec::new()));
    }
    assert_eq!(fs::read_dir(path.parent().unwrap()).unwrap().count(), 1, "nothing is left beside it");
}

#[test]
fn scenario_a_wrong_key_or_value_costs_only_itself_and_is_flagged_with_its_line() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("settings.yaml");
    let text = "units: us\n# mine\nsymbol: ascii\ntheme: 3\nmouse: perhaps\n";
    fs::write(&path, text).unwrap();
    let (settings, problems) = load_from(&path);
    assert_eq!(settings, Settings { units: Some("us".into()), ..Settings::default() });
    let file = path.display();
    let mut lines = said(&problems);
    lines.sort();
    assert_eq!(
        lines,
        [
            format!("{file}:3: flag: symbol: unknown key symbol; did you mean symbols?"),
            format!("{file}:4: flag: theme: theme must be a text, found the number 3; put it in quotes"),
            format!(
                "{file}:5: flag: mouse: mouse must be true or false, found the text \"perhaps\"; write true or false, without quotes"
            ),
        ]
    );
    assert_eq!(fs::read_to_string(&path).unwrap(), text, "reading leaves it as it is");
    save_to(&path, &chosen()).unwrap();
    assert_eq!(load_from(&path), (chosen(), Vec::new()), "a change of settings puts a sound file there");
}

#[test]
fn scenario_a_broken_settings_file_is_one_flag_and_the_usual() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("settings.yaml");
    let broken: [(&[u8], &str); 6] = [
        (b"units: us\ntheme: [dark\n", "yaml"),
        (b"units: us\n\ttheme: dark\n", "yaml-tab"),
        (b"- us\n- dark\n", "wrong-type"),
        (b"", "empty"),
        (b"PK\x03\x04 and so on", "not-text"),
        (b"units: us\n---\nunits: si\n", "yaml-documents"),
    ];
    for (bytes, kind) in broken {
        fs::write(&path, bytes).unwrap();
        let (settings, problems) = load_from(&path);
        assert_eq!(settings, Settings::default());
        let kinds: Vec<_> = problems.iter().map(|p| (p.weight, p.kind)).collect();
        assert_eq!(kinds, [(Weight::Flag, kind)]);
        assert_eq!(problems[0].place.file.as_deref(), path.to_str());
        assert_eq!(fs::read(&path).unwrap(), bytes);
        let saved = save_to(&path, &chosen());
        if kind == "empty" {
            saved.unwrap();
            continue;
        }
        let problem = saved.unwrap_err();
        assert_eq!((problem.kind, problem.place.file.as_deref()), ("cannot-write", path.to_str()));
        assert!(problem.words.contains("cannot be written over"), "{}", problem.words);
        assert_eq!(fs::read(&path).unwrap(), bytes, "what cannot be read is the user's");
    }
    fs::remove_file(&path).unwrap();
    fs::create_dir(&path).unwrap();
    assert_eq!(load_from(&path).1[0].kind, "folder");
    assert_eq!(save_to(&path, &chosen()).unwrap_err().kind, "cannot-write");
}

#[test]
fn scenario_settings_that_cannot_be_saved_leave_the_old_ones() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("settings.yaml");
    save_to(&path, &chosen()).unwrap();
    fs::set_permissions(&path, fs::Permissions::from_mode(0o444)).unwrap();
    assert_eq!(save_to(&path, &Settings::default()).unwrap_err().kind, "cannot-write");
    assert_eq!(load_from(&path).0, chosen());
    let below_a_file = path.join("gatemix/settings.yaml");
    assert_eq!(save_to(&below_a_file, &chosen()).unwrap_err().kind, "cannot-write");
}

/// Run by itself this runs itself again in another environment: that of a process cannot be changed safely.
#[test]
fn scenario_the_users_settings_lie_where_the_configuration_folder_is() {
    const CHILD: &str = "GATEMIX_TEST_SETTINGS";
    if let Some(home) = std::env::var_os(CHILD) {
        let home = std::path::PathBuf::from(home);
        assert_eq!(path(), Some(home.join("gatemix/settings.yaml")));
        assert_eq!(load(), (Settings::default(), Vec::new()));
        save(&chosen()).unwrap();
        assert_eq!(load(), (chosen(), Vec::new()));
        return;
    }
    let dir = tempfile::tempdir().unwrap();
    let at = |name: &str| dir.path().join(name);
    for (home, xdg, config) in [("a", Some("mine"), "mine"), ("b", None, "b/.config")] {
        let mut child = std::process::Command::new(std::env::current_exe().unwrap());
        child
            .arg("--exact")
            .arg("settings::scenario_the_users_settings_lie_where_the_configuration_folder_is");
        child.env_remove("XDG_CONFIG_HOME").env("HOME", at(home)).env(CHILD, at(config));
        if let Some(xdg) = xdg {
            child.env("XDG_CONFIG_HOME", at(xdg));
        }
        let ran = child.output().unwrap();
        assert!(ran.status.success(), "{}", String::from_utf8_lossy(&ran.stdout));
        assert_eq!(load_from(&at(config).join("gatemix/settings.yaml")).0, chosen());
    }
}
