//! The picture of the cast shown, with the casts laid over it.

use crate::tasks::{Cast, OutletState};
use crate::tui::draw::column::{Fixed, GateMark, GateState, Picture};
use crate::tui::look::Role;
use crate::tui::model::{Model, Session};
use crate::units::{Dimension, System, show};

use super::super::water;
use super::{Line, filled, flags, named};

/// The scale of temperature ends at a multiple of this, in the unit shown.
const ROUND: f64 = 5.0;

/// The picture; `None` where the cast looked at cannot be read.
pub(super) fn picture(model: &Model, session: &Session) -> Option<Picture> {
    let (context, answer) = session.pool_shown()?;
    let (site, profile, system) = (context.site(), &context.profile, model.system());
    let date = context.on.date_naive();
    let gate = |state: &OutletState| {
        let o = &site.outlets[state.outlet];
        let part = o.open_part(1.0);
        let gate_state = match (state.wet, state.kept) {
            (false, _) => GateState::Dry,
            _ if water::is_out(site, state.outlet, date) => GateState::Out,
            (true, Some(false)) => GateState::Short,
            (true, _) => GateState::Wet,
        };
        GateMark {
            name: o.name.clone(),
            centre_m: part.centre_m,
            top_m: part.top_m,
            bottom_m: part.top_m - part.height_m,
            state: gate_state,
            chosen: false,
            note: match (state.wet, state.submergence_m) {
                (false, _) => String::new(),
                (true, over) if over < 0.0 => "top in air".into(),
                (true, over) => show(over, Dimension::Length, system, 1),
            },
        }
    };
    let overlays = laid_over(session).into_iter().filter_map(|c| c.profile());
    let pool = water::pool(site, profile, &answer.layering, system);
    Some(Picture {
        overlays: overlays.map(water::water).collect(),
        cold_c: session.pool.colder_c.or(pool.cold_c),
        gates: answer.outlets.iter().map(gate).collect(),
        flags: flags::at_elevations(profile),
        cursor_m: session.pool.cursor_m,
        fixed: Fixed { temperature_c: season_c(session, system), ..Fixed::default() },
        ..pool
    })
}

/// Casts laid over the one shown, in the order they were.
pub(super) fn laid_over(session: &Session) -> Vec<&Cast> {
    let shown = session.pool_shown().map(|(context, _)| context.profile.file.as_str());
    let others = session.pool.over.iter().filter(|file| Some(file.as_str()) != shown);
    others.filter_map(|file| session.cast(file)).filter(|c| c.pool.is_some()).collect()
}

/// Ends of the temperatures of the season, C: every cast is drawn on one scale, so that two can be compared.
fn season_c(session: &Session, system: System) -> Option<(f64, f64)> {
    let unit = system.unit(Dimension::Temperature);
    let profiles = session.casts.iter().flatten().filter_map(Cast::profile);
    // the cast worked with may lie elsewhere, or be newer than the list
    let own = session.pool_shown().map(|(context, _)| &context.profile);
    let samples = profiles.chain(own).flat_map(|p| &p.samples);
    let values = || samples.clone().map(|s| unit.from_si(s.temperature_c));
    let (low, high) = (values().reduce(f64::min)?, values().reduce(f64::max)?);
    let (low, high) = ((low / ROUND).floor() * ROUND, (high / ROUND).ceil() * ROUND);
    (session.casts.is_some() && low < high).then(|| (unit.to_si(low), unit.to_si(high)))
}

/// Which curves are which cast, where any is laid over.
pub(super) fn legend(session: &Session, width: usize) -> Vec<Line> {
    let over = laid_over(session);
    let Some((context, _)) = session.pool_shown().filter(|_| !over.is_empty()) else { return Vec::new() };
    let own =
        session.cast(&context.profile.file).map_or_else(|| "this cast".to_owned(), |c| named(session, c));
    let dotted: Vec<String> = (1..)
        .zip(&over)
        .map(|(number, cast)| {
            let name = named(session, cast);
            if over.len() > 1 { format!("t{number} o{number} {name}") } else { format!("t o {name}") }
        })
        .collect();
    let words = format!("T O2 {own}; laid over, dotted: {}", dotted.join(", "));
    filled(&words, width, 2).into_iter().map(|line| (line, Role::Plain)).collect()
}
