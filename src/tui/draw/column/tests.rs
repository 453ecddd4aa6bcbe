//! The picture as text.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Modifier;

use super::*;
use crate::tui::{Symbols, Theme};

const FOOT_M: f64 = 0.3048;

fn gate(name: &str, centre_m: f64, state: GateState) -> GateMark {
    let (top_m, bottom_m) = (centre_m + 1.0, centre_m - 1.0);
    GateMark { name: name.into(), centre_m, top_m, bottom_m, state, chosen: false, note: String::new() }
}

fn zone(label: &str, lower_m: f64, upper_m: f64, peak_m: f64) -> ZoneMark {
    let velocity = vec![(lower_m, 0.0), (peak_m, 1.0), (upper_m, 0.0)];
    let (label, lower_free, upper_free) = (label.into(), true, true);
    ZoneMark { label, lower_m, upper_m, peak_m, velocity, lower_free, upper_free }
}

/// An invented pool 40 m deep: 8 C to 20 C, oxygen with a gap in its middle.
fn picture() -> Picture {
    let mut chosen = gate("B", 120.0, GateState::Drawing);
    chosen.chosen = true;
    chosen.note = "20 m".into();
    let mut cut = zone("A", 128.0, 140.0, 136.0);
    cut.upper_free = false;
    Picture {
        system: System::Si,
        bed_m: 100.0,
        surface_m: 140.0,
        water: Water {
            temperature: vec![(100.0, 8.0), (118.0, 9.0), (126.0, 18.0), (140.0, 20.0)],
            oxygen: vec![vec![(100.0, 0.5), (110.0, 4.0)], vec![(118.0, 6.0), (140.0, 9.0)]],
        },
        thermocline_m: Some(122.0),
        cold_c: Some(12.0),
        gates: vec![
            gate("A", 136.0, GateState::Drawing),
            chosen,
            gate("C", 120.0, GateState::OpenNoFlow),
            gate("Low", 104.0, GateState::Shut),
            gate("Old", 110.0, GateState::Out),
        ],
        zones: vec![cut, zone("B C", 112.0, 124.0, 119.0)],
        flags: vec![(133.0, "spike".into())],
        ..Picture::default()
    }
}

fn look(symbols: Symbols) -> Look {
    Look { symbols, theme: Theme::Mono }
}

fn drawn(picture: &Picture, width: u16, height: u16, symbols: Symbols) -> Buffer {
    let area = Rect::new(0, 0, width, height);
    let mut buf = Buffer::empty(area);
    column(picture, area, &mut buf, look(symbols));
    buf
}

fn lines(buf: &Buffer) -> Vec<String> {
    let area = buf.area;
    let line = |y| (0..area.width).map(|x| buf[(x, y)].symbol()).collect::<String>().trim_end().to_owned();
    (0..area.height).map(line).collect()
}

#[test]
fn unchanged_the_picture_in_plain_characters() {
    assert_eq!(
        lines(&drawn(&picture(), 40, 14, Symbols::Ascii)),
        [
            "  m  gates          T  10     15    20 C",
            "140+~~~~~~~A~~~~~~~~~~~~+~~~~~~+~~~~~+~~",
            "   # >A    ## <            :      O2o*T",
            "   #       ## |            :       o*  !",
            "130+       #  |            :      o *",
            "   |          ' B C        :     8**",
            "   #            #  .       *****8     c",
            "120#[>B]=C      ###<   ****:   o",
            "   |            #  |   *   :",
            "110# xOld          '   *   oo",
            "   #                  *Tooo:",
            "   # |Low             8oO2 :12 C",
            "100+==================+=======+======+==",
            "              O2 mg/L 0       5     10",
        ]
    );
}

#[test]
fn unchanged_the_picture_in_dots() {
    let mut picture = picture();
    picture.cursor_m = Some(121.0);
    assert_eq!(
        lines(&drawn(&picture, 64, 24, Symbols::Braille)),
        [
            "    m  gates                T     10           15           20 C",
            "140.0┤~~~~~~~~~~~~A~~~~~~~~~~~~~~~~┴~~~~~~~~~~~~┴~~~~~~~~~~~~┴~~",
            "     │            ⣷⣦⣤⣀    ╕  │          ┊                 ⡜O2⣿T",
            "     ║ >A         ⣿⣿⣿⣿⣿⣶⣤⣀<  │          ┊                ⡜  ⣸⠇",
            "  135╢            ⣿⣿⣿⣿⣿⡿⠋⠁│  │          ┊               ⡜  ⢰⡏",
            "     │            ⣿⣿⣿⡿⠋   │  │          ┊              ⡜  ⢠⡟   !",
            "  130┤            ⣿⠟⠋     │  │          ┊             ⡜  ⢀⡾⠁",
            "     │            ⠃       ┘  │          ┊            ⡜   ⣼⠃",
            "  125┤            B C        │          ┊           ⣜⣀⡤⠤⠞⠃",
            "     │            ⣦⣄⡀     ┐  │          ┊    ⢀⣀⣠⠤⠖⠒⡟⠉",
            "121.0║────────────⣿⣿⣿⣷⣤⣀──│──│─────────⣀⣠⠤⠖⠒⠋⠉────⡜─── at 121 c─",
            "  120╢[>B]=C 20 m ⣿⣿⣿⣿⣿⣿⣿⠆<  │  ⢀⣠⠤⠴⠒⠋⠉⠁┊        ⡜",
            "     │            ⣿⣿⣿⣿⡿⠋⠁ │  │  ⣸⠇      ┊",
            "  115┤            ⣿⣿⠟⠁    │  │  ⣿       ┊",
            "     │            ⠋       ┘  │ ⢰⡏       ┊",
            "  110╢ xOld                  │ ⢸⡇       ┊ ⡠",
            "     │                       │ ⣿       ⣀⠔⠉",
            "  105╢                       │⢠⡟    ⢀⡠⠊ ┊",
            "     ║ |Low                  │⢸⡇T ⡠⠔⠁   ┊",
            "     │                       │⣿⢀⠔⠊O2    ┊12 C",
            "100.0┤════════════════════════╤═════╤═════╤══════╤═════╤═════╤══",
            "                      O2 mg/L 0     2     4      6     8    10",
            "121.0 m  12.4 C  6.4 mg/L",
            "> draws  = open, no flow  | shut  x out  < peak  ┐ free end",
        ]
    );
}

#[test]
fn unchanged_the_picture_in_half_blocks_with_a_gate_above_the_water() {
    let mut picture = picture();
    picture.gates.push(gate("Crest", 146.0, GateState::Dry));
    picture.water.oxygen.clear();
    assert_eq!(
        lines(&drawn(&picture, 50, 18, Symbols::Block)),
        [
            "    m  gates              T   10      15      20 C",
            "     ┤─────────────────────────┴───────┴───────┴──",
            "     ║ ^Crest              │",
            "     │        A            │",
            "140.0╢~~~~~~~~█▄~~╕~~~~~~~~│~~~~~~┊~~~~~~~~~~~~█T~",
            "     ║ >A     ███▀<        │      ┊           █",
            "     │        █▀  │        │      ┊          ▄▀  !",
            "  130┤        ▀   ┘ B C    │      ┊         ▄▀",
            "     │                  ┐  │      ┊     ▄▄▄▀▀",
            "     ║              █▄  │  │      ▄▄▄▀▀▀ at 121 c",
            "  120╢[>B]=C        ███▀<  │ ▄▄▀▀▀┊",
            "     │              █▀  │  │ █    ┊",
            "     ║              ▀   ┘  │ █    ┊",
            "  110╢ xOld                │▄▀    ┊",
            "     ║ |Low                │█     ┊",
            "     ║                     │█T    ┊12 C",
            "100.0┤════════════════════════════════════════════",
            "                               oxygen not measured",
        ]
    );
}

/// Where a text stands first, in cells.
fn found(buf: &Buffer, text: &str) -> (u16, u16) {
    let all = lines(buf);
    let (y, line) = all.iter().enumerate().find(|(_, l)| l.contains(text)).unwrap();
    let x = line[..line.find(text).unwrap()].chars().count();
    (u16::try_from(x).unwrap(), u16::try_from(y).unwrap())
}

#[test]
fn scenario_meaning_has_a_style_beside_its_sign() {
    let buf = drawn(&picture(), 64, 20, Symbols::Braille);
    let look = look(Symbols::Braille);
    let at = |text: &str| buf[found(&buf, text)].style();
    let has = |text: &str, modifier| at(text).add_modifier.contains(modifier);
    assert!(has(">B", Modifier::REVERSED) && !has("=C", Modifier::REVERSED));
    assert!(has(">A", Modifier::BOLD) && !has("|Low", Modifier::BOLD));
    let coloured = Look { theme: Theme::Palette, ..look };
    let mut buf = Buffer::empty(Rect::new(0, 0, 64, 20));
    column(&picture(), buf.area, &mut buf, coloured);
    for (text, role) in
        [("O2 mg/L", Role::Oxygen), ("⣷", Role::Zone), ("12 C", Role::Cold), ("!", Role::Warn)]
    {
        assert_eq!(buf[found(&buf, text)].style().fg, coloured.style(role).fg, "{text}");
    }
}

#[test]
fn scenario_two_pictures_on_fixed_scales_compare() {
    let mut one = picture();
    one.fixed = Fixed {
        temperature_c: Some((0.0, 30.0)),
        oxygen_mg_l: Some((0.0, 12.0)),
        elevation_m: Some((90.0, 150.0)),
    };
    let mut two = one.clone();
    two.surface_m = 138.0;
    for picture in [&mut one, &mut two] {
        picture.gates.clear();
    }
    two.water.temperature = vec![(100.0, 2.0), (138.0, 29.0)];
    two.water.oxygen = vec![vec![(100.0, 0.0), (138.0, 12.0)]];
    let [one, two] = [one, two].map(|p| lines(&drawn(&p, 60, 20, Symbols::Ascii)));
    assert_eq!((&one[0], one.last()), (&two[0], two.last()));
    assert!(one[0].ends_with("T 0       10       20       30 C"), "{}", one[0]);
    let row = |lines: &[String], label: &str| lines.iter().position(|l| l.starts_with(label)).unwrap();
    assert_eq!(row(&one, "100.0+="), row(&two, "100.0+="));
    assert!(row(&one, "140.0+~") < row(&two, "138.0+~"), "{one:#?} {two:#?}");
}

#[test]
fn scenario_the_cursor_reads_what_is_there() {
    let mut picture = picture();
    for (elevation_m, said) in [
        (133.0, "133.0 m  19.0 C  8.0 mg/L  ! spike"),
        (114.0, "114.0 m  8.8 C  no oxygen here"),
        (101.0, "101.0 m  8.1 C  0.9 mg/L"),
    ] {
        picture.cursor_m = Some(elevation_m);
        for (width, height) in [(40, 12), (64, 22)] {
            let lines = lines(&drawn(&picture, width, height, Symbols::Ascii));
            assert!(lines.iter().any(|l| l == said), "{said}: {lines:#?}");
        }
    }
    picture.system = System::Us;
    picture.cursor_m = Some(400.0 * FOOT_M);
    let lines = lines(&drawn(&picture, 50, 18, Symbols::Ascii));
    assert_eq!(lines.last().unwrap(), "400.0 ft  56.1 F  6.5 mg/L");
}

#[test]
fn scenario_other_casts_are_dotted_and_lettered_small() {
    let mut picture = picture();
    let other = Water {
        temperature: vec![(100.0, 6.0), (140.0, 14.0)],
        oxygen: vec![vec![(100.0, 8.0), (140.0, 9.5)]],
    };
    picture.overlays.push(other);
    let wide = lines(&drawn(&picture, 70, 24, Symbols::Ascii));
    assert!(wide.iter().any(|l| l.contains(",t")) && wide.iter().any(|l| l.contains(".o")), "{wide:#?}");
    let small = lines(&drawn(&picture, 40, 14, Symbols::Ascii));
    assert!(!small.iter().any(|l| l.contains(",t")), "{small:#?}");
}

#[test]
fn scenario_gates_of_a_full_row_are_counted_and_the_chosen_one_is_named() {
    let mut picture = picture();
    picture.gates = (0..9).map(|k| gate(&format!("Gate {k}"), 120.0, GateState::Shut)).collect();
    picture.gates[7].chosen = true;
    let lines = lines(&drawn(&picture, 40, 12, Symbols::Ascii));
    assert!(lines.iter().any(|l| l.contains("[|Gate 7]+8")), "{lines:#?}");
}

#[test]
fn law_the_mouse_finds_every_gate_that_is_named() {
    let picture = picture();
    for (width, height) in [(40, 12), (50, 18), (75, 32)] {
        let area = Rect::new(3, 2, width, height);
        let mut buf = Buffer::empty(Rect::new(0, 0, width + 5, height + 5));
        column(&picture, area, &mut buf, look(Symbols::Ascii));
        for (i, g) in picture.gates.iter().enumerate() {
            let (x, y) = found(&buf, &format!("{}{}", g.state.sign(), g.name));
            assert_eq!(gate_at(&picture, area, x, y), Some(i), "{width}x{height} {}", g.name);
            let row_m = 40.0 / f64::from(height - 6);
            let off_m = elevation_at(&picture, area, y).unwrap() - g.centre_m;
            assert!(off_m.abs() <= 1.5 * row_m, "{} is {off_m} m off", g.name);
        }
        assert_eq!(gate_at(&picture, area, area.right() - 1, area.bottom() - 1), None);
        let rows = (0..height + 5).filter_map(|y| elevation_at(&picture, area, y));
        let rows: Vec<f64> = rows.collect();
        assert!(
            rows.is_sorted_by(|a, b| a > b) && rows.iter().all(|z| (100.0..140.0).contains(z)),
            "{rows:?}"
        );
    }
}

#[test]
fn law_nothing_panics_at_any_size_or_outside_the_buffer() {
    let mut worst = picture();
    worst.gates.push(gate("名前の長い水門\u{1b}[31m", 500.0, GateState::Dry));
    worst.gates.push(gate("", f64::NAN, GateState::Out));
    worst.zones.extend((0..12).map(|k| zone("a very long name", 90.0, 150.0, 100.0 + f64::from(k))));
    worst.water.temperature.push((f64::NAN, f64::INFINITY));
    worst.water.oxygen.push(vec![]);
    worst.flags.push((1e9, "far".into()));
    worst.cursor_m = Some(120.0);
    let empty = Picture::default();
    let mut upside = picture();
    (upside.bed_m, upside.surface_m) = (140.0, 100.0);
    for picture in [&worst, &empty, &upside] {
        for width in 0..=44 {
            for height in 0..=26 {
                for symbols in [Symbols::Braille, Symbols::Ascii] {
                    let mut buf = Buffer::empty(Rect::new(0, 0, width, height));
                    let area = buf.area;
                    column(picture, area, &mut buf, look(symbols));
                    column(picture, Rect::new(5, 3, width, height), &mut buf, look(symbols));
                    gate_at(picture, area, width / 2, height / 2);
                    elevation_at(picture, area, height / 2);
                    assert!(!lines(&buf).iter().any(|l| l.contains('\u{1b}')));
                    assert!(symbols == Symbols::Braille || !lines(&buf).iter().any(|l| l.contains('│')));
                }
            }
        }
    }
}
