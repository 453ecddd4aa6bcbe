//! The first sheet: the change order.

use chrono::{DateTime, FixedOffset, TimeDelta};

use crate::mix::{Blend, Gate, Setting};
use crate::order::{Moved, NoOrder, Order, Stand, Step};
use crate::report::caution;
use crate::report::page::{Block, Table};
use crate::site::{OrderTexts, Outlet, Site};
use crate::tasks::Context;
use crate::tasks::note::{NoteAnswer, StageChange, Unchecked};
use crate::tasks::river::Which;
use crate::units::say;

use super::head;
use super::words::{flow, flow_change, moment, opening, room, stand, warmth};

/// Labels of the lines to be signed where the site file names none (choice: roles, no names).
const SIGN: [&str; 4] = ["Prepared by", "Ordered by", "Dam safety", "Carried out by"];
/// A place in a table that is filled by hand.
const TO_FILL: &str = "________";
/// A stage that changes by less is left as it is, m (choice: a gauge shows no less).
const SAME_STAGE_M: f64 = 0.005;
/// Releases nearer than this are told as one, C (choice: no figure of the order shows less).
const SAME_C: f64 = 0.05;
/// Minutes whose seconds a clock time shows rounded.
const MINUTE_S: f64 = 60.0;
pub(super) fn sheet(context: &Context, answer: &NoteAnswer) -> Vec<Block> {
    let site = context.site();
    let mut out = vec![Block::Heading(1, "Change order".to_owned())];
    if !answer.not_ready.is_empty() {
        out.push(Block::Warning("NOT READY FOR SIGNATURE:".to_owned()));
        out.push(Block::List(answer.not_ready.clone()));
    }
    out.push(Block::Facts(head::facts(context, answer)));
    // where there is no order of moves nothing stands there that looks like one
    if let (Some(before), Some(Ok(_))) = (&answer.before, &answer.order) {
        out.push(Block::Table(difference(site, before, &answer.mix.setting)));
    }
    match &answer.order {
        Some(Ok(order)) => {
            out.push(Block::Table(moves(site, order, answer.begins)));
            out.push(Block::Table(expected(site, answer.before.as_ref(), order)));
            out.extend(otherwise(answer, order).map(Block::Words));
            out.push(Block::Words(kept(site)));
            out.extend(down_the_river(context, answer, order));
            out.extend(by_hand(site, order));
        }
        Some(Err(no)) => out.push(Block::Warning(no_order(site, no))),
        None if answer.stands => {
            let words = "The gates stand already as they are to stand. There is nothing to move, and no order of moves.";
            out.push(Block::Words(words.to_owned()));
        }
        None => {
            let words = "No order of moves: nobody knows what is set now. Log what is set, or give it under `now` in the site file.";
            out.push(Block::Warning(words.to_owned()));
        }
    }
    // those that weigh are reasons above, where there is an order to sign
    let rest = answer.not_checked.iter().filter(|one| answer.stands || !one.weighs());
    let rest: Vec<String> = rest.map(Unchecked::words).collect();
    if !rest.is_empty() {
        let also = if answer.stands { "Not checked" } else { "Not checked either" };
        out.push(Block::Words(format!("{also}, since nobody gave a limit: {}.", rest.join("; "))));
    }
    out.push(Block::Words(caution().to_owned()));
    out
}

/// Every gate that is open before or after: now, wanted, difference.
fn difference(site: &Site, before: &Setting, wanted: &Setting) -> Table {
    let find = |setting: &Setting, outlet: usize| -> Option<Gate> {
        setting.gates.iter().find(|gate| gate.outlet == outlet && setting.stands_open(site, gate)).copied()
    };
    let stands = |outlet: &Outlet, gate: Option<Gate>| match gate {
        None => "shut".to_owned(),
        Some(gate) => stand(outlet, &gate),
    };
    let row = |(index, outlet): (usize, &Outlet)| {
        let (now, then) = (find(before, index), find(wanted, index));
        if now.is_none() && then.is_none() {
            return None;
        }
        let by = then.map_or(0.0, |gate| gate.flow_m3s) - now.map_or(0.0, |gate| gate.flow_m3s);
        Some(vec![outlet.name.clone(), stands(outlet, now), stands(outlet, then), flow_change(by)])
    };
    Table {
        caption: "Gates".to_owned(),
        head: ["Gate", "Now", "To be set", "Difference"].map(str::to_owned).to_vec(),
        rows: site.outlets.iter().enumerate().filter_map(row).collect(),
        right: vec![3],
    }
}

/// The steps in their order, each with its earliest time.
fn moves(site: &Site, order: &Order, begins: DateTime<FixedOffset>) -> Table {
    let row = |(step, number): (&Step, usize)| {
        vec![
            number.to_string(),
            clock(site, begins, step.at_min),
            what(site, step),
            moved_stand(site, step.moved, step.from),
            moved_stand(site, step.moved, step.to),
            TO_FILL.to_owned(),
        ]
    };
    Table {
        caption: "Moves, one after the other; if a step is late, all after it are as much later".to_owned(),
        head: ["Step", "Not before", "Move", "From", "To", "Done at"].map(str::to_owned).to_vec(),
        rows: order.steps.iter().zip(1..).map(row).collect(),
        right: vec![0],
    }
}

/// The moment of a step, by the minute.
fn clock(site: &Site, begins: DateTime<FixedOffset>, at_min: f64) -> String {
    #[expect(clippy::cast_possible_truncation, reason = "held to a century of seconds")]
    let seconds = ((at_min.clamp(0.0, 5e7)).ceil() * MINUTE_S) as i64;
    let at = TimeDelta::try_seconds(seconds).and_then(|after| begins.checked_add_signed(after));
    moment(site, at.unwrap_or(begins))
}

/// What a step does.
fn what(site: &Site, step: &Step) -> String {
    let name = step.moved.name(site);
    if step.stop {
        return format!("stop the water of {name}, so that a gate can move");
    }
    let water = if step.to.flow_m3s > step.from.flow_m3s { "raise" } else { "lower" };
    match step.moved {
        Moved::Gate(_) => {
            let [from, to] = [step.from, step.to].map(|stand| stand.opening.unwrap_or_default());
            match (from > 0.0, to > 0.0) {
                (_, false) => format!("shut {name}"),
                (false, true) => format!("open {name}"),
                (true, true) if to > from => format!("open {name} further"),
                (true, true) => format!("shut {name} partly"),
            }
        }
        Moved::Outlet(_) if step.from.flow_m3s <= 0.0 => format!("open {name}"),
        Moved::Outlet(_) if step.to.flow_m3s <= 0.0 => format!("shut {name}"),
        Moved::Outlet(_) => format!("{water} {name}"),
        Moved::Well(_) => format!("{water} the flow of well {name}"),
    }
}

/// How what is moved stands.
fn moved_stand(site: &Site, moved: Moved, at: Stand) -> String {
    let outlet = match moved {
        Moved::Gate(index) | Moved::Outlet(index) => site.outlets.get(index),
        Moved::Well(_) => None,
    };
    match (moved, outlet, at.opening) {
        (Moved::Gate(_), Some(outlet), Some(open)) => opening(outlet, open),
        (Moved::Outlet(_), ..) if at.flow_m3s <= 0.0 => "shut".to_owned(),
        (Moved::Outlet(index), Some(outlet), Some(open)) => {
            stand(outlet, &Gate { outlet: index, opening: open, flow_m3s: at.flow_m3s })
        }
        _ => flow(at.flow_m3s),
    }
}

/// What is expected after each step.
fn expected(site: &Site, before: Option<&Setting>, order: &Order) -> Table {
    let water = |of: Option<Blend>| match of {
        None => ["nothing flows".to_owned(), "-".to_owned()],
        Some(of) => {
            let oxygen = of.oxygen_below_mg_l.map_or_else(String::new, |mg_l| format!(", {mg_l:.1} mg/L"));
            [flow(of.flow_m3s), warmth(of.temperature_c) + &oxygen]
        }
    };
    let heads = |heads_m: &[(usize, f64)]| {
        let one = |(well, head_m): &(usize, f64)| {
            Some(format!("{} {}", site.wells.get(*well)?.name, say::m(*head_m, 2)))
        };
        let all: Vec<String> = heads_m.iter().filter_map(one).collect();
        if all.is_empty() { "-".to_owned() } else { all.join("; ") }
    };
    let row = |(step, number): (&Step, usize)| {
        let mut nearest: Vec<String> =
            step.nearest.iter().filter_map(|check| room(site, check)).take(1).collect();
        let passes: Vec<&str> = step.passes.iter().map(|check| check.rule.name()).collect();
        if !passes.is_empty() {
            nearest.push(format!("passes without a halt: {}", passes.join(", ")));
        }
        let [total, temperature] = water(step.after);
        let nearest = if nearest.is_empty() { "-".to_owned() } else { nearest.join("; ") };
        vec![number.to_string(), total, temperature, heads(&step.heads_m), nearest]
    };
    let [total, temperature] = water(order.before);
    let known = (0..site.wells.len()).filter_map(|well| Some((well, before?.head_m(well)?)));
    let known: Vec<(usize, f64)> = known.collect();
    let now = vec!["now".to_owned(), total, temperature, heads(&known), "-".to_owned()];
    Table {
        caption:
            "Expected after each step: what leaves the dam, head over the wells, the limit that comes nearest"
                .to_owned(),
        head: ["Step", "Release", "Temperature, oxygen", "Head", "Nearest limit"].map(str::to_owned).to_vec(),
        rows: std::iter::once(now).chain(order.steps.iter().zip(1..).map(row)).collect(),
        right: vec![0],
    }
}

/// That the gates as they stand share a well otherwise than its flows are given, where the release shows it.
fn otherwise(answer: &NoteAnswer, order: &Order) -> Option<String> {
    let given = answer.mix.now.as_ref()?.1.release.temperature_c;
    let shared = order.before?.temperature_c;
    ((given - shared).abs() >= SAME_C).then(|| {
        format!(
            "Now is told as the openings share the flow of a well; with the flows as they were given the release now \
             is {}.",
            warmth(given)
        )
    })
}

/// The rates of change that the times keep.
fn kept(site: &Site) -> String {
    let limits = &site.limits;
    let told = [
        limits.flow_change_m3s_per_hour.map(|most| format!("{} in an hour", flow(most))),
        limits.flow_change_m3s_per_day.map(|most| format!("{} in a day", flow(most))),
        limits.temperature_change_c_per_hour.map(|most| format!("{} in an hour", say::dc(most, 1))),
        limits.temperature_change_c_per_day.map(|most| format!("{} in a day", say::dc(most, 1))),
    ];
    let told: Vec<String> = told.into_iter().flatten().collect();
    if told.is_empty() {
        return "The site gives no limit on how fast flow and temperature may change: the times above keep none."
            .to_owned();
    }
    format!(
        "The times keep the changes allowed: {}. A step that is done late puts off those after it, so that as much time \
         lies between. What a crew needs for a gate comes on top.",
        told.join(", ")
    )
}

/// Why no order is written.
fn no_order(site: &Site, no: &NoOrder) -> String {
    format!("{}. No order of moves is written.", no.words(site))
}

/// When the change is felt at the points of the river, and what the stage does there.
fn down_the_river(context: &Context, answer: &NoteAnswer, order: &Order) -> Vec<Block> {
    let site = context.site();
    let Some(river) = &site.river else {
        let words =
            "Arrival and stage down the river are not computed: the site file tells nothing of the river.";
        return vec![Block::Words(words.to_owned())];
    };
    let last_min = order.steps.last().map_or(0.0, |step| step.at_min);
    let tried = answer.river.ways.iter().find(|way| way.which == Which::Tried);
    let course = tried.and_then(|way| way.course.as_ref());
    let row = |stage: &StageChange| {
        let point = river.points.get(stage.point)?;
        let there = course.and_then(|course| course.points.iter().find(|at| at.point == stage.point));
        let at = |hours: Option<f64>, since_min: f64| {
            hours.map_or_else(
                || "not known".to_owned(),
                |hours| format!("{} ({hours:.1} h)", clock(site, answer.begins, since_min + 60.0 * hours)),
            )
        };
        Some(vec![
            point.name.clone(),
            stage_words(stage),
            at(there.map(|at| at.rise_first_h), 0.0),
            at(there.map(|at| at.rise_h), last_min),
            at(there.map(|at| at.travel_h), last_min),
            point.warning_h.map_or_else(|| TO_FILL.to_owned(), |hours| format!("{hours:.1} h before")),
        ])
    };
    let rows: Vec<Vec<String>> = answer.stages.iter().filter_map(row).collect();
    if rows.is_empty() {
        return vec![Block::Words("The site file names no point of the river.".to_owned())];
    }
    vec![Block::Table(Table {
        caption:
            "Down the river: first possible arrival counted from step 1; bulk and water from the last step, of steps before it earlier"
                .to_owned(),
        head: ["Point", "Stage", "First possible", "Bulk of the change", "Its water", "Warning"]
            .map(str::to_owned)
            .to_vec(),
        rows,
        right: Vec::new(),
    })]
}

fn stage_words(stage: &StageChange) -> String {
    if !stage.rated {
        return "stage rise not computed: no rating given".to_owned();
    }
    let Some((now, then)) = stage.stage_m else {
        return "stage rise not computed: a flow lies outside the rating".to_owned();
    };
    let by = then - now;
    if by.abs() < SAME_STAGE_M {
        return "no change of stage in the end".to_owned();
    }
    let way = if by > 0.0 { "rises" } else { "falls" };
    let fall = stage.fall_m.filter(|fall| *fall >= SAME_STAGE_M).map(|fall| {
        let allowed = stage.most_fall_m.map(|most| format!(", {} allowed", say::m(most, 2)));
        format!("; at most {} down in an hour{}", say::m(fall, 2), allowed.unwrap_or_default())
    });
    format!("{way} {}{}", say::m(by.abs(), 2), fall.unwrap_or_default())
}

/// Where to hold, when to stop, who may cancel, who signs: the site's own words, else lines to be filled.
fn by_hand(site: &Site, order: &Order) -> Vec<Block> {
    let told: &OrderTexts = &site.order;
    let mut facts: Vec<(String, String)> = Vec::new();
    let mut blanks: Vec<String> = Vec::new();
    let mut one = |label: &str, text: Option<String>| match text {
        Some(text) => facts.push((label.to_owned(), text)),
        None => blanks.push(label.to_owned()),
    };
    if told.to.is_none() {
        one("To", None);
    }
    let holds: Vec<String> = told
        .hold_points
        .iter()
        .filter_map(|hold| {
            let after = match hold.after {
                None => "after every step".to_owned(),
                Some(outlet) => format!("after step {}", steps_of(site, order, outlet)?),
            };
            Some(format!("{after}: {}", hold.text))
        })
        .collect();
    one("Hold", (!holds.is_empty()).then(|| holds.join("; ")));
    one("Stop when", (!told.stop_when.is_empty()).then(|| told.stop_when.join("; ")));
    one("May cancel", told.may_cancel.clone());
    one("Downstream warned", told.warning.clone());
    let sign = if told.sign.is_empty() { SIGN.map(str::to_owned).to_vec() } else { told.sign.clone() };
    blanks.extend(sign.iter().map(|label| format!("{label}, with date and time")));
    let mut out = Vec::new();
    if !facts.is_empty() {
        out.push(Block::Facts(facts));
    }
    out.push(Block::Blanks(blanks));
    out
}

/// The numbers of the steps that move an outlet, or the flow of its well; `None` where none does.
fn steps_of(site: &Site, order: &Order, outlet: usize) -> Option<String> {
    let well = site.outlets.get(outlet).and_then(|outlet| outlet.well);
    let of = |step: &Step| match step.moved {
        Moved::Gate(index) | Moved::Outlet(index) => index == outlet,
        Moved::Well(index) => Some(index) == well,
    };
    let numbers: Vec<String> = order
        .steps
        .iter()
        .zip(1..)
        .filter(|(step, _)| of(step))
        .map(|(_, number)| i32::to_string(&number))
        .collect();
    (!numbers.is_empty()).then(|| numbers.join(", "))
}
