//! What a folder tells beside its site file and its casts: weather, side streams, stations.

use std::path::{Component, Path};
use std::sync::Arc;

use crate::files::station::station;
use crate::files::text::{self, Format, Source};
use crate::files::weather::weather;
use crate::files::yaml::{Document, Node};
use crate::problem::{Problem, Weight, any_refused};
use crate::river::Conditions;
use crate::site::{River, Site, Surface};
use crate::target::DAM;

use super::{Folder, Root, inside};

/// The record of the river right below the dam, read where it is there.
pub(super) const TAILWATER: &str = "tailwater.csv";

/// The files beside the casts, read.
#[derive(Debug, Clone, Default)]
pub struct Around {
    /// What they tell.
    pub conditions: Arc<Conditions>,
    /// Everything said of them.
    pub problems: Vec<Problem>,
    /// What an answer has to say of them: their flags, and which of them are passed over because they cannot be read.
    pub said: Vec<Problem>,
    /// Their bytes, in the order they were read.
    pub sources: Vec<Source>,
}

/// What a file is of.
#[derive(Debug, Clone)]
enum Of {
    Station(String),
    Stream(String),
    Weather,
}

/// A file to be read: its name below the folder, and where the site file names it.
struct Wanted {
    name: String,
    path: Option<String>,
    of: Of,
}

impl Folder {
    /// The files beside the casts; they are read once, as the casts are.
    pub fn around(&self) -> &Around {
        self.around.get_or_init(|| self.read_around())
    }

    /// What the folder tells of the river.
    pub fn conditions(&self) -> Arc<Conditions> {
        Arc::clone(&self.around().conditions)
    }

    fn read_around(&self) -> Around {
        let mut out = Around::default();
        let mut conditions = Conditions::default();
        let document = Document::parse(&self.source.text).ok();
        for wanted in wanted(&self.site, document.as_ref().map(Document::root)) {
            let Some(source) = self.beside(&wanted.name) else {
                if let Some(path) = wanted.path {
                    out.missing(&wanted.name, path);
                }
                continue;
            };
            match source {
                Ok(source) => {
                    let problems = self.take(&source, wanted.of, &mut conditions);
                    out.hear(&source.name, problems);
                    out.sources.push(source);
                }
                Err(problem) => out.hear(&wanted.name, vec![problem]),
            }
        }
        out.conditions = Arc::new(conditions);
        if let Some(document) = document {
            // a problem of a file beside the casts names that file already, one of the site file does not
            document.locate(&mut out.problems, &self.source.name);
            document.locate(&mut out.said, &self.source.name);
        }
        out
    }

    fn take(&self, source: &Source, of: Of, conditions: &mut Conditions) -> Vec<Problem> {
        match of {
            Of::Weather => {
                let (read, problems) = weather(source, &self.site);
                conditions.weather = read.unwrap_or_default();
                problems
            }
            Of::Station(point) => {
                let (read, problems) = station(source, &self.site);
                conditions.observed.extend(read.map(|record| (point, record)));
                problems
            }
            Of::Stream(stream) => {
                let (read, problems) = station(source, &self.site);
                conditions.streams.extend(read.map(|record| (stream, record)));
                problems
            }
        }
    }

    /// A file of the folder, where it is there.
    pub(super) fn beside(&self, name: &str) -> Option<Result<Source, Problem>> {
        if !stays_within(name) {
            return None;
        }
        match &self.root {
            Root::Inside(site) => inside(&format!("{site}/{name}")),
            Root::Disk(root) => {
                let path = root.join(name);
                path.exists().then(|| text::read(&path, Format::Csv))
            }
        }
    }
}

impl Around {
    fn missing(&mut self, name: &str, path: String) {
        let words = format!("there is no file `{name}` in the folder of the site");
        let cure = "correct the name, or take it out; a file lies in the folder of site.yaml or below it";
        self.said.push(Problem::flag("file-missing", words.clone(), cure).at(path.clone()));
        self.problems.push(Problem::refused("file-missing", words, cure).at(path));
    }

    /// Keeps what was said of a file.
    fn hear(&mut self, file: &str, problems: Vec<Problem>) {
        if any_refused(&problems) {
            let refusals = || problems.iter().filter(|p| p.weight == Weight::Refused);
            let first = refusals().next().map_or("", |p| &p.words);
            let more = match refusals().count() {
                0 | 1 => String::new(),
                count => format!(" (and {} more)", count - 1),
            };
            let words = format!("{file} cannot be read and is passed over: {first}{more}");
            let cure = "run `gatemix check` on the site";
            self.said.push(Problem::flag("file-unreadable", words, cure).in_file(file));
        } else {
            self.said.extend(problems.iter().filter(|p| p.weight == Weight::Flag).cloned());
        }
        self.problems.extend(problems);
    }
}

/// Whether a name stays in the folder: what a site file names is nothing else on the machine.
pub(super) fn stays_within(name: &str) -> bool {
    !name.is_empty()
        && Path::new(name).components().all(|c| matches!(c, Component::Normal(_) | Component::CurDir))
}

/// The files that a site is told by, in the order in which they are read.
fn wanted(site: &Site, document: Option<&Node>) -> Vec<Wanted> {
    let mut out = vec![Wanted { name: TAILWATER.to_owned(), path: None, of: Of::Station(DAM.to_owned()) }];
    if let Some(river) = &site.river {
        out.extend(along(river, document));
    }
    let weather = |name: &String, path: &str| Wanted {
        name: name.clone(),
        path: Some(path.to_owned()),
        of: Of::Weather,
    };
    // a folder has one weather: that of the river, else that of the pool
    match (site.river.as_ref().and_then(|river| river.surface.as_ref()), &site.season.weather) {
        (Some(Surface::File(name)), _) => out.push(weather(name, "river.weather")),
        (_, Some(name)) => out.push(weather(name, "season.weather")),
        _ => {}
    }
    out
}

/// The records of the points and streams of a river.
fn along(river: &River, document: Option<&Node>) -> Vec<Wanted> {
    let mut out = Vec::new();
    for (i, point) in river.points.iter().enumerate() {
        let i = document.and_then(|root| place_of(root, &point.name)).unwrap_or(i);
        out.extend(point.observed.iter().map(|name| Wanted {
            name: name.clone(),
            path: Some(format!("river.points[{i}].observed")),
            of: Of::Station(point.name.clone()),
        }));
    }
    for (i, reach) in river.reaches.iter().enumerate() {
        for (j, inflow) in reach.inflows.iter().enumerate() {
            out.extend(inflow.series.iter().map(|name| Wanted {
                name: name.clone(),
                path: Some(format!("river.reaches[{i}].inflows[{j}].series")),
                of: Of::Stream(inflow.name.clone()),
            }));
        }
    }
    out
}

/// Place of a point in the list of the site file: the checked site has them in the order of the river.
fn place_of(root: &Node, point: &str) -> Option<usize> {
    let Node::List(points) = under(under(root, "river")?, "points")? else { return None };
    points.iter().position(|p| matches!(under(p, "name"), Some(Node::Text(name)) if name == point))
}

fn under<'n>(node: &'n Node, key: &str) -> Option<&'n Node> {
    let Node::Map(entries) = node else { return None };
    entries.iter().find(|(k, _)| k == key).map(|(_, value)| value)
}
