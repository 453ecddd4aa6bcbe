//! Round ticks, scales, and where a value falls.

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

/// Round numbers inside a scale.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Marks {
    /// The numbers, rising.
    pub values: Vec<f64>,
    /// Decimals their labels need, and no more.
    pub decimals: u8,
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

    /// A scale between two values as they are. `None` where they are no range.
    pub fn new(low: f64, high: f64) -> Option<Self> {
        (low.is_finite() && high.is_finite() && high > low).then_some(Self { low, high })
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

    /// How far along the scale a value lies: 0 at the lower end, 1 at the upper, beyond them outside. `None` for what
    /// is no number, and on a scale without length.
    pub fn share(&self, value: f64) -> Option<f64> {
        let share = (value - self.low) / (self.high - self.low);
        share.is_finite().then_some(share)
    }

    /// The value so far along the scale.
    pub fn value(&self, share: f64) -> f64 {
        self.low + share * (self.high - self.low)
    }

    /// At most `most` round numbers (1, 2 or 5 times a power of ten apart) that lie inside, the ends included.
    pub fn marks(&self, most: u32) -> Marks {
        let span = self.high - self.low;
        if !span.is_finite() || span <= 0.0 || most == 0 {
            return Marks::default();
        }
        let power = 10_f64.powf((span / f64::from(most)).log10().floor());
        let ends = |size: f64| ((self.low / size - 1e-9).ceil(), (self.high / size + 1e-9).floor());
        let fits = |size: &f64| {
            let (first, last) = ends(*size);
            last - first < f64::from(most)
        };
        let Some(size) = [1.0, 2.0, 5.0, 10.0, 20.0, 50.0].map(|m| m * power).into_iter().find(fits) else {
            return Marks::default();
        };
        let (first, last) = ends(size);
        if last < first {
            return Marks::default();
        }
        let whole = |d: &u8| {
            let grown = size * 10_f64.powi(i32::from(*d));
            (grown - grown.round()).abs() < 1e-6 * grown
        };
        let decimals = (0..=9).find(whole).unwrap_or(9);
        let digits = 10_f64.powi(i32::from(decimals));
        let mut values = Vec::new();
        let mut k = first;
        while k <= last {
            // a product such as 3 x 0.1 carries a last digit that a label would show, and a zero its sign
            values.push((k * size * digits).round() / digits + 0.0);
            k += 1.0;
        }
        Marks { values, decimals }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn marks(low: f64, high: f64, most: u32) -> (Vec<f64>, u8) {
        let marks = Scale::new(low, high).unwrap().marks(most);
        (marks.values, marks.decimals)
    }

    #[test]
    fn scenario_marks_are_round_and_inside() {
        assert_eq!(marks(1180.0, 1468.3, 8), (vec![1200.0, 1250.0, 1300.0, 1350.0, 1400.0, 1450.0], 0));
        assert_eq!(marks(0.0, 10.0, 6), (vec![0.0, 2.0, 4.0, 6.0, 8.0, 10.0], 0));
        assert_eq!(marks(-0.05, 0.31, 4), (vec![0.0, 0.1, 0.2, 0.3], 1));
        assert_eq!(marks(41.2, 41.4, 1), (vec![], 0));
        assert_eq!(Scale::new(1.0, 1.0), None);
        assert_eq!(Scale::new(f64::NAN, 1.0), None);
    }

    #[test]
    fn law_marks_stay_inside_and_keep_their_number() {
        for low in [-7.3, 0.0, 0.004, 12.0, 1180.0] {
            for span in [0.003, 0.7, 1.0, 9.9, 288.0] {
                for most in 1..12 {
                    let scale = Scale::new(low, low + span).unwrap();
                    let marks = scale.marks(most);
                    assert!(marks.values.len() <= most as usize);
                    for &value in &marks.values {
                        let share = scale.share(value).unwrap();
                        assert!((-1e-6..=1.0 + 1e-6).contains(&share), "{value} on {scale:?}");
                        let label = format!("{value:.*}", usize::from(marks.decimals));
                        assert!((label.parse::<f64>().unwrap() - value).abs() < 1e-9, "{label} is {value}");
                    }
                }
            }
        }
    }
}
