//! The casts of a site side by side, and the same question asked of another of them.

use std::sync::Arc;

use chrono::{DateTime, FixedOffset};

use crate::files::folder::Read;
use crate::problem::Problem;
use crate::profile::Profile;

use super::pool::{PoolAnswer, after};
use super::{Context, Failure, is_passed_over};

/// One cast of the folder.
#[derive(Debug, Clone)]
pub struct Cast {
    /// File, as [`Context::with_cast`] takes it.
    pub file: String,
    /// When it was taken.
    pub taken: Option<DateTime<FixedOffset>>,
    /// The site with this cast under its own pool, and the answer of `pool`; `None` where it cannot be held against
    /// the site.
    pub pool: Option<(Arc<Context>, PoolAnswer)>,
    /// Everything said of it.
    pub problems: Vec<Problem>,
}

impl Cast {
    /// The cast held against the site.
    pub fn profile(&self) -> Option<&Profile> {
        self.pool.as_ref().map(|(context, _)| &context.profile)
    }
}

/// Every cast of the folder in order of time, each under its own pool; those without a time come first.
pub fn casts(context: &Context) -> Vec<Cast> {
    let mut out: Vec<Cast> = Vec::new();
    for listed in context.folder.casts() {
        let (profile, mut problems) = context.folder.profile_of(listed);
        let pool = profile.zip(listed.source.clone()).map(|(profile, source)| {
            let read = Read { profile, source };
            let own =
                Context::of(context.folder.clone(), read, (context.on, context.on_from), context.system);
            // the files are in order of time: what was read before need not be read again
            let mut sound = out.iter().rev().filter_map(|c| c.pool.as_ref()).map(|(c, _)| c);
            let earlier = own.profile.taken.and_then(|taken| {
                sound.find(|c| c.profile.taken.is_some_and(|t| t < taken)).map(|c| (&c.profile, &c.source))
            });
            let answer = after(&own, earlier);
            (Arc::new(own), answer)
        });
        if let Some((own, _)) = &pool {
            // what is said of other files is not said of every cast
            problems = own.profile.flags.iter().filter(|p| !is_passed_over(p)).cloned().collect();
        }
        out.push(Cast {
            file: listed.file.clone(),
            taken: listed.raw.as_ref().and_then(|raw| raw.taken),
            pool,
            problems,
        });
    }
    out
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
