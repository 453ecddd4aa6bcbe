//! The pool screen: reading the water, stepping through the casts.

use super::super::keys::Action;
use super::super::model::{Field, Model, Over, Typed};
use super::Effect;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    match action {
        Action::Colder => {
            model.over = Some(Over::Field(Field::new(Typed::Colder, String::new())));
            Vec::new()
        }
        _ => Vec::new(),
    }
}
