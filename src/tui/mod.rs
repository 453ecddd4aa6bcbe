//! The screens. A key becomes a message, a message changes the model, the model is drawn.

pub mod draw;
mod errands;
mod keys;
mod likes;
mod look;
pub mod model;
mod run;
mod terminal;
mod update;
mod view;
mod work;

pub use errands::{log, save};
pub use keys::{Action, Binding, Place, TABLE};
pub use look::{Look, Role, Symbols, Theme};
pub use run::{run, sites, start};
pub use update::{Effect, Event, begin, places, update};
pub use view::{Hit, draw as draw_model, hit};
pub use work::{Anew, Computed, Done, Lane, On, Seen, Sent, Work};
