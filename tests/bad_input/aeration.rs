//! What conduits do to oxygen, in a site file: one change and the one thing said of it, and what a sound file becomes.

use gatemix::files::site::site;
use gatemix::site::Aeration;
use gatemix::water;

use super::site::{Case, SOUND};

/// Tried by the test of all errors of a site.
pub(super) const REFUSED: &[Case] = &[
    (
        "efficiency: 40, range: [25, 55]",
        "quality: 1",
        "aeration",
        "wells[0].aeration",
        "nothing says what the water gains",
    ),
    ("efficiency: 40,", "efficiency: 40, gain: 1,", "aeration", "wells[0].aeration", "in more than one way"),
    ("efficiency: 40", "efficiency: 140", "aeration", "wells[0].aeration.efficiency", "outside 0 to 100 %"),
    ("[25, 55]", "[45, 55]", "aeration", "wells[0].aeration.range", "outside its range"),
    ("[25, 55]", "[25, 155]", "aeration", "wells[0].aeration.range", "outside its range"),
    ("[25, 55]", "[25, 55], form: 1", "aeration", "wells[0].aeration.form", "belongs to a fall"),
    ("gain: 1.5", "gain: 150", "aeration", "outlets[2].aeration.gain", "outside 0 to 15 mg/L"),
    ("gain: 1.5", "gain: 1 m", "quantity", "outlets[2].aeration.gain", "unit of length"),
    ("fall: 3", "fall: -3", "aeration", "outlets[3].aeration.fall", "fall lies outside"),
    ("quality: 1.2", "quality: 12", "aeration", "outlets[3].aeration.quality", "outside 0 to 2"),
    ("form: 0.8", "form: 0.8, range: [1, 2]", "aeration", "outlets[3].aeration.range", "a fall has no range"),
    ("form: 0.8", "weir: 0.8", "unknown-key", "outlets[3].aeration.weir", "unknown key"),
    (
        "uncertain: true",
        "uncertain: true, aeration: { gain: 1 }",
        "aeration",
        "outlets[0].aeration",
        "below the well, not at a gate of `North`",
    ),
];

/// Said and answered.
pub(super) const FLAGGED: &[Case] =
    &[("fall: 3", "fall: 12", "fall-held", "outlets[3].aeration.fall", "a fall of")];

#[test]
fn scenario_every_gain_of_a_sound_file_reaches_the_site() {
    let read = site(SOUND, "site.yaml").site.unwrap();
    let by_well = Aeration { by: water::Aeration::Efficiency(0.4), range: Some((0.25, 0.55)) };
    assert_eq!(read.wells[0].aeration, Some(by_well));
    assert_eq!(read.aeration(0), Some(&by_well));
    let cone = Aeration { by: water::Aeration::Gain(1.5), range: Some((1.0, 2.0)) };
    assert_eq!(read.aeration(2), Some(&cone));
    let fall = water::Aeration::Fall { height_m: 3.0, quality: 1.2, weir: 0.8 };
    assert_eq!(read.aeration(3), Some(&Aeration { by: fall, range: None }));
    assert_eq!((read.aeration(4), read.aerates()), (None, true));
    // from end to end of the range, through the figure
    assert_eq!(cone.at(0.0), water::Aeration::Gain(1.0));
    assert_eq!(cone.at(0.5), water::Aeration::Gain(1.5));
    assert_eq!(cone.at(1.0), water::Aeration::Gain(2.0));
    let feet = SOUND.replace("length: m,", "length: ft,").replace("fall: 3,", "fall: 10,");
    let read = site(&feet, "site.yaml").site.unwrap();
    let Some(Aeration { by: water::Aeration::Fall { height_m, .. }, .. }) = read.aeration(3).copied() else {
        panic!("{:?}", read.aeration(3))
    };
    approx::assert_relative_eq!(height_m, 3.048);
}
