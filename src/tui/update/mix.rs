//! The mix screen: turning, typing, trying.

use chrono::Days;

use crate::site::{Outlet, SAME_OPENING, Site};
use crate::target::Target;
use crate::tasks::{Context, Given, MixAnswer};
use crate::units::{Dimension, System, figure};

use super::super::keys::Action;
use super::super::model::{
    Cell, Draft, Field, Model, Nudge, Over, Session, Typed, Value, asked, opening_of, set_flow, set_opening,
    set_release, set_total, total_m3s,
};
use super::{Effect, ask_mixes, change, complain, mix_rows, recompute, say};

/// Step of a flow and a large one, in the unit shown: cfs and m3/s (choice).
const FLOW: [(f64, f64); 2] = [(10.0, 100.0), (0.5, 5.0)];
/// The same of the pool, ft and m (choice).
const POOL: [(f64, f64); 2] = [(0.5, 5.0), (0.1, 1.0)];
/// The same of a temperature or a difference of them, F and C (choice).
const TEMPERATURE: [(f64, f64); 2] = [(0.5, 2.0), (0.25, 1.0)];
/// The same of oxygen, mg/L (choice).
const OXYGEN: (f64, f64) = (0.5, 2.0);
/// The same of an opening without positions, percent (choice).
const OPENING: (f64, f64) = (5.0, 25.0);
/// The same of the date, days (choice).
const DAYS: (u64, u64) = (1, 7);
/// Lines of a page of what is said (choice).
const PAGE: usize = 3;
/// Most tries kept side by side (choice).
pub(super) const TRIES: usize = 9;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    match action {
        Action::Up => chosen(model, -1, 0),
        Action::Down => chosen(model, 1, 0),
        Action::Left => chosen(model, 0, -1),
        Action::Right => chosen(model, 0, 1),
        Action::More | Action::Less | Action::MuchMore | Action::MuchLess | Action::Enter => {
            let cell = model.session().map(|s| s.mix.cell);
            cell.map_or_else(Vec::new, |cell| edit(model, cell, action))
        }
        Action::Toggle => toggled(model),
        Action::Undo => back_and_forth(model, true),
        Action::Redo => back_and_forth(model, false),
        Action::Solve => solving(model),
        Action::NewTry => kept(model),
        Action::DropTry => change(model, |_, draft| {
            if draft.tries.len() > 1 {
                draft.tries.remove(draft.at);
                draft.at = draft.at.min(draft.tries.len() - 1);
                draft.beside = None;
            }
        }),
        Action::Before => stepped(model, -1),
        Action::After => stepped(model, 1),
        Action::Compare => change(model, |_, draft| {
            // the next one after the one beside; after the last none
            let from = draft.beside.map_or(0, |b| b + 1);
            draft.beside = (from..draft.tries.len()).find(|i| *i != draft.at);
        }),
        Action::Reset => change(model, |session, draft| {
            if let Some(tried) = draft.tried_mut() {
                *tried = session.base.now_given().0;
            }
        }),
        Action::PageUp => scrolled(model, false),
        Action::PageDown => scrolled(model, true),
        _ => Vec::new(),
    }
}

/// Turns a cell or begins to type into it, as a key asks for.
pub(super) fn edit(model: &mut Model, cell: Cell, action: Action) -> Vec<Effect> {
    match action {
        Action::More => nudged(model, cell, Nudge::More),
        Action::Less => nudged(model, cell, Nudge::Less),
        Action::MuchMore => nudged(model, cell, Nudge::MuchMore),
        Action::MuchLess => nudged(model, cell, Nudge::MuchLess),
        _ => typing(model, cell),
    }
}

fn chosen(model: &mut Model, down: isize, right: isize) -> Vec<Effect> {
    if let Some(session) = model.session_mut() {
        let context = session.context();
        let cell = session.mix.cell.moved(context.site(), context.on.date_naive(), down, right);
        session.mix.cell = cell;
    }
    Vec::new()
}

fn scrolled(model: &mut Model, down: bool) -> Vec<Effect> {
    let last = mix_rows(model);
    if let Some(session) = model.session_mut() {
        let at = session.mix.scroll.min(last);
        session.mix.scroll = if down { (at + PAGE).min(last) } else { at.saturating_sub(PAGE) };
    }
    Vec::new()
}

fn stepped(model: &mut Model, by: isize) -> Vec<Effect> {
    change(model, |_, draft| {
        draft.at = draft.at.saturating_add_signed(by).min(draft.tries.len().saturating_sub(1));
        if draft.beside == Some(draft.at) {
            draft.beside = None;
        }
    })
}

fn kept(model: &mut Model) -> Vec<Effect> {
    let full = model.session().is_some_and(|s| s.draft().tries.len() >= TRIES);
    if full {
        complain(model, format!("{TRIES} tries are kept; drop one with d"));
        return Vec::new();
    }
    let effects = change(model, |_, draft| {
        if let Some(tried) = draft.tried().cloned() {
            draft.beside = Some(draft.at);
            draft.tries.push(tried);
            draft.at = draft.tries.len() - 1;
        }
    });
    let at = model.session().map_or(0, |s| s.draft().at + 1);
    say(model, format!("try {at} begun; the one before stands beside it"));
    effects
}

pub(super) fn back_and_forth(model: &mut Model, back: bool) -> Vec<Effect> {
    let Some(session) = model.session_mut() else { return Vec::new() };
    let before = session.draft().clone();
    let done = if back { session.history.undo() } else { session.history.redo() };
    if !done {
        complain(model, if back { "nothing to take back" } else { "nothing to make again" });
        return Vec::new();
    }
    model.message = None;
    recompute(model, &before)
}

fn solving(model: &mut Model) -> Vec<Effect> {
    let tried = model.session().and_then(|s| s.draft().tried().cloned());
    ask_mixes(model, tried).into_iter().collect()
}

fn toggled(model: &mut Model) -> Vec<Effect> {
    let Some(cell) = model.session().map(|s| s.mix.cell) else { return Vec::new() };
    let (Cell::Opening(outlet) | Cell::Flow(outlet)) = cell else {
        complain(model, "Space opens or shuts a gate; choose one");
        return Vec::new();
    };
    let has_opening = model.session().is_some_and(|s| s.base.site().outlets[outlet].has_opening());
    if !has_opening {
        // shut is no flow; how much it opens to only the user knows
        return put(model, Cell::Flow(outlet), &Value::Number(Some(0.0)));
    }
    change(model, |session, draft| {
        if let Some(tried) = draft.tried_mut() {
            let open = opening_of(tried, outlet) > SAME_OPENING;
            set_opening(session.base.site(), tried, outlet, if open { 0.0 } else { 1.0 });
        }
    })
}

/// The value of a cell as it is now, in SI.
fn value(session: &Session, cell: Cell) -> Option<f64> {
    let context = session.context();
    let site = context.site();
    let draft = session.draft();
    let tried = draft.tried()?;
    let target = |i: usize| targets(session, draft).into_iter().nth(i);
    match cell {
        Cell::Opening(i) => Some(opening_of(tried, i)),
        Cell::Flow(i) => tried.flows.iter().find(|g| g.outlet == i).map(|g| g.flow_m3s).or_else(|| {
            let setting = &session.tried()?.setting;
            setting.gates.iter().find(|g| g.outlet == i).map(|g| g.flow_m3s)
        }),
        Cell::Total(i) => total_m3s(site, tried, i),
        Cell::Release => Some(by_flow_m3s(site, tried) + beside_m3s(session)),
        Cell::Pool => Some(draft.changed.pool_m.unwrap_or(context.profile.pool_m)),
        Cell::Date => None,
        Cell::Low(i) => target(i)?.low_c,
        Cell::Preferred(i) => target(i)?.preferred_c,
        Cell::High(i) => target(i)?.high_c,
        Cell::Oxygen(i) => target(i)?.oxygen_min_mg_l,
    }
}

/// What a setting sets by flow, m3/s.
fn by_flow_m3s(site: &Site, given: &Given) -> f64 {
    let passing = asked(site, given);
    let flows = passing.flows.iter().map(|g| g.flow_m3s);
    flows.chain(passing.totals.iter().map(|t| t.1)).sum()
}

/// What passes beside that, m3/s: outlets set by their opening alone, and what spills by itself.
fn beside_m3s(session: &Session) -> f64 {
    let of = |answer: &MixAnswer| answer.setting.gates.iter().map(|g| g.flow_m3s).sum::<f64>();
    let given = session.draft().tried().map_or(0.0, |given| by_flow_m3s(session.base.site(), given));
    session.tried_now().map_or(0.0, |answer| (of(answer) - given).max(0.0))
}

fn targets(session: &Session, draft: &Draft) -> Vec<Target> {
    draft.changed.targets.clone().unwrap_or_else(|| session.base.site().targets.clone())
}

/// Turns a cell.
fn nudged(model: &mut Model, cell: Cell, nudge: Nudge) -> Vec<Effect> {
    let system = model.system();
    let Some(session) = model.session() else { return Vec::new() };
    let now = value(session, cell);
    let of = |steps: [(f64, f64); 2], dimension: Dimension| {
        let (fine, large) = steps[usize::from(system == System::Si)];
        let unit = system.unit(dimension);
        let step = if nudge.is_large() { large } else { fine };
        move |value: f64| unit.to_si(nudge.from(unit.from_si(value), step))
    };
    let next = match cell {
        Cell::Date => {
            let context: &Context = session.context();
            let days = Days::new(if nudge.is_large() { DAYS.1 } else { DAYS.0 });
            let on = session.draft().changed.on.unwrap_or(context.on);
            let to = if nudge.sign() > 0.0 { on.checked_add_days(days) } else { on.checked_sub_days(days) };
            return to.map_or_else(Vec::new, |to| put(model, cell, &Value::Moment(to)));
        }
        Cell::Opening(i) => next_opening(&session.base.site().outlets[i], now.unwrap_or(0.0), nudge),
        Cell::Flow(_) | Cell::Total(_) | Cell::Release => {
            of(FLOW, Dimension::Flow)(now.unwrap_or(0.0)).max(0.0)
        }
        Cell::Pool => {
            let pool = &session.base.site().pool;
            // the surface must stay above the bed and within the table
            let next = of(POOL, Dimension::Length)(now.unwrap_or(pool.full_m));
            if next <= pool.bed_m || next > pool.top_m() {
                complain(model, "the pool table ends here");
                return Vec::new();
            }
            next
        }
        Cell::Low(i) | Cell::Preferred(i) | Cell::High(i) => {
            let target = targets(session, session.draft()).into_iter().nth(i);
            let dimension = target.as_ref().map_or(Dimension::Temperature, Target::dimension);
            let any = target.and_then(|t| t.preferred_c.or(t.low_c).or(t.high_c));
            match now.or(any) {
                Some(value) => of(TEMPERATURE, dimension)(value),
                None => return typing(model, cell),
            }
        }
        Cell::Oxygen(_) => {
            let step = if nudge.is_large() { OXYGEN.1 } else { OXYGEN.0 };
            nudge.from(now.unwrap_or(0.0), step).max(0.0)
        }
    };
    put(model, cell, &Value::Number(Some(next)))
}

/// The position after an opening, or a step of it where the gate has none.
fn next_opening(outlet: &Outlet, now: f64, nudge: Nudge) -> f64 {
    if outlet.positions.is_empty() {
        let step = if nudge.is_large() { OPENING.1 } else { OPENING.0 };
        return (nudge.from(100.0 * now, step) / 100.0).clamp(0.0, 1.0);
    }
    if nudge.is_large() {
        return if nudge.sign() > 0.0 { 1.0 } else { 0.0 };
    }
    let places = outlet.positions.iter().map(|p| p.opening).chain([0.0]);
    let beyond = places.filter(|p| (p - now) * nudge.sign() > SAME_OPENING);
    beyond.min_by(|a, b| (a - now).abs().total_cmp(&(b - now).abs())).unwrap_or(now)
}

/// Begins to type into a cell.
fn typing(model: &mut Model, cell: Cell) -> Vec<Effect> {
    let system = model.system();
    let Some(session) = model.session() else { return Vec::new() };
    // what stands there can be typed over or mended: a bare number in the unit shown
    let plain = |value: f64, dimension: Dimension, decimals: u8| {
        figure(value, system.unit(dimension), decimals).replace(',', "")
    };
    let now = value(session, cell);
    let fine = u8::from(system == System::Si);
    let text = match cell {
        Cell::Date => session.context().on.format("%Y-%m-%d %H:%M").to_string(),
        Cell::Opening(i) => now.map_or_else(String::new, |v| session.base.site().outlets[i].opening_name(v)),
        Cell::Flow(_) | Cell::Total(_) | Cell::Release => {
            now.map_or_else(String::new, |v| plain(v, Dimension::Flow, fine))
        }
        Cell::Pool => now.map_or_else(String::new, |v| plain(v, Dimension::Length, 1 + fine)),
        Cell::Low(i) | Cell::Preferred(i) | Cell::High(i) => {
            let target = targets(session, session.draft()).into_iter().nth(i);
            let dimension = target.map_or(Dimension::Temperature, |t| t.dimension());
            now.map_or_else(String::new, |v| plain(v, dimension, 1))
        }
        Cell::Oxygen(_) => now.map_or_else(String::new, |v| plain(v, Dimension::Concentration, 1)),
    };
    model.over = Some(Over::Field(Field::new(Typed::Cell(cell), text)));
    Vec::new()
}

/// Puts a value into a cell.
pub(super) fn put(model: &mut Model, cell: Cell, value: &Value) -> Vec<Effect> {
    let before = model.session().map(|s| s.draft().clone());
    let effects = put_into(model, cell, value);
    if cell == Cell::Release && model.session().map(Session::draft) == before.as_ref() {
        complain(
            model,
            "so the total cannot be: what is set by flow shares it out, beside what passes anyway",
        );
    }
    effects
}

fn put_into(model: &mut Model, cell: Cell, value: &Value) -> Vec<Effect> {
    change(model, |session, draft| {
        let site: &Site = session.base.site();
        let number = if let Value::Number(number) = value { *number } else { None };
        let split = session.tried_now().map(|answer| answer.setting.clone());
        let beside_m3s = beside_m3s(session);
        match (cell, number) {
            (Cell::Date, _) => {
                if let Value::Moment(on) = value {
                    draft.changed.on = Some(*on);
                }
            }
            (Cell::Low(i) | Cell::Preferred(i) | Cell::High(i) | Cell::Oxygen(i), _) => {
                let mut targets = targets(session, draft);
                if let Some(target) = targets.get_mut(i) {
                    match cell {
                        Cell::Low(_) => target.low_c = number,
                        Cell::Preferred(_) => target.preferred_c = number,
                        Cell::High(_) => target.high_c = number,
                        _ => (target.oxygen_min_mg_l, target.oxygen_min_share) = (number, None),
                    }
                }
                draft.changed.targets = Some(targets).filter(|t| *t != site.targets);
            }
            (_, None) => {}
            (Cell::Pool, Some(pool_m)) => draft.changed.pool_m = Some(pool_m),
            (cell, Some(number)) => {
                let Some(tried) = draft.tried_mut() else { return };
                match cell {
                    Cell::Opening(i) => set_opening(site, tried, i, number),
                    Cell::Flow(i) => set_flow(site, tried, i, number, split.as_ref()),
                    Cell::Total(i) => set_total(site, tried, i, number),
                    Cell::Release if set_release(site, tried, number, beside_m3s) => {
                        draft.release_m3s = Some(number);
                    }
                    _ => {}
                }
            }
        }
    })
}
