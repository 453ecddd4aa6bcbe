//! Layers too thin join a neighbour, layers too thick are cut.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Site;

use super::layers::{Layer, Layers};

/// Brings every layer between half and twice the wanted thickness: the thinnest first joins the neighbour nearer in
/// density, then the thick are cut at half their height.
pub(super) fn reshape(layers: &mut Layers, site: &Site) {
    let least_m = 0.5 * layers.thickness_m;
    let mut edges = layers.edges_m(&site.pool);
    let water = &mut layers.layers;
    while water.len() > 1 {
        let thickness = |ends: &[f64]| ends[1] - ends[0];
        let thinnest = edges.windows(2).enumerate().min_by(|a, b| thickness(a.1).total_cmp(&thickness(b.1)));
        let Some((i, _)) = thinnest.filter(|(_, ends)| thickness(ends) < least_m) else {
            break;
        };
        let lower = if joins_below(water, i, site.water.solids_kg_m3) { i - 1 } else { i };
        let upper = water.remove(lower + 1);
        water[lower] = water[lower].joined(&upper);
        edges.remove(lower + 1);
    }
    cut(layers, site, edges);
}

/// Cuts layers, told with their edges (m), that are thicker than twice the wanted thickness at half their height, until
/// none is.
pub(super) fn cut(layers: &mut Layers, site: &Site, mut edges: Vec<f64>) {
    let most_m = 2.0 * layers.thickness_m;
    let water = &mut layers.layers;
    let mut below_m3 = site.pool.volume_m3(site.pool.bed_m);
    let mut i = 0;
    while i < water.len() {
        let whole = water[i];
        let half_m = 0.5 * (edges[i] + edges[i + 1]);
        let lower_m3 = site.pool.volume_m3(half_m) - below_m3;
        if edges[i + 1] - edges[i] > most_m && 0.0 < lower_m3 && lower_m3 < whole.volume_m3 {
            water[i] = whole.part(whole.volume_m3 - lower_m3);
            water.insert(i, whole.part(lower_m3));
            edges.insert(i + 1, half_m);
        } else {
            below_m3 += whole.volume_m3;
            i += 1;
        }
    }
}

/// Whether the neighbour below is the nearer in density.
fn joins_below(water: &[Layer], i: usize, grain_kg_m3: f64) -> bool {
    let density = |k: usize| water.get(k).map(|l| l.density_kg_m3(grain_kg_m3));
    let apart = |k: Option<usize>| Some((density(k?)? - density(i)?).abs());
    match (apart(i.checked_sub(1)), apart(Some(i + 1))) {
        (Some(below), Some(above)) => below < above,
        (below, _) => below.is_some(),
    }
}
