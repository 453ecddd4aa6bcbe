//! Small invented sites for the screens, on disk. Everything is named without a path, so that no screen holds one.

use std::fs;
use std::path::{Path, PathBuf};
use std::sync::{Mutex, OnceLock, PoisonError};

/// The working folder of every test here: sites are named from it.
pub(crate) fn ground() -> &'static Path {
    static GROUND: OnceLock<PathBuf> = OnceLock::new();
    GROUND.get_or_init(|| {
        let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join("screens");
        fs::create_dir_all(&path).unwrap();
        std::env::set_current_dir(&path).unwrap();
        path
    })
}

/// Three gates: two on a well, a sluice beside it.
pub(crate) const SITE: &str = r#"name: Test Dam (invented)
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
datum: local
utc_offset: "-07:00"
place: { altitude: 410, latitude: 44.1 }
pool:
  bed: 0
  full: 62
  table:
    - [0, 0, 0]
    - [20, 2.0e6, 2.0e7]
    - [40, 5.0e6, 9.0e7]
    - [62, 9.0e6, 2.44e8]
wells:
  - { name: Tower, conduit: 2, max_flow: 90 }
outlets:
  - { name: Upper, well: Tower, centre: 50, height: 3, width: 4, positions: [0, 50, 100], min_submergence: 4, flow: { min: 2, max: 80 } }
  - { name: Lower, well: Tower, centre: 30, height: 3, width: 4, positions: [0, 50, 100], min_submergence: 4, flow: { min: 2, max: 80 } }
  - { name: Sluice, centre: 8, height: 2, width: 2, flow: { max: 40 } }
release: { min: 10, max: 120, wanted: 40 }
now: { Upper: 20, Lower: 10, Sluice: 10 }
targets:
  - { name: holding, from: 05-01, to: 09-15, low: 9, preferred: 12, high: 14, oxygen_min: 6, source: "example only" }
cold_water: [12]
"#;

/// A summer cast of it.
pub(crate) const CAST: &str = "\
# taken: 2026-07-13T10:30
# pool: 60
depth_m,temperature_C,oxygen_mg_l
0.5,22.0,8.5
5,21.8,8.4
9,18.0,8.0
14,12.5,7.0
20,9.5,6.5
30,7.5,5.5
45,6.5,4.5
59,6.2,3.5
";

/// Writes a site where it is not there yet as it is wanted, and gives its name.
pub(crate) fn site(name: &str, site: &str, casts: &[(&str, &str)]) -> String {
    // what is there already is not touched: another test may be reading it
    static ONE_BY_ONE: Mutex<()> = Mutex::new(());
    let _one = ONE_BY_ONE.lock().unwrap_or_else(PoisonError::into_inner);
    let folder = ground().join(name);
    fs::create_dir_all(folder.join("profiles")).unwrap();
    let cast = |(file, text): &(&str, &str)| (folder.join("profiles").join(file), (*text).to_owned());
    for (path, text) in casts.iter().map(cast).chain([(folder.join("site.yaml"), site.to_owned())]) {
        if fs::read_to_string(&path).ok().as_ref() != Some(&text) {
            fs::write(path, text).unwrap();
        }
    }
    name.to_owned()
}

/// Writes files beside those of a site, by their paths in its folder.
pub(crate) fn beside(name: &str, files: &[(&str, &str)]) {
    for (path, text) in files {
        let path = ground().join(name).join(path);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        if fs::read_to_string(&path).ok().as_deref() != Some(*text) {
            fs::write(path, text).unwrap();
        }
    }
}

/// The usual one.
pub(crate) fn usual(name: &str) -> String {
    site(name, SITE, &[("2026-07-13.csv", CAST)])
}

/// A text with one piece of it changed; the piece must be there.
pub(crate) fn with(text: &str, from: &str, to: &str) -> String {
    assert!(text.contains(from), "{from}");
    text.replace(from, to)
}

/// The cast without its oxygen.
pub(crate) fn without_oxygen() -> String {
    let line = |line: &str| match line.rsplit_once(',') {
        Some((before, _)) => before.to_owned(),
        None => line.to_owned(),
    };
    CAST.lines().map(|l| line(l) + "\n").collect()
}
