//! What the weekly gate meeting of the spring decided, what was logged beside it, and how the gates truly stood.

use chrono::{NaiveDate, NaiveDateTime, NaiveTime};

/// A decision: from noon of its day the gates named stand open, and share the release.
pub(super) struct Meeting {
    day: &'static str,
    pub(super) gates: &'static [&'static str],
    pub(super) release_m3s: f64,
    pub(super) why: &'static str,
    pub(super) until: &'static str,
    pub(super) trigger: Option<&'static str>,
    /// When the crew had made it so, where that was later than noon.
    made: Option<&'static str>,
}

/// Who decided.
pub(super) const BY: &str = "weekly gate meeting";

/// In order; what the last of them set is what `site.yaml` says is set now.
pub(super) const MEETINGS: [Meeting; 10] = [
    Meeting {
        day: "2026-04-07",
        gates: &["T2"],
        release_m3s: 9.5,
        why: "The pool fills. T2 is the uppermost gate with water enough over it; no target holds before June.",
        until: "2026-04-21",
        trigger: None,
        made: None,
    },
    Meeting {
        day: "2026-04-21",
        gates: &["T2", "T3"],
        release_m3s: 12.0,
        why: "The snow comes down, so more is let go. T3 beside T2 keeps the river as cool as the brooks that join it.",
        until: "2026-05-05",
        trigger: Some("pool above 347.5 m"),
        made: None,
    },
    Meeting {
        day: "2026-05-05",
        gates: &["T2"],
        release_m3s: 11.5,
        why: "Melt near its height. T2 alone: the deep water is kept for the autumn.",
        until: "2026-05-12",
        trigger: None,
        made: None,
    },
    Meeting {
        day: "2026-05-12",
        gates: &["T2", "T4"],
        release_m3s: 11.5,
        why: "T4 beside T2 for a week, as every spring, so that the gate has moved before it is needed.",
        until: "2026-05-19",
        trigger: Some("release below 6 C at the gauge"),
        made: None,
    },
    Meeting {
        day: "2026-05-19",
        gates: &["T2"],
        release_m3s: 9.0,
        why: "T4 has moved well and is shut again. Warmer water for the river before the season of growth.",
        until: "2026-05-26",
        trigger: None,
        made: None,
    },
    Meeting {
        day: "2026-05-26",
        gates: &["T1", "T3"],
        release_m3s: 8.5,
        why: "T1 is covered now: its warm water with the cool of T3, so that neither layer is used up alone.",
        until: "2026-06-02",
        trigger: None,
        made: None,
    },
    Meeting {
        day: "2026-06-02",
        gates: &["T1", "T2"],
        release_m3s: 14.0,
        why: "The pool is full and what comes in has to leave: the upper two gates, in the middle of the range.",
        until: "2026-06-09",
        trigger: Some("release above 16 C at the gauge"),
        made: None,
    },
    Meeting {
        day: "2026-06-09",
        gates: &["T2", "T3"],
        release_m3s: 12.0,
        why: "Warm weather is forecast; cooler water while the young fish are counted at Ferry Bar.",
        until: "2026-06-16",
        trigger: Some("release below 10 C at the gauge"),
        made: None,
    },
    Meeting {
        day: "2026-06-16",
        gates: &["T2"],
        release_m3s: 9.7,
        why: "The count is done: T3 is shut again, cold water is spared.",
        until: "2026-06-23",
        trigger: None,
        made: Some("2026-06-20T12:00"),
    },
    Meeting {
        day: "2026-06-23",
        gates: &["T2", "T3"],
        release_m3s: 11.0,
        why: "The release goes up to 11 m3/s for supply. Two gates, so that the rack of T2 can be cleared of drift under \
              half the flow.",
        until: "2026-06-30",
        trigger: Some("rack cleared, or release below 10 C at the gauge"),
        made: None,
    },
];

/// First and last whole day on which a gate was not where the log says: the crew came days later.
pub(crate) const MADE_LATE: (&str, &str) = ("2026-06-17", "2026-06-19");

/// The place in [`MEETINGS`] of the one that a later line amends, that line's time, by whom and why, and the new day.
pub(super) const AMENDED: (usize, &str, &str, &str, &str) = (
    5,
    "2026-05-28T15:00",
    "fisheries biologist",
    "As decided; and T1 is shut should the release come above 14 C, for fry are still at the Bar.",
    "release above 14 C at the gauge",
);

/// What nobody planned: when it was written down, by whom, what, from when, and its last day.
pub(super) const EVENT: (&str, &str, &str, &str, &str) = (
    "2026-05-18T08:30",
    "gauge keeper",
    "meter fault: the logger below the dam repeats one reading; changed on the 17th",
    "2026-05-14T06:00",
    "2026-05-17",
);

impl Meeting {
    pub(super) fn day(&self) -> NaiveDate {
        self.day.parse().unwrap()
    }

    /// From when it holds.
    pub(super) fn from(&self) -> NaiveDateTime {
        self.day().and_time(NOON)
    }

    /// From when the gates stood so.
    fn made(&self) -> NaiveDateTime {
        self.made.map_or_else(|| self.from(), time)
    }

    /// What its gates give of a release, m3/s, by their heights; `gates_m` are those of the tower, the uppermost first.
    pub(super) fn flows_m3s(&self, gates_m: &[f64], release_m3s: f64) -> [(f64, f64); 2] {
        let height_m = |gate: &str| gates_m[gate.trim_start_matches('T').parse::<usize>().unwrap() - 1];
        match self.gates {
            [one, other] => [(height_m(one), 0.5 * release_m3s), (height_m(other), 0.5 * release_m3s)],
            [one, ..] => [(height_m(one), release_m3s), (height_m(one), 0.0)],
            [] => unreachable!("a meeting names gates"),
        }
    }
}

const NOON: NaiveTime = NaiveTime::from_hms_opt(12, 0, 0).unwrap();

pub(super) fn time(text: &str) -> NaiveDateTime {
    NaiveDateTime::parse_from_str(text, "%Y-%m-%dT%H:%M").unwrap()
}

/// What was decided for a moment, and how the gates truly stood then; `None` before the first meeting.
pub(super) fn at(moment: NaiveDateTime) -> Option<(&'static Meeting, &'static Meeting)> {
    let last = |stands: &dyn Fn(&Meeting) -> bool| MEETINGS.iter().rfind(|meeting| stands(meeting));
    let decided = last(&|meeting| meeting.from() <= moment)?;
    Some((decided, last(&|meeting| meeting.made() <= moment).unwrap_or(decided)))
}
