//! The shape of a pool: area straight between the rows of its table, volume the integral of it.

/// Elevations, areas there and the volumes below, m, m2, m3, rising.
pub(crate) struct Basin {
    rows: Vec<(f64, f64, f64)>,
}

impl Basin {
    /// From elevations (m, rising) and areas (m2); the volumes follow.
    pub(crate) fn new(areas: impl IntoIterator<Item = (f64, f64)>) -> Self {
        let mut rows: Vec<(f64, f64, f64)> = Vec::new();
        for (z_m, area_m2) in areas {
            let volume_m3 = rows.last().map_or(0.0, |&(z, a, v)| v + (z_m - z) * f64::midpoint(area_m2, a));
            rows.push((z_m, area_m2, volume_m3));
        }
        Self { rows }
    }

    /// Lowest elevation, m.
    pub(crate) fn bed_m(&self) -> f64 {
        self.rows[0].0
    }

    /// Volumes below each row, m3.
    pub(crate) fn volumes_m3(&self) -> impl Iterator<Item = f64> + '_ {
        self.rows.iter().map(|row| row.2)
    }

    /// Area at an elevation inside the table, m2.
    pub(crate) fn area_m2(&self, z_m: f64) -> f64 {
        let (row, slope) = self.row(|row| row.0 <= z_m);
        row.1 + slope * (z_m - row.0)
    }

    /// Volume below an elevation inside the table, m3.
    pub(crate) fn volume_m3(&self, z_m: f64) -> f64 {
        let (row, slope) = self.row(|row| row.0 <= z_m);
        let up = z_m - row.0;
        row.2 + up * (row.1 + 0.5 * slope * up)
    }

    /// Elevation whose volume this is, m: the root of the quadratic that `volume_m3` is.
    pub(crate) fn elevation_m(&self, volume_m3: f64) -> f64 {
        let (row, slope) = self.row(|row| row.2 <= volume_m3);
        let more = volume_m3 - row.2;
        // this form of the root has no cancellation and stands for a slope of zero too
        row.0 + 2.0 * more / (row.1 + (row.1.powi(2) + 2.0 * slope * more).sqrt())
    }

    /// The last row that lies `below`, and the slope of the area above it, m2/m.
    fn row(&self, below: impl Fn(&(f64, f64, f64)) -> bool) -> ((f64, f64, f64), f64) {
        let i = self.rows.partition_point(below).clamp(1, self.rows.len() - 1) - 1;
        let (low, high) = (self.rows[i], self.rows[i + 1]);
        (low, (high.1 - low.1) / (high.0 - low.0))
    }
}
