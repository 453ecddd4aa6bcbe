//! The makers of the demonstration sites' casts.

pub(crate) mod ashlar;
pub(crate) mod basin;
pub(crate) mod column;
pub(crate) mod heat;
pub(crate) mod past;
pub(crate) mod record;
pub(crate) mod season;
pub(crate) mod sonde;
pub(crate) mod sorrel;
pub(crate) mod tessel;
pub(crate) mod water;
