//! A season as a table for a spreadsheet: a row a day, units in the header.

use crate::problem::harmless;
use crate::season::SeasonDay;
use crate::tasks::Context;
use crate::tasks::season::SeasonAnswer;
use crate::units::{Dimension, System};

/// Decimals of every figure: more than anyone reads, fewer than noise.
const DECIMALS: usize = 4;

/// The days of the season spoken of.
pub fn season(context: &Context, answer: &SeasonAnswer) -> String {
    let (site, system, main) = (context.site(), context.system, &answer.main);
    let points = site.river.as_ref().map_or(&[][..], |r| &r.points);
    let cold = &main.outcome.cold;
    let flow = unit(Dimension::Flow, system);
    let warm = unit(Dimension::Temperature, system);
    let volume = unit(Dimension::Volume, system);
    let mut head: Vec<String> = vec![
        "date".into(),
        format!("pool_{}", unit(Dimension::Length, system)),
        format!("inflow_{flow}"),
        format!("release_{flow}"),
        format!("release_{warm}"),
        "oxygen_leaving_pool_mg_l".into(),
        "oxygen_below_dam_mg_l".into(),
    ];
    head.extend(points.iter().map(|p| text(&format!("{} {warm}", p.name))));
    head.extend(["attainable_low", "attainable_high"].map(|name| format!("{name}_{warm}")));
    for water in cold {
        let below = system.unit(Dimension::Temperature).from_si(water.threshold_c);
        head.extend(["usable", "in_all"].map(|what| format!("below_{below:.1}{warm}_{what}_{volume}")));
    }
    head.extend(site.outlets.iter().map(|o| text(&format!("{} {flow}", o.name))));
    head.extend(site.outlets.iter().map(|o| text(&format!("{} open %", o.name))));
    head.extend(["balance_water_m3", "balance_heat_j"].map(str::to_owned));
    let mut out = head.join(",") + "\n";
    for (i, day) in main.run.days.iter().enumerate() {
        let decided = main.run.decisions.iter().find(|d| d.date == day.date).and_then(|d| d.attainable_c);
        let c = |value: Option<f64>| figure(value, Dimension::Temperature, system);
        let mut row = start(day, system);
        row.extend((0..points.len()).map(|p| c(day.points.as_ref().and_then(|f| Some(f.get(p)?.mean_c)))));
        row.extend([c(decided.map(|a| a[0])), c(decided.map(|a| a[1]))]);
        for water in cold {
            let told = water.days.get(i);
            for value in [told.and_then(|t| t.usable_m3), told.map(|t| t.total_m3)] {
                row.push(figure(value, Dimension::Volume, system));
            }
        }
        let gate = |outlet: usize| day.gates.iter().find(|g| g.outlet == outlet);
        let outlets = 0..site.outlets.len();
        row.extend(
            outlets
                .clone()
                .map(|o| figure(Some(gate(o).map_or(0.0, |g| g.flow_m3s)), Dimension::Flow, system)),
        );
        row.extend(outlets.map(|o| plain(Some(100.0 * gate(o).map_or(0.0, |g| g.opening)))));
        row.extend([day.balance.water_m3.error(), day.balance.heat_j.error()].map(|e| format!("{e:.3e}")));
        out.push_str(&(row.join(",") + "\n"));
    }
    out
}

/// The columns every site has.
fn start(day: &SeasonDay, system: System) -> Vec<String> {
    vec![
        day.date.to_string(),
        figure(Some(day.pool_m), Dimension::Length, system),
        figure(Some(day.inflow_m3s), Dimension::Flow, system),
        figure(day.release.map(|release| release.flow_m3s), Dimension::Flow, system),
        figure(day.release.map(|release| release.temperature_c), Dimension::Temperature, system),
        plain(day.release.and_then(|release| release.oxygen_mg_l)),
        plain(day.release.and_then(|release| release.oxygen_below_mg_l)),
    ]
}

/// A unit as a header writes it.
fn unit(dimension: Dimension, system: System) -> String {
    system.unit(dimension).symbol().replace('/', "")
}

/// A figure in the unit shown; nothing where it is missing.
fn figure(value_si: Option<f64>, dimension: Dimension, system: System) -> String {
    plain(value_si.map(|v| system.unit(dimension).from_si(v)))
}

fn plain(value: Option<f64>) -> String {
    value.map_or_else(String::new, |v| format!("{v:.DECIMALS$}"))
}

/// A name made harmless for a terminal and a spreadsheet: quoted where it must be, and never a formula.
fn text(name: &str) -> String {
    let name = harmless(name);
    let formula = name.starts_with(['=', '+', '-', '@']);
    let name = if formula { format!("'{name}") } else { name };
    if name.contains([',', '"']) { format!("\"{}\"", name.replace('"', "\"\"")) } else { name }
}
