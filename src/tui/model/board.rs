//! The rows of the board and their cells: everything that can be turned or typed.

use chrono::NaiveDate;

use crate::site::Site;

/// Something that can be turned or typed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Cell {
    /// Opening of an outlet.
    Opening(usize),
    /// Flow of an outlet.
    Flow(usize),
    /// Total of a well.
    Total(usize),
    /// Total release.
    Release,
    /// Pool elevation.
    Pool,
    /// Decision date.
    Date,
    /// Low end of a target.
    Low(usize),
    /// Preferred temperature of a target.
    Preferred(usize),
    /// High end of a target.
    High(usize),
    /// Least oxygen of a target.
    Oxygen(usize),
}

/// A row of the board.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Row {
    /// An outlet.
    Outlet(usize),
    /// A well.
    Well(usize),
    /// The total release.
    Release,
    /// The pool.
    Pool,
    /// The date.
    Date,
    /// A target.
    Target(usize),
}

impl Row {
    /// Its cells, from the left. Never empty.
    pub fn cells(self, site: &Site) -> Vec<Cell> {
        match self {
            Self::Outlet(i) => {
                let outlet = &site.outlets[i];
                if outlet.has_opening() { vec![Cell::Opening(i), Cell::Flow(i)] } else { vec![Cell::Flow(i)] }
            }
            Self::Well(i) => vec![Cell::Total(i)],
            Self::Release => vec![Cell::Release],
            Self::Pool => vec![Cell::Pool],
            Self::Date => vec![Cell::Date],
            Self::Target(i) => vec![Cell::Low(i), Cell::Preferred(i), Cell::High(i), Cell::Oxygen(i)],
        }
    }
}

/// The rows: outlets from the highest down, wells, the release, what it is judged under; of the targets those valid on
/// the date.
pub fn rows(site: &Site, date: NaiveDate) -> Vec<Row> {
    let mut outlets: Vec<usize> = (0..site.outlets.len()).collect();
    outlets.sort_by(|&a, &b| {
        let (a, b) = (&site.outlets[a], &site.outlets[b]);
        b.centre_m.total_cmp(&a.centre_m).then_with(|| a.name.cmp(&b.name))
    });
    let mut out: Vec<Row> = outlets.into_iter().map(Row::Outlet).collect();
    out.extend((0..site.wells.len()).map(Row::Well));
    out.extend([Row::Release, Row::Pool, Row::Date]);
    out.extend(site.targets_on(date).map(|(i, _)| Row::Target(i)));
    out
}

impl Cell {
    /// The row it stands in.
    pub fn row(self) -> Row {
        match self {
            Self::Opening(i) | Self::Flow(i) => Row::Outlet(i),
            Self::Total(i) => Row::Well(i),
            Self::Release => Row::Release,
            Self::Pool => Row::Pool,
            Self::Date => Row::Date,
            Self::Low(i) | Self::Preferred(i) | Self::High(i) | Self::Oxygen(i) => Row::Target(i),
        }
    }

    /// The cell so many rows and columns away; the nearest there is.
    #[must_use]
    pub fn moved(self, site: &Site, date: NaiveDate, down: isize, right: isize) -> Self {
        let rows = rows(site, date);
        let row = rows.iter().position(|r| *r == self.row()).unwrap_or(0);
        let cells = self.row().cells(site);
        let column = cells.iter().position(|c| *c == self).unwrap_or(0);
        let to =
            |at: usize, by: isize, count: usize| at.saturating_add_signed(by).min(count.saturating_sub(1));
        let cells = rows.get(to(row, down, rows.len())).map_or_else(Vec::new, |r| r.cells(site));
        cells.get(to(column, right, cells.len())).copied().unwrap_or(self)
    }
}
