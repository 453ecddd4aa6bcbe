//! What is tried without being written: another pool, date or targets than the files say.

use chrono::{DateTime, FixedOffset};

use crate::problem::any_refused;
use crate::target::Target;

use super::{Context, Failure, OnFrom, age_flags};

/// What differs from the files.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Changed {
    /// Cast of the folder, as [`Context::with_cast`] takes it, under its own pool; the one opened when absent.
    pub cast: Option<String>,
    /// Pool elevation, m.
    pub pool_m: Option<f64>,
    /// Decision date.
    pub on: Option<DateTime<FixedOffset>>,
    /// Targets, in the order of the site file.
    pub targets: Option<Vec<Target>>,
}

impl Context {
    /// The same site with what is changed; as if the files and the command line had said so.
    ///
    /// # Errors
    /// A cast that cannot be read; a pool outside the table; a target whose ends are crossed.
    pub fn changed(&self, changed: &Changed) -> Result<Self, Failure> {
        let refused = |problems| Failure::Refused(problems, self.system);
        let mut out = match &changed.cast {
            Some(file) => self.with_cast(file)?,
            None => self.clone(),
        };
        if let Some(targets) = &changed.targets {
            let problems: Vec<_> = targets.iter().flat_map(|t| t.problems(&t.name)).collect();
            if any_refused(&problems) {
                return Err(refused(problems));
            }
            out.folder.site.targets.clone_from(targets);
        }
        out.profile.flags.retain(|f| !matches!(f.kind, "later" | "stale"));
        if let Some(pool_m) = changed.pool_m.filter(|p| (p - out.profile.pool_m).abs() > 1e-9) {
            out.profile = out.profile.at_pool(self.site(), pool_m).map_err(|p| refused(vec![p]))?;
        }
        if let Some(on) = changed.on {
            (out.on, out.on_from) = (on, OnFrom::Asked);
            out.age_days = out.profile.age_days(on);
        }
        age_flags(&out.folder.site, &mut out.profile, out.age_days);
        Ok(out)
    }
}
