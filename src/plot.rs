//! Arithmetic of pictures: round ticks, scales, and where a value falls.

/// Round numbers (1, 2 or 5 times a power of ten) that span a range with at most `most` steps; the first lies at or
/// below `low`, the last at or above `high`. Empty for a range that is no range.
pub fn ticks(low: f64, high: f64, most: u32) -> Vec<f64> {
    if !(low.is_finite() && high.is_finite()) || high <= low || most == 0 {
        return Vec::new();
    }
    let rough = (high - low) / f64::from(most);
    let power = 10_f64.powf(rough.log10().floor());
    // the first size whose ticks fit, counted with both overhanging ends
    let sizes = [1.0, 2.0, 5.0, 10.0, 20.0, 50.0].map(|m| m * power);
    let fits = |size: &&f64| (high / **size).ceil() - (low / **size).floor() <= f64::from(most) + 1e-9;
    let size = sizes.iter().find(fits).copied().unwrap_or(50.0 * power);
    let first = (low / size).floor();
    let mut out = Vec::new();
    let mut k = 0.0;
    loop {
        let tick = (first + k) * size;
        // a product such as 3 x 0.1 carries a last digit that a label would show
        let digits = (1e12 / power).round();
        out.push((tick * digits).round() / digits);
        if tick >= high - 1e-9 * size {
            return out;
        }
        k += 1.0;
    }
}

/// A linear scale onto cells or points.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scale {
    low: f64,
    high: f64,
}

impl Scale {
    /// A scale between two values, widened to round ticks, and about its middle to at least `least`, so that noise
    /// does not fill the picture.
    pub fn round(low: f64, high: f64, least: f64, most: u32) -> Self {
        let short = (0.5 * (least - (high - low))).max(0.0);
        let (low, high) = (low - short, high + short);
        let ticks = ticks(low, high, most);
        match (ticks.first(), ticks.last()) {
            (Some(&low), Some(&high)) => Self { low, high },
            _ => Self { low, high },
        }
    }

    /// Lower end.
    pub fn low(&self) -> f64 {
        self.low
    }

    /// Upper end.
    pub fn high(&self) -> f64 {
        self.high
    }

    /// Cell of a value among `cells`, the nearest end outside the scale. `None` for no cells.
    pub fn cell(&self, value: f64, cells: usize) -> Option<usize> {
        let last = cells.checked_sub(1)?;
        let place = (value - self.low) / (self.high - self.low) * cells as f64;
        // counted rather than cast: a place may lie anywhere, and casts hide that
        Some((1..=last).take_while(|&c| place >= c as f64).last().unwrap_or(0))
    }
}
