//! The casts of a folder, and the same question asked of another of them.

use chrono::{DateTime, Utc};
use gatemix::problem::Weight;
use gatemix::tasks::{self, Asked, Context, Failure, OnFrom};

use crate::{CAST, Folder, SITE, with};

fn clock() -> DateTime<Utc> {
    "2025-08-20T12:00:00Z".parse().unwrap()
}

fn open(site: &str, profile: Option<&str>, on: Option<&str>) -> Result<Context, Failure> {
    let text = |t: &str| Some(t.to_owned());
    let asked = Asked {
        site: text(site),
        profile: profile.and_then(text),
        on: on.and_then(text),
        units: Some(gatemix::units::System::Us),
        ..Asked::default()
    };
    tasks::open(&asked, clock())
}

/// Everything in a context, also what is private; its casts are read in any case, which one that needs none puts off.
fn whole(context: &Context) -> String {
    assert!(!context.folder.casts().is_empty());
    format!("{context:?}")
}

#[test]
fn law_another_cast_gives_the_context_that_opening_it_by_name_gives() {
    let ashlar = open("ashlar", None, None).unwrap();
    let casts = tasks::casts(&ashlar);
    assert!(casts.len() > 20);
    for cast in &casts {
        let name = cast.file.rsplit('/').next().unwrap();
        for on in [None, Some("2026-08-01")] {
            let named = whole(&open("ashlar", Some(name), on).unwrap());
            let from = open("ashlar", None, on).unwrap();
            assert!(whole(&from.with_cast(&cast.file).unwrap()) == named, "{name} on {on:?}, as listed");
            assert!(whole(&from.with_cast(name).unwrap()) == named, "{name} on {on:?}, by name");
        }
        let answer = |context: &Context| format!("{:?}", tasks::pool(context));
        let other = ashlar.with_cast(&cast.file).unwrap();
        let own = answer(&open("ashlar", Some(name), None).unwrap());
        assert_eq!(answer(&other), own);
        let (context, read) = cast.pool.as_ref().unwrap();
        assert!(whole(context) == whole(&other), "{name}, as read with the others");
        assert_eq!(format!("{read:?}"), own);
        assert!(
            whole(&other.with_cast(&casts[0].file).unwrap())
                == whole(&ashlar.with_cast(&casts[0].file).unwrap())
        );
    }
}

/// Three casts: an undated one, one, and one two weeks later; and what is told of the middle one by the site.
fn season() -> Folder {
    let later = with(&with(CAST, "2025-07-14", "2025-07-28"), "# pool: 60", "# pool: 59");
    let untold = with(&with(CAST, "# taken: 2025-07-14T10:30\n", ""), "# pool: 60\n", "");
    let undated = with(CAST, "# taken: 2025-07-14T10:30\n", "");
    let site = format!("{SITE}casts: [ {{ file: z.csv, taken: \"2025-07-14T10:30\", pool: 58 }} ]\n");
    let cast = |text: &str| text.as_bytes().to_vec();
    let files = [("a.csv", cast(&later)), ("m.csv", cast(&undated)), ("z.csv", cast(&untold))];
    let files: Vec<_> = files.iter().map(|(name, bytes)| (*name, bytes.as_slice())).collect();
    Folder::new(&site, &files)
}

#[test]
fn scenario_casts_stand_in_order_of_time_each_under_its_own_pool() {
    let folder = season();
    std::fs::write(folder.profile("broken.csv"), "depth_m,temp\n1,20\n").unwrap();
    let asked = Asked { site: Some(folder.named().into()), pool: Some("57.5".into()), ..Asked::default() };
    let context = tasks::open(&asked, clock()).unwrap();
    let casts = tasks::casts(&context);
    let files: Vec<&str> = casts.iter().map(|c| c.file.rsplit('/').next().unwrap()).collect();
    assert_eq!(files, ["broken.csv", "m.csv", "z.csv", "a.csv"]);
    let pools: Vec<Option<f64>> = casts.iter().map(|c| c.profile().map(|p| p.pool_m)).collect();
    assert_eq!(pools, [None, Some(60.0), Some(58.0), Some(59.0)]);
    let taken: Vec<bool> = casts.iter().map(|c| c.taken.is_some()).collect();
    assert_eq!(taken, [false, false, true, true]);
    assert!(casts[0].problems.iter().any(|p| p.weight == Weight::Refused));
    for cast in &casts[1..] {
        let profile = cast.profile().unwrap();
        assert_eq!((profile.taken, &profile.flags), (cast.taken, &cast.problems));
        assert!(cast.problems.iter().all(|p| p.weight != Weight::Refused));
    }
    let other = context.with_cast("a.csv").unwrap();
    let pools = [&context, &other].map(|c| Some(c.profile.pool_m));
    assert_eq!(pools, [Some(57.5), Some(59.0)], "the pool asked for is that of the cast in hand alone");
}

#[test]
fn scenario_another_cast_of_a_folder_on_disk_has_its_own_age_flags_and_fingerprint() {
    let folder = season();
    let on = Some("2025-07-20T10:30");
    let newest = open(folder.named(), None, on).unwrap();
    assert!(newest.age_days.unwrap() < 0.0 && newest.profile.flags.iter().any(|p| p.kind == "later"));
    for file in ["a.csv", "m.csv", "z.csv"] {
        let listed = folder.profile(file);
        let named = open(folder.named(), listed.to_str(), on).unwrap();
        let other = newest.with_cast(listed.to_str().unwrap()).unwrap();
        assert!(whole(&other) == whole(&named), "{file}");
        assert_eq!((other.on, other.on_from), (newest.on, OnFrom::Asked));
    }
    let told = newest.with_cast("z.csv").unwrap();
    assert_eq!((told.age_days, told.profile.pool_m), (Some(6.0), 58.0));
    assert_ne!(told.fingerprint, newest.fingerprint);
    assert!(told.profile.flags.iter().all(|p| p.kind != "later" && p.kind != "stale"));
}

#[test]
fn scenario_a_cast_that_is_gone_or_broken_is_refused_with_its_name() {
    let folder = season();
    let context = open(folder.named(), None, None).unwrap();
    std::fs::write(folder.profile("m.csv"), "depth_m,temp\n1,20\n").unwrap();
    std::fs::remove_file(folder.profile("z.csv")).unwrap();
    let elsewhere = folder.site_file();
    for (file, kind) in
        [("m.csv", "no-header"), ("z.csv", "missing-file"), (elsewhere.to_str().unwrap(), "missing-file")]
    {
        match context.with_cast(file) {
            Err(Failure::Refused(problems, system)) => {
                assert_eq!(system, gatemix::units::System::Us);
                assert_eq!(problems[0].kind, kind, "{problems:?}");
                assert!(problems[0].place.file.as_deref().unwrap().ends_with(file));
            }
            other => panic!("{other:?}"),
        }
    }
}
