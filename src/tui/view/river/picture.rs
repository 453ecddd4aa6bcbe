//! The pictures along the river: temperature and oxygen, every release, what each point asks.

use crate::plot::Stroke;
use crate::problem::harmless;
use crate::river::{Figures, Place};
use crate::target::{DAM, Target};
use crate::tasks::river::{Way, Which};
use crate::tui::draw::along::{AlongPicture, AlongPoint, AlongWay, Ends};
use crate::tui::look::Role;
use crate::units::Dimension;

use super::Screen;

/// Oxygen below which the figure shown would be zero, mg/L (choice).
const LEAST_MG_L: f64 = 0.05;

/// Temperature and oxygen; names stand below the temperature where it is alone.
pub(super) fn pictures(screen: &Screen, alone: bool) -> [AlongPicture; 2] {
    let river = screen.down.context.site().river.as_ref();
    let length_m = river.map_or(0.0, |r| {
        let ends = r.reaches.iter().map(|reach| reach.from_m + reach.length_m);
        ends.chain(r.points.iter().map(|p| p.at_m)).fold(0.0, f64::max)
    });
    let joins = river.map_or_else(Vec::new, |r| {
        let all = r.reaches.iter().flat_map(|reach| &reach.inflows);
        all.map(|inflow| (inflow.at_m, harmless(&inflow.name))).collect()
    });
    let picture = |title: &str, dimension: Dimension, foot: bool| AlongPicture {
        title: title.to_owned(),
        dimension,
        system: screen.model.system(),
        length_m,
        ways: ways(screen, dimension),
        points: points(screen, dimension),
        dam: dam(screen, dimension),
        joins: joins.clone(),
        chosen: chosen(screen),
        foot,
    };
    [picture("Temperature", Dimension::Temperature, alone), picture("Oxygen", Dimension::Concentration, true)]
}

fn ways(screen: &Screen, dimension: Dimension) -> Vec<AlongWay> {
    let warm = dimension == Dimension::Temperature;
    let value = |f: &Figures| if warm { Some(f.mean_c) } else { f.oxygen_mean_mg_l };
    let of = |way: &Way| {
        let course = way.course.as_ref()?;
        let place = |p: &Place| Some((p.at_m, value(&p.figures)?));
        let (letter, role) = mark(way.which);
        let points = &screen.down.context.site().river.as_ref()?.points;
        let band = |(point, spread): (&crate::site::Point, &crate::mix::Spread)| {
            let band = if warm { spread.band_c() } else { spread.band_oxygen_mg_l() };
            band.map(|(low, high)| (point.at_m, [low, high]))
        };
        // one band is enough to see how sure it is; three would hide the lines
        let banded = screen.down.answer.spoken().is_some_and(|spoken| spoken.which == way.which);
        let bands =
            if banded { points.iter().zip(&way.spreads).filter_map(band).collect() } else { Vec::new() };
        Some(AlongWay {
            letter,
            name: way.which.word().to_owned(),
            role,
            stroke: stroke(way.which),
            places: course.along.iter().filter_map(place).collect(),
            bands,
        })
    };
    screen.down.answer.ways.iter().filter_map(of).collect()
}

/// The letter of a release and what it means.
pub(super) fn mark(which: Which) -> (char, Role) {
    match which {
        Which::Now => ('N', Role::Now),
        Which::Tried => ('T', Role::Tried),
        Which::Best => ('B', Role::Inside),
    }
}

/// Lines that cross are told apart by their strength too.
fn stroke(which: Which) -> Stroke {
    match which {
        Which::Now => Stroke::Dotted,
        Which::Tried => Stroke::Heavy,
        Which::Best => Stroke::Thin,
    }
}

/// What is asked of the release at the dam itself.
fn dam(screen: &Screen, dimension: Dimension) -> Ends {
    let window = screen.down.answer.windows.iter().find(|w| w.point.is_none());
    window.map_or((None, None), |w| match dimension {
        Dimension::Temperature => (w.asked_c[0], w.asked_c[1]),
        _ => (w.floor_mg_l, None),
    })
}

fn points(screen: &Screen, dimension: Dimension) -> Vec<AlongPoint> {
    let Some(river) = &screen.down.context.site().river else { return Vec::new() };
    let windows = &screen.down.answer.windows;
    let point = |(i, p): (usize, &crate::site::Point)| {
        let window = windows.iter().find(|w| w.point == Some(i));
        let (range, needed) = match (window, dimension) {
            (None, _) => ((None, None), None),
            (Some(w), Dimension::Temperature) => {
                ((w.asked_c[0], w.asked_c[1]), (w.reachable == Some(true)).then_some((w.low_c, w.high_c)))
            }
            // a floor that any release keeps asks nothing of it
            (Some(w), _) => {
                let least = w.oxygen_min_mg_l.filter(|least| *least >= LEAST_MG_L);
                ((w.floor_mg_l, None), least.map(|least| (Some(least), None)))
            }
        };
        AlongPoint { name: harmless(&p.name), at_m: p.at_m, range, window: needed }
    };
    river.points.iter().enumerate().map(point).collect()
}

/// The point of the rule chosen.
fn chosen(screen: &Screen) -> Option<usize> {
    let rule = super::rules::chosen(screen)?;
    at(screen, rule)
}

/// The point of a rule; `None` for the dam.
pub(super) fn at(screen: &Screen, rule: &Target) -> Option<usize> {
    let river = screen.down.context.site().river.as_ref()?;
    river.points.iter().position(|p| p.name == rule.point && rule.point != DAM)
}
