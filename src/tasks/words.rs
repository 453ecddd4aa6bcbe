//! A setting as it is typed: `--set N1=30`, `--open N3=50%`, `--release 40`, and `--now` for either of the first.

use crate::intake;
use crate::record::line::Gates;
use crate::site::{SAME_OPENING, SetNow, Site};
use crate::units::Dimension;

use super::Failure;

/// One word of a setting, with what was typed after its option.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Word<'a> {
    /// `--set`: the flow of an outlet, its opening after an `@` where it is not fully open, or the total of a well; a
    /// crest that spills by itself by name alone.
    Set(&'a str),
    /// `--open`: a gate and its opening, percent or the name of a position.
    Open(&'a str),
    /// `--release`: the total of the one well that has open gates.
    Release(&'a str),
    /// `--now`: a flow as with `--set`, or an opening: what ends in `%` or names a position in words.
    Now(&'a str),
}

/// An outlet with a flow that is metered or regulated elsewhere.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ByFlow {
    /// Index of the outlet.
    pub outlet: usize,
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// How far it stands open, 0 to 1; `None`: fully, and the output says so.
    pub opening: Option<f64>,
}

/// What a setting says, before it is known whether it is one: outlets and wells by index, m3/s, openings 0 to 1.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Given {
    /// Outlets with a flow.
    pub flows: Vec<ByFlow>,
    /// Outlets with an opening alone.
    pub open: Vec<(usize, f64)>,
    /// Wells with a total.
    pub totals: Vec<(usize, f64)>,
    /// The total of the one well that has open gates.
    pub release_m3s: Option<f64>,
}

impl Given {
    /// What the site file gives under `now`.
    pub fn now(site: &Site) -> Self {
        let mut given = Self::default();
        for &(outlet, set) in &site.now {
            match set {
                SetNow::Flow(flow_m3s) if flow_m3s > 0.0 => {
                    given.flows.push(ByFlow { outlet, flow_m3s, opening: None });
                }
                SetNow::Flow(_) => {}
                SetNow::Opening(opening) => given.open.push((outlet, opening)),
            }
        }
        given.totals.extend(site.now_wells.iter().filter(|t| t.1 > 0.0));
        given.by_name(site)
    }

    /// Whether it says anything of an outlet by itself.
    pub fn names(&self, outlet: usize) -> bool {
        self.flows.iter().any(|g| g.outlet == outlet) || self.open.iter().any(|g| g.0 == outlet)
    }

    /// What a decision in the log set; gates that the site no longer has are named.
    pub fn logged(site: &Site, gates: &Gates) -> (Self, Vec<String>) {
        let mut given = Self::default();
        let mut gone = Vec::new();
        for (name, &flow_m3s) in &gates.set {
            let opening = gates.open.get(name).map(|percent| percent / 100.0);
            match site.outlet(name) {
                // what spills by itself does so under the pool of today
                Some(outlet) if intake::spills_by_itself(&site.outlets[outlet]) => {}
                Some(outlet) => given.flows.push(ByFlow { outlet, flow_m3s, opening }),
                None => gone.push(name.clone()),
            }
        }
        (given.by_name(site), gone)
    }

    /// What the words say, in whatever order they stand.
    ///
    /// # Errors
    /// [`Failure::Usage`]: an unknown gate, no number, a gate or total twice.
    pub fn typed(site: &Site, words: &[Word], pool_m: f64) -> Result<Self, Failure> {
        let mut given = Self::default();
        for word in words {
            word.read(site, pool_m, &mut given).map_err(|why| {
                let (option, text) = word.typed();
                Failure::Usage(format!("{option} {text}: {why}"))
            })?;
        }
        Ok(given.by_name(site))
    }

    /// The order in which it was given shows nowhere.
    #[must_use]
    pub fn by_name(mut self, site: &Site) -> Self {
        self.flows.sort_by_key(|g| &site.outlets[g.outlet].name);
        self.open.sort_by_key(|g| &site.outlets[g.0].name);
        self.totals.sort_by_key(|t| &site.wells[t.0].name);
        self
    }
}

impl Word<'_> {
    fn typed(&self) -> (&'static str, &str) {
        match self {
            Self::Set(text) => ("--set", text),
            Self::Open(text) => ("--open", text),
            Self::Release(text) => ("--release", text),
            Self::Now(text) => ("--now", text),
        }
    }

    fn read(&self, site: &Site, pool_m: f64, given: &mut Given) -> Result<(), String> {
        let text = self.typed().1;
        if let Self::Release(_) = self {
            if given.release_m3s.is_some() {
                return Err("the release is given twice".into());
            }
            given.release_m3s = Some(flow(site, text)?);
            return Ok(());
        }
        let (name, value) = match text.split_once('=') {
            Some((name, value)) => (name.trim(), Some(value.trim())),
            None => (text.trim(), None),
        };
        if let Some(outlet) = site.outlet(name) {
            let by_opening = match self {
                Self::Open(_) => true,
                Self::Now(_) => value.is_some_and(|v| v.ends_with('%') || named(site, outlet, v).is_some()),
                Self::Set(_) | Self::Release(_) => false,
            };
            if by_opening {
                return put(&mut given.open, outlet, opening(site, outlet, name, value)?, name, "opened");
            }
            if given.flows.iter().any(|g| g.outlet == outlet) {
                return Err(format!("`{name}` is set twice"));
            }
            let (value, stands) = match value.and_then(|v| v.split_once('@')) {
                Some((flow, stands)) => {
                    (Some(flow.trim()), Some(opening(site, outlet, name, Some(stands.trim()))?))
                }
                None => (value, None),
            };
            let flow_m3s = outlet_flow(site, outlet, name, value, pool_m)?;
            given.flows.push(ByFlow { outlet, flow_m3s, opening: stands });
            Ok(())
        } else if let Some(well) = site.well(name) {
            match (self, value) {
                (Self::Open(_), _) => Err(format!("`{name}` is a well; open its gates")),
                (_, None) => Err(format!("give its total, such as {name}=30")),
                (_, Some(value)) => put(&mut given.totals, well, flow(site, value)?, name, "set"),
            }
        } else {
            Err(format!("no gate is named `{name}`; there are {}", names(site)))
        }
    }
}

/// Adds a figure, once.
fn put(list: &mut Vec<(usize, f64)>, index: usize, value: f64, name: &str, done: &str) -> Result<(), String> {
    if list.iter().any(|(i, _)| *i == index) {
        return Err(format!("`{name}` is {done} twice"));
    }
    list.push((index, value));
    Ok(())
}

fn names(site: &Site) -> String {
    let list = |names: Vec<&str>| names.join(", ");
    let outlets = list(site.outlets.iter().map(|o| o.name.as_str()).collect());
    if site.wells.is_empty() {
        return outlets;
    }
    format!("{outlets}, and the wells {}", list(site.wells.iter().map(|w| w.name.as_str()).collect()))
}

fn flow(site: &Site, text: &str) -> Result<f64, String> {
    let flow_m3s = site.units.parse(text, Dimension::Flow).map_err(|error| error.to_string())?;
    if flow_m3s < 0.0 { Err("a flow cannot be negative".into()) } else { Ok(flow_m3s) }
}

fn outlet_flow(
    site: &Site,
    outlet: usize,
    name: &str,
    value: Option<&str>,
    pool_m: f64,
) -> Result<f64, String> {
    match value {
        Some(text) => flow(site, text),
        None if intake::spills_by_itself(&site.outlets[outlet]) => {
            Ok(intake::crest_flow_m3s(&site.outlets[outlet], 1.0, pool_m).unwrap_or(0.0))
        }
        None => Err(format!("give a flow, such as {name}=30")),
    }
}

/// The opening of a position that is named in words; a number alone is no such name.
fn named(site: &Site, outlet: usize, text: &str) -> Option<f64> {
    let position = site.outlets[outlet].positions.iter().find(|p| p.name == text)?;
    position.name.parse::<f64>().is_err().then_some(position.opening)
}

fn opening(site: &Site, outlet: usize, name: &str, value: Option<&str>) -> Result<f64, String> {
    let Some(text) = value else { return Err(format!("give an opening, such as {name}=50%")) };
    if let Some(opening) = named(site, outlet, text) {
        return Ok(opening);
    }
    let percent = site.units.parse(text, Dimension::Percent).map_err(|error| {
        let positions = &site.outlets[outlet].positions;
        let words: Vec<&str> =
            positions.iter().map(|p| p.name.as_str()).filter(|n| n.parse::<f64>().is_err()).collect();
        if words.is_empty() { error.to_string() } else { format!("{error}, or {}", words.join(", ")) }
    })?;
    let share = percent / 100.0;
    if (-SAME_OPENING..=1.0 + SAME_OPENING).contains(&share) {
        Ok(share.clamp(0.0, 1.0))
    } else {
        Err("an opening lies between 0 and 100 %".into())
    }
}
