//! What a folder tells beside its site file and its casts: weather, side streams, stations.

use std::sync::Arc;

use crate::files::text::Source;
use crate::problem::Problem;
use crate::river::Conditions;

use super::Folder;

/// The files beside the casts, read.
#[derive(Debug, Clone, Default)]
pub struct Around {
    /// What they tell.
    pub conditions: Arc<Conditions>,
    /// Everything said of them.
    pub problems: Vec<Problem>,
    /// Their bytes, in the order they were read.
    pub sources: Vec<Source>,
}

impl Folder {
    /// The files beside the casts; they are read once, as the casts are.
    pub fn around(&self) -> &Around {
        self.around.get_or_init(Around::default)
    }

    /// What the folder tells of the river.
    pub fn conditions(&self) -> Arc<Conditions> {
        Arc::clone(&self.around().conditions)
    }
}
