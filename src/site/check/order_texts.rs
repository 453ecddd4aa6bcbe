//! Checks of the texts of a change order.

use crate::problem::Problem;
use crate::site::{HoldPoint, OrderTexts, Raw};

/// Longest text, characters (choice: the order is to fit a sheet).
const LONGEST: usize = 400;
/// Most texts of a list (choice, for the same reason).
const MOST: usize = 12;

pub(super) fn texts(raw: &Raw, problems: &mut Vec<Problem>) -> OrderTexts {
    let told = &raw.order;
    let one = |text: &Option<String>, key: &str, problems: &mut Vec<Problem>| {
        text.as_deref().map(|text| sound(text, key, problems))
    };
    let list = |texts: &[String], key: &str, problems: &mut Vec<Problem>| {
        few(texts.len(), key, problems);
        texts.iter().enumerate().map(|(i, text)| sound(text, &format!("{key}[{i}]"), problems)).collect()
    };
    few(told.hold_points.len(), "hold_points", problems);
    let hold_points = told.hold_points.iter().enumerate().filter_map(|(i, (after, text))| {
        let text = sound(text.as_deref()?, &format!("hold_points[{i}].text"), problems);
        let named = |name: &String| {
            let found = raw.outlets.iter().position(|o| o.name.as_ref() == Some(name));
            if found.is_none() {
                let words = format!("no outlet is named `{name}`");
                let cure = "name an outlet of this file, or leave it out to hold after every step";
                let problem = Problem::refused("unknown-outlet", words, cure);
                problems.push(problem.at(format!("order.hold_points[{i}].after")));
            }
            found
        };
        Some(HoldPoint { after: after.as_ref().and_then(named), text })
    });
    let hold_points = hold_points.collect();
    OrderTexts {
        to: one(&told.to, "to", problems),
        shut_first: told.shut_first.unwrap_or(false),
        through_bands: told.through_bands.unwrap_or(false),
        hold_points,
        stop_when: list(&told.stop_when, "stop_when", problems),
        may_cancel: one(&told.may_cancel, "may_cancel", problems),
        warning: one(&told.warning, "warning", problems),
        sign: list(&told.sign, "sign", problems),
    }
}

/// A text without blanks around it; an empty one and one that is too long are refused.
fn sound(text: &str, key: &str, problems: &mut Vec<Problem>) -> String {
    let text = text.trim();
    let length = text.chars().count();
    if length == 0 || length > LONGEST {
        let words = if length == 0 {
            "this text is empty".to_owned()
        } else {
            format!("this text has {length} characters, {LONGEST} at most")
        };
        let cure = "an order fits a sheet: say it shorter, or leave it out for a line to be filled by hand";
        problems.push(Problem::refused("order-text", words, cure).at(format!("order.{key}")));
    }
    text.to_owned()
}

fn few(count: usize, key: &str, problems: &mut Vec<Problem>) {
    if count > MOST {
        let words = format!("{count} texts, {MOST} at most");
        let cure = "an order fits a sheet: keep those that matter most";
        problems.push(Problem::refused("order-text", words, cure).at(format!("order.{key}")));
    }
}
