//! The log of the spring, written by the program itself at the time of each decision, on a folder that holds what was
//! known then: what was expected is what it would have told.

use std::collections::BTreeMap;
use std::fs;
use std::ops::ControlFlow;
use std::path::Path;

use chrono::{DateTime, NaiveDateTime, Utc};
use gatemix::files::log::LOG_FILE;
use gatemix::tasks::log::{DecisionAsked, EventAsked, decide, event};
use gatemix::tasks::rank::RankAsked;
use gatemix::tasks::{Asked, Context, Word, open};

use super::meetings::{AMENDED, BY, EVENT, MEETINGS, Meeting, time};

/// Offset of the site's clock, hours.
const OFFSET_H: i64 = 1;

/// What is to be written, at its time.
enum Entry {
    Decided(&'static Meeting),
    Amended,
    Happened,
}

/// The log's file. `pools_m` tells the pool at the time of each meeting, `first` what was set before the first.
pub(crate) fn file(
    site: &str,
    files: &BTreeMap<String, String>,
    pools_m: &[f64],
    before: &str,
) -> (String, String) {
    let folder = tempfile::tempdir().unwrap();
    let mut entries: Vec<(NaiveDateTime, Entry)> =
        MEETINGS.iter().map(|meeting| (meeting.from(), Entry::Decided(meeting))).collect();
    entries.extend([(time(AMENDED.1), Entry::Amended), (time(EVENT.0), Entry::Happened)]);
    entries.sort_by_key(|entry| entry.0);
    let mut ids = Vec::new();
    for (at, entry) in &entries {
        let set = ids.is_empty().then_some(before);
        known(folder.path(), site, files, *at, set);
        let clock = (*at - chrono::TimeDelta::hours(OFFSET_H)).and_utc();
        let pool = matches!(entry, Entry::Decided(_)).then(|| pools_m[ids.len()]);
        let context = opened(folder.path(), *at, pool, clock);
        match entry {
            Entry::Decided(meeting) => ids.push(decided(&context, meeting, clock)),
            Entry::Amended => amended(&context, ids[AMENDED.0], clock),
            Entry::Happened => happened(&context, clock),
        }
    }
    (LOG_FILE.to_owned(), fs::read_to_string(folder.path().join(LOG_FILE)).unwrap())
}

/// Writes what was known at a moment: casts taken, weather of days that are over, readings made.
fn known(folder: &Path, site: &str, files: &BTreeMap<String, String>, at: NaiveDateTime, set: Option<&str>) {
    let moment = at.format("%Y-%m-%dT%H:%M").to_string();
    let today = &moment[..10];
    let is_known = |line: &&str| {
        let stamp = line.split(',').next().unwrap_or_default();
        let is_row = stamp.starts_with("20");
        !is_row || if stamp.len() > today.len() { stamp <= moment.as_str() } else { stamp < today }
    };
    fs::create_dir_all(folder.join("profiles")).unwrap();
    for (name, text) in files {
        let cast = name.strip_prefix("profiles/").and_then(|name| name.strip_suffix(".csv"));
        let text = match cast {
            Some(date) if date <= today => text.clone(),
            None if !name.contains('/') => {
                text.lines().filter(is_known).flat_map(|line| [line, "\n"]).collect()
            }
            _ => continue,
        };
        fs::write(folder.join(name), text).unwrap();
    }
    let lines = site.lines().map(|line| match set {
        Some(set) if line.starts_with("now: ") => format!("now: {set}\n"),
        _ => format!("{line}\n"),
    });
    fs::write(folder.join("site.yaml"), lines.collect::<String>()).unwrap();
}

fn opened(folder: &Path, at: NaiveDateTime, pool_m: Option<f64>, clock: DateTime<Utc>) -> Context {
    let asked = Asked {
        site: Some(folder.to_str().unwrap().to_owned()),
        profile: None,
        taken: None,
        pool: pool_m.map(|pool_m| format!("{pool_m:.2} m")),
        on: Some(at.format("%Y-%m-%dT%H:%M").to_string()),
        units: None,
    };
    open(&asked, clock).unwrap_or_else(|failure| panic!("{failure:?}"))
}

fn decided(context: &Context, meeting: &Meeting, clock: DateTime<Utc>) -> u64 {
    let release = format!("{} m3/s", meeting.release_m3s);
    let open: Vec<String> = meeting.gates.iter().map(|gate| format!("{gate}=100%")).collect();
    let mut words: Vec<Word> = open.iter().map(|gate| Word::Open(gate)).collect();
    words.push(Word::Release(&release));
    let asked = DecisionAsked {
        by: Some(BY.to_owned()),
        why: Some(meeting.why.to_owned()),
        words,
        ranked: RankAsked { release: Some(release.clone()), ..RankAsked::default() },
        until: Some(meeting.until.to_owned()),
        trigger: meeting.trigger.map(str::to_owned),
        ..DecisionAsked::default()
    };
    written(context, &asked, clock)
}

fn amended(context: &Context, id: u64, clock: DateTime<Utc>) {
    let (_, _, by, why, trigger) = AMENDED;
    let asked = DecisionAsked {
        by: Some(by.to_owned()),
        why: Some(why.to_owned()),
        trigger: Some(trigger.to_owned()),
        amends: Some(id),
        ..DecisionAsked::default()
    };
    written(context, &asked, clock);
}

fn written(context: &Context, asked: &DecisionAsked, clock: DateTime<Utc>) -> u64 {
    let logged = decide(context, asked, clock, &|_| ControlFlow::Continue(()));
    logged.unwrap_or_else(|failure| panic!("{failure:?}")).appended.line.id()
}

fn happened(context: &Context, clock: DateTime<Utc>) {
    let (_, by, text, from, until) = EVENT;
    let asked = EventAsked {
        by: Some(by.to_owned()),
        text: text.to_owned(),
        from: Some(from.to_owned()),
        until: Some(until.to_owned()),
        amends: None,
    };
    event(context, &asked, clock).unwrap_or_else(|failure| panic!("{failure:?}"));
}
