//! Random bytes, and the demonstration site's own files with damage done to them, through the site and cast readers,
//! the profile and the mix: never a panic, and no figure of an answer that is not finite.

use chrono::NaiveDate;
use gatemix::files::cast::{Told, cast};
use gatemix::files::site::{Read, site};
use gatemix::files::text::{Format, read_from};
use gatemix::intake::{capacity_m3s, is_wet};
use gatemix::mix::{Gate, Perturbed, Setting, judge, refusals};
use gatemix::problem::{Problem, any_refused};
use gatemix::profile::{Layering, Profile};
use gatemix::report::drawn_column;
use gatemix::site::Site;
use gatemix::units::System;
use proptest::collection::vec;
use proptest::prelude::*;
use proptest::test_runner::FileFailurePersistence;

const SITE: &str = include_str!("../../sites/ashlar/site.yaml");
const CAST: &str = include_str!("../../sites/ashlar/profiles/2026-07-14.csv");

pub(super) fn config(cases: u32) -> ProptestConfig {
    let kept = FileFailurePersistence::Direct("tests/bad_input/found.txt");
    ProptestConfig { cases, failure_persistence: Some(Box::new(kept)), ..ProptestConfig::default() }
}

/// One piece of damage; the number is a place in the file, wrapped to its length.
#[derive(Debug, Clone)]
enum Damage {
    Byte(usize, u8),
    Digit(usize, u8),
    Drop(usize),
    Double(usize),
    Swap(usize, usize),
    Cut(usize),
    Word(usize, &'static str),
}

fn damage() -> impl Strategy<Value = Damage> {
    let place = 0..100_000_usize;
    let word = proptest::sample::select(
        &[
            ".nan",
            "-.inf",
            "1e300",
            "-1e300",
            "1e-300",
            "0",
            "-5",
            "~",
            "[]",
            "{}",
            "1e30cfs",
            "9e9 m",
            "\u{1b}[2J",
        ][..],
    );
    prop_oneof![
        2 => (place.clone(), any::<u8>()).prop_map(|(at, byte)| Damage::Byte(at, byte)),
        4 => (place.clone(), b'0'..=b'9').prop_map(|(at, digit)| Damage::Digit(at, digit)),
        1 => place.clone().prop_map(Damage::Drop),
        1 => place.clone().prop_map(Damage::Double),
        1 => (place.clone(), place.clone()).prop_map(|(a, b)| Damage::Swap(a, b)),
        1 => place.clone().prop_map(Damage::Cut),
        3 => (place, word).prop_map(|(at, word)| Damage::Word(at, word)),
    ]
}

fn damaged(text: &str, all: &[Damage]) -> Vec<u8> {
    let mut text = text.as_bytes().to_vec();
    for one in all {
        let mut lines: Vec<Vec<u8>> = text.split(|b| *b == b'\n').map(<[u8]>::to_vec).collect();
        let line = |at: usize| at % lines.len();
        match *one {
            Damage::Byte(at, byte) => {
                let at = at % text.len();
                text[at] = byte;
                continue;
            }
            Damage::Digit(at, digit) => {
                let digits: Vec<usize> = (0..text.len()).filter(|i| text[*i].is_ascii_digit()).collect();
                if let Some(at) = digits.get(at % digits.len().max(1)) {
                    text[*at] = digit;
                }
                continue;
            }
            Damage::Word(at, word) => {
                // in place of a number
                let starts: Vec<usize> = (1..text.len())
                    .filter(|i| text[*i].is_ascii_digit() && matches!(text[*i - 1], b' ' | b'[' | b','))
                    .collect();
                if let Some(&at) = starts.get(at % starts.len().max(1)) {
                    let long = text[at..].iter().take_while(|b| b.is_ascii_digit() || **b == b'.').count();
                    text.splice(at..at + long, word.bytes());
                }
                continue;
            }
            Damage::Drop(at) => {
                lines.remove(line(at));
            }
            Damage::Double(at) => lines.insert(line(at), lines[line(at)].clone()),
            Damage::Swap(a, b) => {
                let (a, b) = (line(a), line(b));
                lines.swap(a, b);
            }
            Damage::Cut(at) => lines.truncate(line(at).max(1)),
        }
        text = lines.join(&b'\n');
        if text.is_empty() {
            break;
        }
    }
    text
}

fn said_well(problems: &[Problem]) -> Result<(), TestCaseError> {
    for problem in problems {
        for system in [System::Si, System::Us] {
            prop_assert!(!problem.text(system).chars().any(char::is_control), "{problem}");
        }
        prop_assert!(!problem.kind.is_empty());
    }
    Ok(())
}

/// Reads both, and answers as far as an answer goes.
fn answer(site_bytes: &[u8], cast_bytes: &[u8], share: f64) -> Result<bool, TestCaseError> {
    let Ok(text) = read_from("site.yaml", site_bytes, Format::Yaml) else { return Ok(false) };
    let Read { site, problems, .. } = site(&text.text, "site.yaml");
    said_well(&problems)?;
    prop_assert_eq!(site.is_none(), any_refused(&problems));
    let Some(mut site) = site else { return Ok(false) };
    site.band.members = site.band.members.min(10);
    let Ok(source) = read_from("cast.csv", cast_bytes, Format::Csv) else { return Ok(false) };
    let (raw, problems) = cast(&source, &site, &Told::default());
    said_well(&problems)?;
    prop_assert_eq!(raw.is_none(), any_refused(&problems));
    let Some(raw) = raw else { return Ok(false) };
    let (profile, problems) = Profile::build(&raw, &site, None);
    said_well(&problems)?;
    prop_assert_eq!(profile.is_none(), any_refused(&problems));
    let Some(profile) = profile else { return Ok(false) };
    let lower = site.pool.bed_m + (profile.pool_m - site.pool.bed_m) * share;
    let moved = profile.at_pool(&site, lower);
    for profile in moved.iter().chain([&profile]) {
        finite(&Layering::of(profile, &site.pool))?;
        judged(&site, profile, share)?;
    }
    Ok(true)
}

/// `Debug` writes every figure of a result, also those a later report leaves out.
fn finite(result: &impl std::fmt::Debug) -> Result<(), TestCaseError> {
    let text = format!("{result:?}");
    prop_assert!(!text.contains("NaN") && !text.contains("inf"), "{text}");
    Ok(())
}

fn judged(site: &Site, profile: &Profile, share: f64) -> Result<(), TestCaseError> {
    let wet = site.outlets.iter().enumerate().filter(|(_, o)| is_wet(o, 1.0, profile.pool_m));
    let gates = wet
        .map(|(outlet, o)| {
            let most = capacity_m3s(site, o, 1.0, profile.pool_m).unwrap_or(1e4);
            Gate { outlet, opening: 1.0, flow_m3s: most * share }
        })
        .collect();
    let setting = Setting::of(gates);
    said_well(&refusals(site, &setting, profile.pool_m))?;
    let perturbed = Perturbed::new(site, profile, Some(3.0));
    let summer = NaiveDate::from_ymd_opt(2026, 7, 20).unwrap();
    let Some(mix) = judge(site, profile, &perturbed, &setting, summer) else { return Ok(()) };
    finite(&(&mix.levels, &mix.release, &mix.spread, &mix.targets))?;
    finite(&(mix.spread.band_c(), mix.spread.band_oxygen_mg_l()))?;
    said_well(&mix.warnings)?;
    prop_assert!(mix.release.flow_m3s > 0.0);
    let drawn = drawn_column(site, profile, &mix.levels, System::Us);
    prop_assert!(drawn.chars().all(|c| c == '\n' || !c.is_control()));
    Ok(())
}

proptest! {
    #![proptest_config(config(300))]

    #[test]
    fn law_random_bytes_never_panic_as_site_or_cast(bytes in vec(any::<u8>(), 0..400)) {
        prop_assert!(!answer(&bytes, CAST.as_bytes(), 0.5)?);
        prop_assert!(!answer(SITE.as_bytes(), &bytes, 0.5)?);
    }

    #[test]
    fn law_a_damaged_site_is_refused_or_answered_in_finite_figures(
        all in vec(damage(), 1..4), share in 0.01..1.0_f64
    ) {
        answer(&damaged(SITE, &all), CAST.as_bytes(), share)?;
    }

    #[test]
    fn law_a_damaged_cast_is_refused_or_answered_in_finite_figures(
        all in vec(damage(), 1..4), share in 0.01..1.0_f64
    ) {
        answer(SITE.as_bytes(), &damaged(CAST, &all), share)?;
    }
}

#[test]
fn scenario_the_files_as_they_are_are_answered() {
    assert!(answer(SITE.as_bytes(), CAST.as_bytes(), 0.5).unwrap());
}
