//! Texts of a change order of `site.yaml`.

use crate::files::cursor::Map;
use crate::site::RawOrder;

use super::{each, text};

pub(super) fn texts(map: &Map) -> RawOrder {
    let listed = |key| {
        let texts = map.optional(key).and_then(|v| v.text_list()).unwrap_or_default();
        texts.into_iter().map(str::to_owned).collect()
    };
    let switch = |key| map.optional(key).and_then(|v| v.boolean());
    RawOrder {
        to: text(map, "to"),
        shut_first: switch("shut_first"),
        through_bands: switch("through_bands"),
        hold_points: each(map, "hold_points", |m| {
            (text(m, "after"), m.required("text").and_then(|v| v.text().map(str::to_owned)))
        }),
        stop_when: listed("stop_when"),
        may_cancel: text(map, "may_cancel"),
        warning: text(map, "warning"),
        sign: listed("sign"),
    }
}
