//! What is being typed: checked at every key, taken when it is whole.

use chrono::{DateTime, FixedOffset};
use tui_input::Input;

use crate::files::cast::{TIME_CURE, parse_time};
use crate::site::{Outlet, Site};
use crate::target::Target;
use crate::tasks::Context;
use crate::units::{Dimension, System, parse, show};

use super::board::Cell;

/// What a field is for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Typed {
    /// A cell of the board.
    Cell(Cell),
    /// A threshold of cold water.
    Colder,
    /// The total release of the ranking.
    Release,
    /// The folder of a new site.
    NewSite,
    /// A line of what is to be logged.
    Line(Line),
    /// Words of the note.
    Note(NoteLine),
}

/// A line of what is to be logged.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Line {
    /// By whom.
    By,
    /// Why.
    Why,
    /// The day by which it is to be decided again.
    Until,
    /// What would end it earlier.
    Trigger,
    /// What happened.
    Happened,
    /// From when it happened.
    From,
    /// Its last day, or `open`.
    Ended,
}

/// A line of the note.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NoteLine {
    /// Why, in the user's words.
    Why,
    /// Anything else.
    Remarks,
    /// When the change begins.
    Begins,
    /// The file to save it in.
    File,
    /// The same, a file of that name being there that is to be replaced.
    FileThere,
}

impl Line {
    /// What stands before it.
    pub fn label(self) -> &'static str {
        match self {
            Self::By => "by",
            Self::Why => "why",
            Self::Until | Self::Ended => "until",
            Self::Trigger => "ends if",
            Self::Happened => "what",
            Self::From => "from",
        }
    }

    /// What may be typed, while it is.
    pub fn hint(self) -> &'static str {
        match self {
            Self::By => "who says so; kept while the program runs",
            Self::Why => "why it is decided so, in your words",
            Self::Until => "the day by which it is decided again; empty: none is named",
            Self::Trigger => "what would end it earlier, in your words; may stay empty",
            Self::Happened => "what happened, in your words; its days are left out of learning",
            Self::From => "since when; empty: the date of the answer",
            Self::Ended => "its last day, or: open; empty: the day it begins",
        }
    }
}

/// A value that was typed.
#[derive(Debug, Clone, PartialEq)]
pub enum Value {
    /// A number in SI; an opening 0 to 1. `None` takes a bound away.
    Number(Option<f64>),
    /// A moment.
    Moment(DateTime<FixedOffset>),
    /// Words.
    Words(String),
}

/// A field.
#[derive(Debug, Clone)]
pub struct Field {
    /// What it is for.
    pub typed: Typed,
    /// What stands in it.
    pub input: Input,
    /// What is wrong with that.
    pub wrong: Option<String>,
    /// Whether it is as it was: the first letter typed takes its place.
    pub untouched: bool,
}

impl Field {
    /// A field that holds some text.
    pub fn new(typed: Typed, text: String) -> Self {
        Self { typed, input: Input::new(text), wrong: None, untouched: true }
    }

    /// What was typed, understood; a bare number is in the units shown.
    ///
    /// # Errors
    /// What is wrong with it, in words.
    pub fn value(&self, context: Option<&Context>, system: System) -> Result<Value, String> {
        let text = self.input.value().trim();
        let number = |dimension: Dimension| {
            parse(text, dimension, system.unit(dimension)).map_err(|error| error.to_string())
        };
        let above_zero = |value: f64, what: &str| {
            if value < 0.0 {
                Err(format!("{what} cannot be negative"))
            } else {
                Ok(Value::Number(Some(value)))
            }
        };
        let bound = |dimension: Dimension| {
            if text.is_empty() {
                Ok(Value::Number(None))
            } else {
                number(dimension).map(|v| Value::Number(Some(v)))
            }
        };
        match self.typed {
            Typed::Line(line) => said(line, text, context),
            Typed::Note(line) => note(line, text, context),
            Typed::NewSite if text.is_empty() => Err("type the name of a folder".into()),
            Typed::NewSite => Ok(Value::Words(text.to_owned())),
            Typed::Colder => bound(Dimension::Temperature),
            // the site's own again
            Typed::Release if text.is_empty() => Ok(Value::Number(None)),
            Typed::Release => match number(Dimension::Flow)? {
                flow if flow > 0.0 => Ok(Value::Number(Some(flow))),
                _ => Err("give a flow above zero".into()),
            },
            Typed::Cell(cell) => match cell {
                Cell::Opening(i) => match context.and_then(|c| c.site().outlets.get(i)) {
                    Some(outlet) => opening(outlet, text),
                    None => Err("there is no such gate".into()),
                },
                Cell::Flow(_) | Cell::Total(_) | Cell::Release => {
                    number(Dimension::Flow).and_then(|v| above_zero(v, "a flow"))
                }
                Cell::Pool => pool(context.map(Context::site), number(Dimension::Length)?, system),
                Cell::Date => moment(text, context).map(Value::Moment),
                Cell::Low(i) | Cell::Preferred(i) | Cell::High(i) => {
                    let target = context.and_then(|c| c.site().targets.get(i)).cloned();
                    let value = bound(target.as_ref().map_or(Dimension::Temperature, Target::dimension))?;
                    target.map_or(Ok(()), |target| fits(target, cell, &value, system)).map(|()| value)
                }
                Cell::Oxygen(_) => match bound(Dimension::Concentration)? {
                    Value::Number(Some(v)) => above_zero(v, "oxygen"),
                    none => Ok(none),
                },
            },
        }
    }

    /// Says what is wrong with what stands in it now.
    pub fn check(&mut self, context: Option<&Context>, system: System) {
        self.wrong = self.value(context, system).err();
    }
}

fn moment(text: &str, context: Option<&Context>) -> Result<DateTime<FixedOffset>, String> {
    let context = context.ok_or("there is no site")?;
    parse_time(text, context.site().offset).map_err(|why| format!("{why}; {TIME_CURE}"))
}

/// A line of what is to be logged; what only the log can tell is checked when it is written.
fn said(line: Line, text: &str, context: Option<&Context>) -> Result<Value, String> {
    let words = || Ok(Value::Words(text.to_owned()));
    match line {
        Line::By if text.is_empty() => Err("type a name: the log needs to know who says so".into()),
        Line::Why if text.is_empty() => Err("type why: a decision is logged with its reason".into()),
        Line::Happened if text.is_empty() => Err("type what happened".into()),
        Line::By | Line::Why | Line::Trigger | Line::Happened => words(),
        Line::Until | Line::From | Line::Ended if text.is_empty() => words(),
        Line::Ended if text == "open" => words(),
        Line::From | Line::Ended => moment(text, context).map(|_| Value::Words(text.to_owned())),
        Line::Until => {
            let until = moment(text, context)?.date_naive();
            match context.map(|c| c.on.date_naive()).filter(|on| until < *on) {
                Some(on) => Err(format!("it lies before the day from which it holds, {on}")),
                None => words(),
            }
        }
    }
}

/// A line of the note.
fn note(line: NoteLine, text: &str, context: Option<&Context>) -> Result<Value, String> {
    match line {
        NoteLine::Why | NoteLine::Remarks => {}
        NoteLine::Begins if text.is_empty() => {}
        NoteLine::Begins => _ = moment(text, context)?,
        NoteLine::File | NoteLine::FileThere if text.is_empty() => {
            return Err("type the name of a file".into());
        }
        NoteLine::File | NoteLine::FileThere => _ = super::note::format_of(text)?,
    }
    Ok(Value::Words(text.to_owned()))
}

fn opening(outlet: &Outlet, text: &str) -> Result<Value, String> {
    if let Some(position) = outlet.positions.iter().find(|p| p.name == text && p.name.parse::<f64>().is_err())
    {
        return Ok(Value::Number(Some(position.opening)));
    }
    let unit = System::Si.unit(Dimension::Percent);
    let percent = parse(text, Dimension::Percent, unit).map_err(|error| error.to_string())?;
    if (0.0..=100.0).contains(&percent) {
        Ok(Value::Number(Some(percent / 100.0)))
    } else {
        Err("an opening lies between 0 and 100 %".into())
    }
}

/// Whether a target can hold with another end or preferred temperature.
fn fits(mut target: Target, cell: Cell, value: &Value, system: System) -> Result<(), String> {
    let Value::Number(number) = value else { return Ok(()) };
    match cell {
        Cell::Low(_) => target.low_c = *number,
        Cell::Preferred(_) => target.preferred_c = *number,
        _ => target.high_c = *number,
    }
    match target.problems("").first() {
        Some(problem) => Err(problem.advice(system)),
        None => Ok(()),
    }
}

fn pool(site: Option<&Site>, pool_m: f64, system: System) -> Result<Value, String> {
    match site {
        Some(site) if pool_m > site.pool.bed_m && pool_m <= site.pool.top_m() => {
            Ok(Value::Number(Some(pool_m)))
        }
        Some(site) => {
            let [low, high] =
                [site.pool.bed_m, site.pool.top_m()].map(|m| show(m, Dimension::Length, system, 1));
            Err(format!("outside the pool table, {low} to {high}"))
        }
        None => Err("there is no site".into()),
    }
}
