//! Levelling: the density that never falls with depth and is nearest to the measured one.
//!
//! Methods: `docs/methods.md`, section 2.

/// Pools neighbouring nodes that stand the wrong way round into their thickness-weighted mean until density
/// never rises upward (pool adjacent violators). `nodes_m` rise; returns the levelled density of each node,
/// kg/m3. Columns that already fall upward come back unchanged, bit for bit.
pub fn levelled(nodes_m: &[f64], density_kg_m3: &[f64]) -> Vec<f64> {
    struct Block {
        mean: f64,
        weight: f64,
        count: usize,
    }
    let n = nodes_m.len().min(density_kg_m3.len());
    let thickness = |i: usize| {
        let below = if i > 0 { nodes_m[i] - nodes_m[i - 1] } else { 0.0 };
        let above = if i + 1 < n { nodes_m[i + 1] - nodes_m[i] } else { 0.0 };
        0.5 * (below + above)
    };
    let mut blocks: Vec<Block> = Vec::with_capacity(n);
    for (i, &density) in density_kg_m3.iter().enumerate().take(n) {
        let mut block = Block { mean: density, weight: thickness(i), count: 1 };
        while let Some(below) = blocks.pop_if(|below| below.mean < block.mean) {
            let weight = below.weight + block.weight;
            let mean = if weight > 0.0 {
                (below.mean * below.weight + block.mean * block.weight) / weight
            } else {
                0.5 * (below.mean + block.mean)
            };
            block = Block { mean, weight, count: below.count + block.count };
        }
        blocks.push(block);
    }
    blocks.iter().flat_map(|b| std::iter::repeat_n(b.mean, b.count)).collect()
}
