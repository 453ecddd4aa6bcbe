//! The frame around every screen.
//!
//! ```text
//! site [demonstration]                                             units
//! pool  cast, age, badge  for the date
//!  1 pool   2 mix   3 rank                                 what is computed
//! ...body...
//! message
//! keys that work here
//! caution
//! ```

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};
use unicode_width::UnicodeWidthStr;

use crate::problem::harmless;
use crate::report::{caution_within, days};
use crate::tasks::{Context, Freshness};
use crate::units::{Dimension, System, show};

use super::super::keys::{Place, hints};
use super::super::look::Role;
use super::super::model::{Model, Screen, Session, Stage, Under};
use super::super::update::places;
use super::write::{cut, put, put_right};

/// Work shorter than this is not spoken of, milliseconds (choice: what still feels at once).
const AT_ONCE_MS: i64 = 200;

/// From so many columns on everything is said in full.
const WIDE: u16 = 100;

/// Parts of the screen.
#[derive(Debug, Clone, Copy)]
pub(super) struct Parts {
    pub(super) head: Rect,
    pub(super) tabs: Rect,
    pub(super) body: Rect,
    pub(super) message: Rect,
    pub(super) keys: Rect,
    pub(super) caution: Rect,
}

/// Where the parts lie.
pub(super) fn parts(_model: &Model, area: Rect) -> Parts {
    let line = |from_top: u16, height: u16| Rect { y: area.y + from_top, height, ..area };
    let body = area.height.saturating_sub(6);
    Parts {
        head: line(0, 2),
        tabs: line(2, 1),
        body: line(3, body),
        message: line(3 + body, 1),
        keys: line(4 + body, 1),
        caution: line(5 + body, 1),
    }
}

/// Says that there is no room.
pub(super) fn too_small(area: Rect, buf: &mut Buffer) {
    let words = format!("{}x{}: too small, needs 24x6; Ctrl-C quits", area.width, area.height);
    put(buf, area, 0, 0, &words, ratatui::style::Style::new());
    let last = area.height.saturating_sub(1);
    if last > 0 {
        put(buf, area, 0, last, caution_within(usize::from(area.width)), ratatui::style::Style::new());
    }
}

/// Draws everything but the body.
pub(super) fn draw(model: &Model, parts: &Parts, buf: &mut Buffer) {
    let look = model.look;
    match &model.stage {
        Stage::Site(session) => {
            head(model, session, parts.head, buf);
            tabs(model, session, parts, buf);
        }
        Stage::Opening { .. } => {
            put(buf, parts.head, 0, 0, "gatemix", look.style(Role::Strong));
            let what = model.asked.site.as_deref().map_or_else(|| "the demonstration".to_owned(), harmless);
            put(buf, parts.body, 0, 1, &format!("opening {what} ..."), look.style(Role::Plain));
        }
        Stage::Sites { .. } => {
            put(buf, parts.head, 0, 0, "gatemix: which site?", look.style(Role::Strong));
        }
        Stage::Broken { .. } => {
            let what = model.asked.site.as_deref().unwrap_or_default();
            let words = format!("gatemix: the files of {} give no answer", harmless(what));
            put(buf, parts.head, 0, 0, &words, look.style(Role::Strong));
        }
    }
    if let Some(message) = &model.message {
        let (mark, role) = if message.wrong { ("! ", Role::Outside) } else { ("  ", Role::Plain) };
        let column = put(buf, parts.message, 0, 0, mark, look.style(role));
        put(buf, parts.message, column, 0, &message.words, look.style(role));
    }
    keys(model, parts.keys, buf);
    let words = caution_within(usize::from(parts.caution.width));
    put(buf, parts.caution, 0, 0, words, look.style(Role::Caution));
}

/// Keys of the place at the left, those that work everywhere at the right, where they are found on every screen.
fn keys(model: &Model, area: Rect, buf: &mut Buffer) {
    let all = places(model);
    let (here, everywhere): (Vec<Place>, Vec<Place>) = all.into_iter().partition(|p| *p != Place::Everywhere);
    let common = hints(&everywhere);
    let wide = |(key, word): &(&str, &str)| key.len() + word.len() + 3;
    let reserved: usize = common.iter().map(wide).sum();
    let mut end = usize::from(area.width).saturating_sub(reserved);
    let mut column = 0;
    let hint = |(key, word): (&str, &str), column: u16, buf: &mut Buffer| {
        let column = put(buf, area, column, 0, key, model.look.style(Role::Key));
        let column = put(buf, area, column, 0, " ", model.look.style(Role::Quiet));
        put(buf, area, column, 0, word, model.look.style(Role::Quiet)) + 2
    };
    for shown in hints(&here) {
        if usize::from(column) + wide(&shown) > end {
            break;
        }
        column = hint(shown, column, buf);
    }
    for shown in common {
        hint(shown, u16::try_from(end + 1).unwrap_or(u16::MAX), buf);
        end += wide(&shown);
    }
}

fn head(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let look = model.look;
    let context = session.context();
    let site = context.site();
    let units = match model.system() {
        System::Us => "units: US",
        System::Si => "units: SI",
    };
    put_right(buf, area, area.width, 0, units, look.style(Role::Quiet));
    let wide = area.width >= WIDE;
    let mark = match (site.demonstration, context.folder.in_memory()) {
        (true, true) if wide => "  [demonstration data, held in memory]",
        (true, true) => "  [demonstration, in memory]",
        (true, false) => "  [demonstration data]",
        (false, _) => "",
    };
    let room = usize::from(area.width).saturating_sub(units.len() + mark.len() + 2);
    let column = put(buf, area, 0, 0, &cut(&harmless(&site.name), room), look.style(Role::Strong));
    put(buf, area, column, 0, mark, look.style(Role::Warn));
    let mut column = 0;
    let cells = |facts: &[(String, Role)]| facts.iter().map(|f| f.0.width() + 1).sum::<usize>();
    let facts = [true, false]
        .map(|hour| facts(session, context, model.system(), (wide, hour)))
        .into_iter()
        .reduce(|long, short| if cells(&long) > usize::from(area.width) + 1 { short } else { long });
    for (words, role) in facts.unwrap_or_default() {
        column = put(buf, area, column, 1, &words, look.style(role)) + 1;
    }
}

/// Pool, cast, age, badge, date: in words with the role of each; the hours of the cast and the date where asked for.
fn facts(
    session: &Session,
    context: &Context,
    system: System,
    (wide, to_the_hour): (bool, bool),
) -> Vec<(String, Role)> {
    let site = context.site();
    let day = "%Y-%m-%d";
    let hour = if wide && to_the_hour { "%Y-%m-%d %H:%M" } else { day };
    let pool = show(context.profile.pool_m, Dimension::Length, system, 1);
    let badge = Freshness::of(site, context.age_days);
    let taken = context.profile.taken.map_or_else(
        || "cast at an unknown time".to_owned(),
        |t| format!("cast {}", t.with_timezone(&site.offset).format(hour)),
    );
    let age = context.age_days.map_or_else(String::new, |d| {
        let old = if to_the_hour { " old" } else { "" };
        format!(", {}{old}", days(d))
    });
    let moved = context.profile.flags.iter().any(|f| f.kind == "pool-moved");
    let badge = match badge {
        // the cast is of another pool: what is drawn is a guess, however fresh
        _ if moved => ("[! GUESSED: POOL MOVED]".to_owned(), Role::Outside),
        Freshness::Fresh => ("[fresh]".to_owned(), Role::Inside),
        Freshness::Ageing => ("[~ ageing]".to_owned(), Role::Warn),
        other => (format!("[! {}]", other.word().to_uppercase()), Role::Outside),
    };
    let changed = &session.draft().changed;
    let edited = |is: bool| if is { " (tried)" } else { "" };
    vec![
        (format!("pool {pool}{}", edited(changed.pool_m.is_some())), Role::Plain),
        (format!("| {taken}{}{age}", edited(changed.cast.is_some())), Role::Plain),
        badge,
        (
            format!(
                "| for {}{}",
                context.on.format(if to_the_hour { "%Y-%m-%d %H:%M" } else { day }),
                edited(changed.on.is_some())
            ),
            Role::Plain,
        ),
    ]
}

/// Each tab with its first column and width.
fn tab_places() -> impl Iterator<Item = (usize, &'static str, u16, u16)> {
    let mut column = 0;
    Screen::ALL.iter().enumerate().map(move |(i, (name, _))| {
        let wide = u16::try_from(name.len()).unwrap_or(0) + 4;
        let at = column;
        column += wide + 1;
        (i + 1, *name, at, wide)
    })
}

fn tabs(model: &Model, session: &Session, parts: &Parts, buf: &mut Buffer) {
    let area = parts.tabs;
    let mut end = 0;
    for (number, name, at, wide) in tab_places() {
        let here = Screen::ALL.get(number - 1).is_some_and(|s| s.1 == session.screen);
        let words = if here { format!("[{number} {name}]") } else { format!(" {number} {name} ") };
        let role = if here { Role::Chosen } else { Role::Plain };
        put(buf, area, at, 0, &words, model.look.style(role));
        end = at + wide;
    }
    let room = usize::from(area.width.saturating_sub(end + 2));
    let (words, role) = status(model, session);
    // what has no room beside the tabs stands where a message would
    if words.width() > room && model.message.is_none() {
        put(buf, parts.message, 0, 0, &words, model.look.style(role));
    } else {
        put_right(buf, area, area.width, 0, &cut(&words, room), model.look.style(role));
    }
}

/// Limits that the setting tried breaks.
fn broken_limits(session: &Session) -> usize {
    session.tried().map_or(0, |answer| answer.mix.limits.iter().filter(|c| c.broken()).count())
}

fn is_long(model: &Model, under: &Under) -> bool {
    (model.clock - under.since).num_milliseconds() >= AT_ONCE_MS
}

/// Whether what is shown of pool and mix has been waiting for the newer for longer than a moment.
pub(super) fn is_old(model: &Model) -> bool {
    model.quick.as_ref().is_some_and(|under| is_long(model, under))
}

/// What is being computed, or why the newest question has no answer.
pub(super) fn status(model: &Model, session: &Session) -> (String, Role) {
    if is_old(model) {
        let before = if session.shown.is_some() { "; what is shown is from before" } else { " ..." };
        return (format!("computing{before}"), Role::Warn);
    }
    if let Some(under) = model.long.as_ref().filter(|under| is_long(model, under)) {
        let before = if session.ranked.is_some() { "; what is shown is from before" } else { "" };
        return (format!("ranking {:.0} %{before}, Esc stops", 100.0 * under.done), Role::Warn);
    }
    if let Some(under) = model.ahead.as_ref().filter(|under| is_long(model, under)) {
        let old = session.screen == Screen::Season && session.season_shown().is_some_and(|s| s.old);
        let before = if old { "; what is shown is from before" } else { "" };
        let what = if model.prices_mixes() { "prices" } else { "season" };
        return (format!("{what} {:.0} %{before}, Esc stops", 100.0 * under.done), Role::Warn);
    }
    if let Some(under) = model.needed.as_ref().filter(|under| is_long(model, under)) {
        return (format!("cold water needed {:.0} %, Esc stops", 100.0 * under.done), Role::Warn);
    }
    for (under, what) in [(&model.past, "log"), (&model.note, "note")] {
        if let Some(under) = under.as_ref().filter(|under| is_long(model, under)) {
            return (format!("{what} {:.0} %, Esc on its screen stops", 100.0 * under.done), Role::Warn);
        }
    }
    let broken = broken_limits(session);
    if session.wrong.is_none() && session.screen == Screen::Mix && broken > 0 {
        let plural = if broken == 1 { "" } else { "s" };
        return (format!("! {broken} limit{plural} broken"), Role::Outside);
    }
    if session.wrong.is_some() {
        return ("! no answer to the last change; what is shown is from before".into(), Role::Outside);
    }
    let without = &session.draft().without;
    if !without.is_empty() {
        let names: Vec<String> = without
            .iter()
            .filter_map(|&o| Some(harmless(&session.base.site().outlets.get(o)?.name)))
            .collect();
        return (format!("! drill without {}", names.join(", ")), Role::Warn);
    }
    (String::new(), Role::Plain)
}

/// The number of the tab at a place.
pub(super) fn tab_at(model: &Model, parts: &Parts, at: Position) -> Option<usize> {
    model.session()?;
    if at.y != parts.tabs.y {
        return None;
    }
    tab_places().find(|(_, _, from, wide)| (*from..from + wide).contains(&at.x)).map(|t| t.0)
}
