//! The casts of a site side by side, and the same question asked of another of them.

use chrono::{DateTime, FixedOffset};

use crate::problem::Problem;
use crate::profile::Profile;

use super::{Context, Failure};

/// One cast of the folder.
#[derive(Debug, Clone)]
pub struct Cast {
    /// File, as [`Context::with_cast`] takes it.
    pub file: String,
    /// When it was taken.
    pub taken: Option<DateTime<FixedOffset>>,
    /// The cast held against the site, under its own pool; `None` where that cannot be done.
    pub profile: Option<Profile>,
    /// Everything said of it.
    pub problems: Vec<Problem>,
}

/// Every cast of the folder in order of time, each under its own pool; those without a time come first.
pub fn casts(context: &Context) -> Vec<Cast> {
    let listed = context.folder.casts();
    listed
        .into_iter()
        .map(|listed| {
            let (profile, problems) = context.folder.profile_of(&listed);
            Cast { file: listed.file, taken: listed.raw.and_then(|raw| raw.taken), profile, problems }
        })
        .collect()
}

impl Context {
    /// The same site, date and units with another cast of the folder, under its own pool, as if it had been named by
    /// `--profile`: its file as listed, or the name of that file alone.
    ///
    /// # Errors
    /// Every problem of the cast, or that it is not there any more.
    pub fn with_cast(&self, file: &str) -> Result<Self, Failure> {
        let read = self.folder.own_cast(file).map_err(|problems| Failure::Refused(problems, self.system))?;
        Ok(Self::of(self.folder.clone(), read, (self.on, self.on_from), self.system))
    }
}
