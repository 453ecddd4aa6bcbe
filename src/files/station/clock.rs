//! Moments as a logger's clock told them: order, the hour that comes twice, the same moment twice.
//!
//! The program counts days by the standard time of the site; a clock that was set an hour ahead for the summer is
//! brought back here.

use chrono::{DateTime, Datelike, FixedOffset, NaiveDate, NaiveDateTime, NaiveTime, TimeDelta, Timelike};

use crate::files::cast::{YEARS, parse_time};
use crate::files::table::Table;
use crate::problem::Problem;

use super::gather::Gather;

/// Hours of the night in which clocks are changed, when it is not told (choice: all countries known to us change
/// between midnight and 4 o'clock).
const CHANGE_HOURS: std::ops::RangeInclusive<u32> = 0..=3;

/// Characters of a cell that are read as a time (choice: no way of writing one is longer).
const LONGEST_TIME: usize = 40;

/// What to write so that a clock change is understood.
const DAYLIGHT_CURE: &str =
    "write `# daylight: 2026-03-08 2026-11-01` above the header: the days on which the clock was changed";

/// A moment as written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Stamp {
    /// With its offset.
    Told(DateTime<FixedOffset>),
    /// By the clock of the place.
    Clock(NaiveDateTime),
}

impl Stamp {
    fn local(self) -> NaiveDateTime {
        match self {
            Self::Told(time) => time.naive_local(),
            Self::Clock(time) => time,
        }
    }

    /// Reads a moment: RFC 3339, or by the clock of the place.
    pub(super) fn parse(text: &str, offset: FixedOffset) -> Result<Self, String> {
        let text = text.trim();
        if let Some(time) = plain(text).filter(|time| YEARS.contains(&time.year())) {
            return Ok(Self::Clock(time));
        }
        let short: String = text.chars().take(LONGEST_TIME).collect();
        let time = parse_time(&short, offset)?;
        if !short.contains(':') {
            return Err(format!("`{short}` is a date without a time of day"));
        }
        let zone = text.get(text.len().saturating_sub(6)..).unwrap_or_default();
        let told = text.ends_with(['Z', 'z']) || zone.starts_with(['+', '-']);
        Ok(if told { Self::Told(time) } else { Self::Clock(time.naive_local()) })
    }
}

/// `2026-07-01T10:00`, with a blank for the T and with or without seconds, digit by digit: files hold many of them.
fn plain(text: &str) -> Option<NaiveDateTime> {
    let number = |from: usize, to: usize| {
        let digits = text.get(from..to).filter(|d| d.bytes().all(|b| b.is_ascii_digit()))?;
        digits.parse::<u32>().ok()
    };
    let is = |at: usize, these: &[u8]| text.as_bytes().get(at).is_some_and(|b| these.contains(b));
    let seconds = match text.len() {
        16 => 0,
        19 if is(16, b":") => number(17, 19)?,
        _ => return None,
    };
    if !(is(4, b"-") && is(7, b"-") && is(10, b"T ") && is(13, b":")) {
        return None;
    }
    let date = NaiveDate::from_ymd_opt(i32::try_from(number(0, 4)?).ok()?, number(5, 7)?, number(8, 10)?)?;
    Some(date.and_time(NaiveTime::from_hms_opt(number(11, 13)?, number(14, 16)?, seconds)?))
}

/// A stretch of the year in which the clock stood an hour ahead, by the clock at its two changes.
#[derive(Debug, Clone, Copy)]
pub(super) struct Daylight {
    forward: NaiveDateTime,
    back: NaiveDateTime,
}

impl Daylight {
    /// Those that comment lines tell.
    pub(super) fn told(table: &Table, problems: &mut Vec<Problem>) -> Vec<Self> {
        let mut out = Vec::new();
        for (key, value, line) in table.meta().filter(|m| m.0 == "daylight") {
            let short: String = value.chars().take(2 * LONGEST_TIME).collect();
            match Self::parse(&short) {
                Some(daylight) => out.push(daylight),
                None => problems.push(
                    Problem::refused(
                        "daylight",
                        format!("`# {key}: {short}` does not tell two days of one year, the earlier first"),
                        "write `# daylight: 2026-03-08 2026-11-01`, or with the hour by the clock before the change, \
                         `# daylight: 2026-03-29T02:00 2026-10-25T03:00`",
                    )
                    .on_line(line),
                ),
            }
        }
        out
    }

    fn parse(text: &str) -> Option<Self> {
        // two o'clock by the clock before the change, where no hour is given (choice)
        let moment = |word: &str| {
            let date = NaiveDate::parse_from_str(word, "%Y-%m-%d").ok();
            plain(word).or_else(|| Some(date?.and_time(NaiveTime::from_hms_opt(2, 0, 0)?)))
        };
        let words: Vec<&str> = text.split([' ', ',']).filter(|w| !w.is_empty()).collect();
        let [forward, back] = words[..] else { return None };
        let (forward, back) = (moment(forward)?, moment(back)?);
        let length = back - forward;
        let sound = TimeDelta::days(1) < length && length < TimeDelta::days(366);
        (sound && YEARS.contains(&forward.year())).then_some(Self { forward, back })
    }

    /// Standard time of a clock time; `last` is that of the row before.
    fn standard(&self, clock: NaiveDateTime, last: Option<NaiveDateTime>) -> Option<NaiveDateTime> {
        let hour = TimeDelta::hours(1);
        let ahead = clock - hour;
        // the hour that comes twice: the first pass is still ahead, the second goes on from it
        let twice = self.back - hour <= clock && clock < self.back;
        let first = !twice || last.is_none_or(|last| ahead > last);
        let within = self.forward + hour <= clock && clock < self.back;
        (within && first).then_some(ahead)
    }

    fn skips(&self, clock: NaiveDateTime) -> bool {
        self.forward <= clock && clock < self.forward + TimeDelta::hours(1)
    }
}

/// A row whose moment is known: its place among the rows as read, its line.
#[derive(Debug, Clone, Copy)]
pub(super) struct Placed {
    pub(super) row: usize,
    pub(super) line: usize,
    pub(super) time: DateTime<FixedOffset>,
}

/// The rows in order of time, no moment twice, with what was odd about their clock said. `same` tells whether two rows
/// hold the same readings.
pub(super) fn ordered(
    mut rows: Vec<(usize, usize, Stamp)>,
    daylight: &[Daylight],
    offset: FixedOffset,
    same: impl Fn(usize, usize) -> bool,
    said: &mut Gather,
) -> Vec<Placed> {
    let ends = rows.first().zip(rows.last());
    if let Some((first, last)) = ends.filter(|(first, last)| first.2.local() > last.2.local()) {
        let words = "the file goes from the newest reading to the oldest; it was turned round";
        said.add("newest-first", Problem::note("newest-first", words).on_line(first.1.min(last.1)));
        rows.reverse();
    }
    let mut walk = Walk { daylight, offset, last: None, spacing: None, second_until: None };
    let mut placed: Vec<Placed> = Vec::with_capacity(rows.len());
    for (row, line, stamp) in rows {
        let repeats = placed.last().is_some_and(|p| same(p.row, row));
        if let Some(time) = walk.step(line, stamp, repeats, said) {
            placed.push(Placed { row, line, time });
        }
    }
    placed.sort_by_key(|p| p.time);
    let mut kept: Vec<Placed> = Vec::with_capacity(placed.len());
    for row in placed {
        match kept.last().filter(|k| k.time == row.time) {
            None => kept.push(row),
            Some(first) => said_twice(first, &row, same(first.row, row.row), said),
        }
    }
    kept
}

fn said_twice(first: &Placed, again: &Placed, same: bool, said: &mut Gather) {
    let (group, how) =
        if same { ("twice-same", "with the same readings") } else { ("twice-other", "with other readings") };
    let time = again.time.format("%Y-%m-%d %H:%M");
    let words = format!("{time} stands here again {how} (first on line {}); the first is kept", first.line);
    said.add(group, Problem::flag("time-twice", words, "take one of them out").on_line(again.line));
}

/// The way through the rows, one after the other.
struct Walk<'d> {
    daylight: &'d [Daylight],
    offset: FixedOffset,
    last: Option<NaiveDateTime>,
    /// Time between the two rows before.
    spacing: Option<TimeDelta>,
    /// End of an hour that comes a second time and is not told.
    second_until: Option<NaiveDateTime>,
}

impl Walk<'_> {
    /// The moment of a row; `None` where it is left out.
    fn step(
        &mut self,
        line: usize,
        stamp: Stamp,
        repeats: bool,
        said: &mut Gather,
    ) -> Option<DateTime<FixedOffset>> {
        let local = match stamp {
            Stamp::Told(time) => time.naive_local(),
            Stamp::Clock(clock) => self.standard(clock, line, said),
        };
        if self.second_until.is_some_and(|until| local <= until) {
            self.say_again(line, said);
            return None;
        }
        self.second_until = None;
        let step = self.last.map(|last| local - last);
        if let (Some(step), Some(last), Stamp::Clock(clock)) = (step, self.last, stamp) {
            // an hour that begins again after its last reading: one spacing on, one hour back
            let again = self.spacing.is_some_and(|s| step == s - TimeDelta::hours(1));
            let other = !repeats || step < TimeDelta::zero();
            if again && other && self.daylight.is_empty() && CHANGE_HOURS.contains(&clock.hour()) {
                self.second_until = Some(last);
                self.say_again(line, said);
                return None;
            }
        }
        if step.is_some_and(|step| step < TimeDelta::zero()) {
            let words = format!("the time goes back here, to {}", local.format("%Y-%m-%d %H:%M"));
            said.add(
                "time-back",
                Problem::flag("time-back", words, "check the order of the rows").on_line(line),
            );
        }
        self.spacing = step.filter(|s| *s > TimeDelta::zero() && *s <= TimeDelta::hours(1));
        self.last = Some(local);
        local.and_local_timezone(self.offset).single()
    }

    fn say_again(&self, line: usize, said: &mut Gather) {
        let hour = self.second_until.map_or(0, |until| until.hour());
        let words = format!(
            "the hour from {hour:02}:00 comes twice, as if the clock had been set back; its second pass is left out"
        );
        said.add("clock-back", Problem::flag("clock-back", words, DAYLIGHT_CURE).on_line(line));
    }

    fn standard(&self, clock: NaiveDateTime, line: usize, said: &mut Gather) -> NaiveDateTime {
        if self.daylight.iter().any(|d| d.skips(clock)) {
            let words = format!("{} does not exist by `# daylight`", clock.format("%Y-%m-%d %H:%M"));
            let cure = "correct the days of `# daylight`; the time was read as standard time";
            said.add("clock-skip", Problem::flag("clock-skip", words, cure).on_line(line));
        }
        self.daylight.iter().find_map(|d| d.standard(clock, self.last)).unwrap_or(clock)
    }
}
