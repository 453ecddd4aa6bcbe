//! Answers as JSON: SI whatever the display, absent is null, full precision.

mod applied;
mod learned;
mod log;
mod needed;
mod note;
mod past;
mod rank;
mod rank_shape;
mod river;
mod river_record;
mod season;
mod season_shape;
mod shape;
mod targets;

use std::collections::BTreeMap;
use std::fmt::Write as _;

use serde::Serialize;

use crate::mix::limits::Check;
use crate::mix::{Drawn, Gate, Mix, Setting, WellState};
use crate::problem::{Problem, Weight, is_harmful};
use crate::record::METHOD;
use crate::site::Site;
use crate::tasks::{Change, ColdChange, Context, MixAnswer, Move, PoolAnswer, Since};
use crate::units::{System, in_system};
use crate::withdrawal::{End, Opening};

use shape::{
    BlockJson, CheckJson, ColdChangeJson, ColdJson, DayJson, FlagJson, Head, LayeringJson, LevelJson,
    MixJson, MovedJson, NowJson, OutletJson, PoolJson, ProblemJson, ProfileJson, ReleaseJson, SettingJson,
    SinceJson, WarningJson, WellJson, ZoneJson,
};

use super::sentence::caution;

use targets::{conflicts, points, targets};

pub use learned::learned;
pub use log::{log, logged};
pub use needed::needed;
pub use note::note;
pub use rank::{rank, rank_priced};
pub use river::river;
pub use season::season;

/// The answer of `mix`.
pub fn mix(context: &Context, answer: &MixAnswer) -> String {
    let site = context.site();
    let moves = answer.change.as_ref().map(|c| c.moves);
    let shown = MixJson {
        head: head(context, &context.fingerprint, &[]),
        setting: setting(site, &answer.setting),
        wells: answer.setting.wells.iter().map(|w| well(site, &answer.setting, w)).collect(),
        levels: answer.mix.levels.iter().map(|d| level(site, d)).collect(),
        release: release(&answer.mix),
        targets: targets(site, &answer.mix.targets),
        conflicts: conflicts(site, &answer.mix.conflicts),
        points: points(site, &answer.mix.points),
        day: answer.day.as_ref().map(|day| DayJson {
            blocks: day
                .blocks
                .iter()
                .map(|b| BlockJson {
                    name: site.blocks[b.block].name.clone(),
                    share: b.share,
                    setting: setting(site, &b.setting),
                    release: release(&b.mix),
                })
                .collect(),
            time_mean_c: day.time_mean_c,
            least_c: day.extremes_c[0],
            greatest_c: day.extremes_c[1],
            by_flow_c: day.by_flow_c,
            time_mean_mg_l: day.time_mean_mg_l,
        }),
        now: answer.now.as_ref().map(|(now, mix)| NowJson {
            setting: setting(site, now),
            release: release(mix),
            targets: targets(site, &mix.targets),
        }),
        moves: moves.map(|m| m.count),
        moved: answer.change.as_ref().map(|c| moved(site, c)),
        crew_hours: moves.map(|m| m.crew_hours),
        move_cost: moves.map(|m| m.cost),
        lead_days: moves.map(|m| m.lead_days),
        earliest: answer.change.as_ref().and_then(|c| c.earliest).map(|d| d.to_string()),
        limits: checks(site, &answer.mix.limits),
        not_checked: answer.mix.not_checked.clone(),
        warnings: warnings(&answer.mix.warnings),
        caution: caution(),
    };
    written(&shown)
}

/// The answer of `pool`.
pub fn pool(context: &Context, answer: &PoolAnswer) -> String {
    let site = context.site();
    let l = &answer.layering;
    let shown = PoolJson {
        head: head(context, &answer.fingerprint, &answer.against_previous),
        layering: LayeringJson {
            surface_c: l.surface_c,
            bed_c: l.bed_c,
            difference_c: l.surface_c - l.bed_c,
            thermocline_m: l.thermocline.map(|t| t.elevation_m),
            thermocline_c_per_m: l.thermocline.map(|t| t.gradient_c_m),
            steeper_than_1_c_per_m: l.thermocline.and_then(|t| t.band_m).map(|(a, b)| [a, b]),
            mixed_base_m: l.mixed_base_m,
            buoyancy_s2: l.buoyancy_s2.map(|b| b.0),
            buoyancy_m: l.buoyancy_s2.map(|b| b.1),
            oxygen_min_mg_l: l.oxygen_min.map(|o| o.oxygen_mg_l),
            oxygen_min_m: l.oxygen_min.map(|o| o.elevation_m),
            volume_m3: l.volume_m3,
            mean_c: l.mean_c,
            heat_j: l.heat_j,
            schmidt_stability_j_m2: l.schmidt_j_m2,
        },
        cold_water: answer
            .cold
            .iter()
            .map(|c| ColdJson {
                threshold_c: c.threshold_c,
                usable_m3: c.usable_m3,
                total_m3: c.total_m3,
                unreachable_m3: c.usable_m3.map(|u| c.total_m3 - u),
            })
            .collect(),
        cold_water_above_m: answer.reach_m,
        outlets: answer
            .outlets
            .iter()
            .map(|s| {
                let o = &site.outlets[s.outlet];
                OutletJson {
                    name: o.name.clone(),
                    centre_m: o.centre_m,
                    submergence_m: s.submergence_m,
                    min_submergence_m: o.min_submergence_m,
                    wet: s.wet,
                }
            })
            .collect(),
        since: answer.since.as_ref().map(since),
        caution: caution(),
    };
    written(&shown)
}

fn since(s: &Since) -> SinceJson {
    let [thermocline_then_m, thermocline_now_m] = s.thermocline_m;
    let [oxygen_min_then_mg_l, oxygen_min_now_mg_l] = s.oxygen_min_mg_l;
    let cold = |c: &ColdChange| ColdChangeJson {
        threshold_c: c.threshold_c,
        usable_change_m3: c.usable_m3,
        total_change_m3: c.total_m3,
    };
    SinceJson {
        file: s.file.clone(),
        taken: s.taken.to_rfc3339(),
        days: s.days,
        surface_change_c: s.surface_c,
        bed_change_c: s.bed_c,
        mean_change_c: s.mean_c,
        pool_change_m: s.pool_m,
        thermocline_then_m,
        thermocline_now_m,
        oxygen_min_then_mg_l,
        oxygen_min_now_mg_l,
        heat_w_m2: s.heat_w_m2,
        cold_water: s.cold.iter().map(cold).collect(),
    }
}

/// The answer of `check`.
pub fn check(problems: &[Problem]) -> String {
    let list: Vec<ProblemJson> = problems.iter().map(problem).collect();
    written(&list)
}

fn problem(p: &Problem) -> ProblemJson {
    ProblemJson {
        weight: p.weight.word(),
        kind: p.kind,
        file: p.place.file.clone(),
        line: p.place.line,
        path: p.place.path.clone(),
        text: p.sentence(System::Si),
        cure: in_system(&p.cure, System::Si),
    }
}

fn written(value: &impl Serialize) -> String {
    // these structs hold only strings, numbers and lists, which always have a JSON form
    let text = serde_json::to_string_pretty(value).map(|text| escaped(&text));
    text.map_or_else(
        |e| format!("{{\"error\":\"{e}\"}}\n"),
        |mut s| {
            s.push('\n');
            s
        },
    )
}

/// What a terminal may obey and JSON lets stand in a string, such as the C1 range, as `\u009b`.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        if c == '\n' || !is_harmful(c) {
            out.push(c);
        } else {
            for unit in c.encode_utf16(&mut [0; 2]) {
                let _ = write!(out, "\\u{unit:04x}");
            }
        }
    }
    out
}

fn head(context: &Context, fingerprint: &str, more_flags: &[Problem]) -> Head {
    let site = context.site();
    let profile = &context.profile;
    let of = |weight: Weight| {
        profile
            .flags
            .iter()
            .chain(more_flags)
            .filter(|p| p.weight == weight)
            .map(|p| FlagJson { row: p.place.line, kind: p.kind, text: p.advice(System::Si) })
            .collect()
    };
    Head {
        site: site.name.clone(),
        demonstration: site.demonstration,
        on: context.on.to_rfc3339(),
        on_from: context.on_from.words(),
        datum: site.datum.name().to_owned(),
        version: env!("CARGO_PKG_VERSION"),
        method: METHOD,
        fingerprint: fingerprint.to_owned(),
        learned: applied::applied(site),
        profile: ProfileJson {
            file: profile.file.clone(),
            taken: profile.taken.map(|t| t.to_rfc3339()),
            age_days: context.age_days,
            pool_m: profile.pool_m,
            samples: profile.samples.len(),
            flags: of(Weight::Flag),
            notes: of(Weight::Note),
        },
    }
}

/// Something of each gate under its name.
fn by_gate(site: &Site, gates: &[Gate], of: impl Fn(&Gate) -> f64) -> BTreeMap<String, f64> {
    gates.iter().filter_map(|g| Some((site.outlets.get(g.outlet)?.name.clone(), of(g)))).collect()
}

fn setting(site: &Site, setting: &Setting) -> SettingJson {
    SettingJson {
        set: by_gate(site, &setting.gates, |g| g.flow_m3s),
        open: by_gate(site, &setting.gates, |g| 100.0 * g.opening),
    }
}

fn well(site: &Site, setting: &Setting, state: &WellState) -> WellJson {
    let well = &site.wells[state.well];
    WellJson {
        name: well.name.clone(),
        flow_m3s: state.flow_m3s,
        head_m: setting.head_m(state.well),
        max_head_loss_m: well.max_head_loss_m,
        settled: state.settled,
        assumed_loss: state.assumed_loss,
        split: by_gate(site, &state.split, |g| g.flow_m3s),
    }
}

fn level(site: &Site, drawn: &Drawn) -> LevelJson {
    LevelJson {
        elevation_m: drawn.level.sink.centre_m,
        outlets: drawn.level.outlets.iter().map(|&i| site.outlets[i].name.clone()).collect(),
        flow_m3s: drawn.level.sink.flow_m3s,
        angle_deg: match drawn.level.sink.opening {
            Opening::Port { angle_rad } => Some(angle_rad.to_degrees()),
            Opening::Crest { .. } => None,
        },
        zone: drawn.zone.map(|z| ZoneJson {
            lower_m: z.lower.limit_m,
            upper_m: z.upper.limit_m,
            thickness_m: z.thickness_m(),
            peak_m: z.peak_m,
            lower_end: if z.lower.end == End::Free { "free" } else { "bed" },
            upper_end: if z.upper.end == End::Free { "free" } else { "surface" },
            boundary_flow_lower_m3s: z.lower.boundary_flow_m3s,
            boundary_flow_upper_m3s: z.upper.boundary_flow_m3s,
        }),
        temperature_c: drawn.draw.map(|d| d.temperature_c),
        oxygen_mg_l: drawn.draw.and_then(|d| d.oxygen_mg_l),
    }
}

fn warnings(problems: &[Problem]) -> Vec<WarningJson> {
    problems.iter().map(|p| WarningJson { kind: p.kind, text: p.advice(System::Si) }).collect()
}

fn ends(band: Option<(f64, f64)>) -> Option<[f64; 2]> {
    band.map(|(low, high)| [low, high])
}

fn release(mix: &Mix) -> ReleaseJson {
    ReleaseJson {
        flow_m3s: mix.release.flow_m3s,
        temperature_c: mix.release.temperature_c,
        oxygen_mg_l: mix.release.oxygen_mg_l,
        oxygen_below_mg_l: mix.release.oxygen_below_mg_l,
        band_c: ends(mix.spread.band_c()),
        band_oxygen_mg_l: ends(mix.spread.band_oxygen_mg_l()),
        plain: mix.plain.as_ref().map(|p| applied::plain(&p.release, &p.spread)),
    }
}

/// Limits as they are held against a setting.
fn checks(site: &Site, checks: &[Check]) -> Vec<CheckJson> {
    let one = |c: &Check| CheckJson {
        rule: c.rule.name(),
        group: c.rule.group().words(),
        of: c.of.name(site).map(str::to_owned),
        found: c.rule.unit().figure(c.found),
        bound: c.rule.unit().figure(c.bound),
        room: c.margin(),
        unit: c.rule.unit().symbol(),
    };
    checks.iter().map(one).collect()
}

/// What is to be moved.
fn moved(site: &Site, change: &Change) -> Vec<MovedJson> {
    moved_gates(site, &change.moved)
}

/// Gates that move.
fn moved_gates(site: &Site, moves: &[Move]) -> Vec<MovedJson> {
    let one = |m: &Move| MovedJson {
        outlet: site.outlets[m.outlet].name.clone(),
        from_open: 100.0 * m.from,
        to_open: 100.0 * m.to,
        from_m3s: m.from_m3s,
        to_m3s: m.to_m3s,
    };
    moves.iter().map(one).collect()
}
