//! What is confirmed stays: writers killed at any moment, torn lines, full disks, locks.

use std::fs::{self, File};
use std::io::{BufRead, BufReader, Write};
use std::path::{Path, PathBuf};
use std::process::{Child, ChildStdout, Command, Stdio};
use std::thread::sleep;
use std::time::Duration;

use chrono::DateTime;
use gatemix::files::log::{append, read};
use gatemix::problem::Problem;
use gatemix::record::Log;
use gatemix::record::line::{Event, Line};
use rand_distr::{Distribution, Uniform};
use rand_pcg::Pcg64Mcg;
use rand_pcg::rand_core::SeedableRng;

use crate::{Folder, Run, SITE, run};

/// Names the log to a writer of the trials, and who it is.
const WRITES: &str = "GATEMIX_TRIAL_LOG";
/// Trials in which two writers are killed.
const TRIALS: usize = 500;
/// Lines after which a writer that nobody killed stops.
const MOST: usize = 400;

fn event(log: &Log, text: &str) -> Line {
    let at = DateTime::parse_from_rfc3339("2026-07-14T10:30:00-07:00").unwrap();
    let text = text.to_owned();
    Line::Event(Event {
        id: log.next_id(),
        at,
        by: "trial".into(),
        text,
        from: at,
        until: None,
        amends: None,
    })
}

fn log_event(path: &Path, text: &str) -> Result<u64, Problem> {
    append(path, &|log| Ok(event(log, text))).map(|appended| appended.line.id())
}

/// What is written beside a text, so that a line is long enough to be torn.
fn padded(text: &str) -> String {
    format!("{text} {}", "water ".repeat(700))
}

/// Logs line after line, and confirms each once it is there.
fn writes(who: &str, path: &Path, count: usize) {
    let mut out = std::io::stdout();
    for count in 0..count {
        let text = format!("{who}-{count}");
        let id = log_event(path, &padded(&text)).unwrap();
        // one write, so that whoever reads it reads it whole
        out.write_all(format!("confirmed {id} {text}\n").as_bytes()).unwrap();
        // the other has its turn
        sleep(Duration::from_micros(500));
    }
}

/// The writer of the trials, which start it with the name of their log; by itself it has one of its own.
#[test]
fn scenario_a_writer_that_nobody_stops_writes_every_line() {
    if let Ok(told) = std::env::var(WRITES) {
        let (who, path) = told.split_once(':').unwrap();
        return writes(who, Path::new(path), MOST);
    }
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("log.jsonl");
    writes("alone", &path, 5);
    let there = read(&path).unwrap();
    let texts: Vec<String> = there.log.events().into_iter().map(|event| event.text.clone()).collect();
    let all: Vec<String> = (0..5).map(|count| padded(&format!("alone-{count}"))).collect();
    assert_eq!((texts, there.problems), (all, vec![]));
}

fn writer(path: &Path, who: &str) -> Child {
    Command::new(std::env::current_exe().unwrap())
        .args([
            "--exact",
            "log_kept::scenario_a_writer_that_nobody_stops_writes_every_line",
            "--nocapture",
            "--test-threads=1",
        ])
        .env(WRITES, format!("{who}:{}", path.display()))
        .stdout(Stdio::piped())
        .stderr(Stdio::null())
        .spawn()
        .unwrap()
}

/// What a writer confirms, as far as it is read: number and text.
struct Confirmed {
    told: BufReader<ChildStdout>,
    lines: Vec<(u64, String)>,
}

impl Confirmed {
    fn of(child: &mut Child) -> Self {
        Self { told: BufReader::new(child.stdout.take().unwrap()), lines: Vec::new() }
    }

    /// Reads on until so many are confirmed, or the writer is gone. A last line without its end confirms nothing.
    fn until(&mut self, count: usize) {
        let mut line = String::new();
        while self.lines.len() < count && self.told.read_line(&mut line).unwrap() > 0 && line.ends_with('\n')
        {
            let confirmed =
                line.trim_end().split_once("confirmed ").and_then(|(_, told)| told.split_once(' '));
            self.lines.extend(confirmed.map(|(id, text)| (id.parse().unwrap(), text.to_owned())));
            line.clear();
        }
    }
}

#[test]
fn scenario_writers_killed_at_any_moment_lose_no_confirmed_line_and_tear_none_unread() {
    let folder = tempfile::tempdir().unwrap();
    let mut random = Pcg64Mcg::seed_from_u64(7);
    let mut wait = |most_us: u64| {
        sleep(Duration::from_micros(Uniform::new(0, most_us).unwrap().sample(&mut random)));
    };
    let (mut lines, mut torn, mut idle) = (0, 0, 0);
    for trial in 0..TRIALS {
        let path = folder.path().join(format!("{trial}.jsonl"));
        let mut children = [writer(&path, "a"), writer(&path, "b")];
        let mut told = children.each_mut().map(Confirmed::of);
        // from before the first line to some way into them
        let first = trial % 2;
        told[first].until(trial % 7);
        for child in [first, 1 - first] {
            wait(2_000);
            children[child].kill().unwrap();
        }
        for (child, told) in children.iter_mut().zip(&mut told) {
            told.until(usize::MAX);
            child.wait().unwrap();
        }
        let told: Vec<(u64, String)> = told.into_iter().flat_map(|told| told.lines).collect();
        let there = read(&path).unwrap();
        let kinds = ["log-torn", "log-unended"];
        assert!(there.problems.iter().all(|p| kinds.contains(&p.kind)), "{trial}: {:?}", there.problems);
        let ids: Vec<u64> = there.log.lines().iter().map(|placed| placed.line.id()).collect();
        assert!(ids.windows(2).all(|pair| pair[0] < pair[1]), "{trial}: {ids:?}");
        for (id, text) in &told {
            let kept = there.log.events().into_iter().find(|event| event.id == *id);
            assert!(kept.is_some_and(|event| event.text == padded(text)), "{trial}: {id} is not {text}");
        }
        // no line goes unread: what is not whole is told
        let written = there.bytes.split(|&b| b == b'\n').filter(|line| !line.is_empty()).count();
        let unread = there.problems.iter().filter(|p| p.kind == "log-torn").count();
        assert_eq!(written, ids.len() + unread, "{trial}");
        // the next writer finds a log it can go on with
        let before = there.bytes.clone();
        log_event(&path, "after").unwrap();
        let after = read(&path).unwrap();
        assert!(after.bytes.starts_with(&before), "{trial}: what was there is no longer");
        assert_eq!(after.log.lines().len(), ids.len() + 1, "{trial}");
        lines += told.len();
        torn += there.problems.len();
        idle += usize::from(told.is_empty());
        fs::remove_file(&path).unwrap();
    }
    println!(
        "{TRIALS} trials: {lines} lines confirmed, {torn} torn, {idle} trials killed before a first line"
    );
    assert!(lines > TRIALS && idle < TRIALS / 4, "{lines} lines, {idle} idle: the trials tried nothing");
}

#[test]
fn scenario_a_log_cut_at_any_byte_keeps_its_whole_lines_and_tells_the_torn_one() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("log.jsonl");
    for text in ["first", "second", "third"] {
        log_event(&path, text).unwrap();
    }
    let whole = fs::read(&path).unwrap();
    for cut in 0..=whole.len() {
        fs::write(&path, &whole[..cut]).unwrap();
        let ends = whole[..cut].split(|&b| b == b'\n').count() - 1;
        let is_torn = cut > 0 && whole[cut - 1] != b'\n';
        // all of it but its end: nobody was told of it, but it reads well
        let is_whole = whole.get(cut) == Some(&b'\n');
        let there = read(&path).unwrap();
        assert_eq!(there.log.lines().len(), ends + usize::from(is_whole), "cut at {cut}");
        let kinds: Vec<&str> = there.problems.iter().map(|p| p.kind).collect();
        let told: &[&str] = match (is_torn, is_whole) {
            (_, true) => &["log-unended"],
            (true, false) => &["log-torn"],
            (false, false) => &[],
        };
        assert_eq!(kinds, told, "cut at {cut}");
        let appended = append(&path, &|log| Ok(event(log, "after"))).unwrap();
        assert_eq!(appended.mended.is_some(), is_torn, "cut at {cut}");
        assert_eq!(appended.mended.and_then(|p| p.place.line), is_torn.then_some(ends + 1), "cut at {cut}");
        let after = read(&path).unwrap();
        let ids: Vec<u64> = after.log.lines().iter().map(|placed| placed.line.id()).collect();
        let expected: Vec<u64> = (1..).take(ends + 1 + usize::from(is_whole)).collect();
        assert_eq!(ids, expected, "cut at {cut}");
        assert!(after.bytes.starts_with(&whole[..cut]), "cut at {cut}");
    }
}

fn logs(site: &str) -> Run {
    run(&["log", site, "--event", "gate N1 stuck", "--by", "crew"])
}

fn log_of(folder: &Folder) -> PathBuf {
    Path::new(folder.named()).join("log.jsonl")
}

#[test]
fn scenario_a_log_that_another_program_holds_is_left_as_it_is() {
    let folder = Folder::usual();
    assert_eq!(logs(folder.named()).code, Some(0));
    let before = fs::read(log_of(&folder)).unwrap();
    let held = File::open(log_of(&folder)).unwrap();
    held.lock().unwrap();
    let out = logs(folder.named());
    assert!(out.failed_with(1).contains("another program holds the log; nothing was written"), "{}", out.err);
    held.unlock().unwrap();
    assert_eq!(fs::read(log_of(&folder)).unwrap(), before);
    assert_eq!(logs(folder.named()).code, Some(0));
}

#[test]
#[cfg(unix)]
fn scenario_a_log_that_is_a_device_a_folder_or_below_a_file_is_told_and_nothing_written() {
    let folder = Folder::usual();
    std::os::unix::fs::symlink("/dev/full", log_of(&folder)).unwrap();
    let out = logs(folder.named());
    assert!(out.failed_with(1).contains("this is a folder, a pipe or a device, not a log"), "{}", out.err);

    let folder = Folder::usual();
    fs::create_dir(log_of(&folder)).unwrap();
    // what only reads goes on without it, and says so
    let words = run(&["log", folder.named()]).out;
    assert!(words.contains("the log is passed over: this is a folder"), "{words}");
    logs(folder.named()).failed_with(1);

    let below = folder.site_file().join("log.jsonl");
    let problem = log_event(&below, "never").unwrap_err();
    assert!(problem.kind == "cannot-write" && problem.words.contains("nothing was logged"), "{problem}");
    assert_eq!(fs::read_to_string(folder.site_file()).unwrap(), SITE);
}

/// With room for some kilobytes more than a log has, a line that is larger ends in a message, and the log is as before.
#[test]
#[cfg(unix)]
fn scenario_a_disk_that_is_full_in_the_middle_of_a_line_leaves_the_log_as_it_was() {
    let folder = Folder::usual();
    assert_eq!(logs(folder.named()).code, Some(0));
    let before = fs::read(log_of(&folder)).unwrap();
    let long = "x".repeat(3900);
    let limited = "ulimit -f 2; exec \"$0\" log \"$1\" --event \"$2\" --by crew";
    let out = Command::new("sh")
        .args(["-c", limited])
        .arg(env!("CARGO_BIN_EXE_gatemix"))
        .args([folder.named(), &long])
        .output()
        .unwrap();
    let words = String::from_utf8(out.stderr).unwrap();
    assert_eq!(out.status.code(), Some(1), "{words}");
    assert!(words.contains("nothing was logged") && out.stdout.is_empty(), "{words}");
    assert_eq!(fs::read(log_of(&folder)).unwrap(), before);
    assert_eq!(logs(folder.named()).code, Some(0));
    assert_eq!(read(&log_of(&folder)).unwrap().log.lines().len(), 2);
}

/// The confirmation comes after the line is there: whoever reads it can read the line.
#[test]
fn scenario_what_is_confirmed_can_be_read_at_once() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("log.jsonl");
    let mut child = writer(&path, "a");
    let mut told = Confirmed::of(&mut child);
    for seen in 1..=20 {
        told.until(seen);
        let (id, text) = &told.lines[seen - 1];
        let there = read(&path).unwrap();
        assert!(there.log.lines().iter().any(|placed| placed.line.id() == *id), "{id}: {text}");
    }
    child.kill().unwrap();
    child.wait().unwrap();
}
