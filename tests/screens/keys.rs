//! The table of keys in the docs.

use std::fmt::Write as _;

use gatemix::tui::{Place, TABLE};

use crate::held::{hold, stop_at};

#[test]
fn unchanged_the_docs_hold_the_table_of_keys() {
    let mut text = String::from(
        "# Keys\n\nMade from the table in `src/tui/keys.rs`, as the help of the program is; rewritten with \
         `GATEMIX_WRITE_SCREENS=1 cargo test --test screens`.\n",
    );
    for (place, heading) in Place::HEADINGS {
        let told: Vec<_> = TABLE.iter().filter(|b| b.place == place && !b.words.is_empty()).collect();
        write!(text, "\n## {}\n\n| key | what it does |\n|---|---|\n", capital(heading)).unwrap();
        for binding in told {
            writeln!(text, "| `{}` | {} |", binding.shown, binding.words).unwrap();
        }
    }
    stop_at(&hold("keys.md", &text).into_iter().collect::<Vec<_>>());
}

fn capital(words: &str) -> String {
    let mut letters = words.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}
