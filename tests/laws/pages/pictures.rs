//! Pictures through a strict reader of XML, and what stands in them.

use gatemix::report::page::{Block, Format, Page, Picture, PoolPicture, RangesPicture, Shows, written};
use proptest::prelude::*;
use roxmltree::Document;

use crate::columns::config;

use super::{HOSTILE, sample, texts, wanted};

/// The pictures within a piece in HTML.
fn svgs(page: &Page) -> Vec<String> {
    let html = written(page, Format::Html);
    html.split("<svg ")
        .skip(1)
        .filter_map(|s| Some(format!("<svg {}</svg>", s.split_once("</svg>")?.0)))
        .collect()
}

/// Well-formed, every word on the sheet and large enough; yields the words.
fn read(svg: &str) -> Result<Vec<String>, TestCaseError> {
    let document = Document::parse(svg).map_err(|why| TestCaseError::fail(format!("{why}: {svg}")))?;
    let root = document.root_element();
    let number = |node: roxmltree::Node, name: &str| node.attribute(name)?.parse::<f64>().ok();
    let (wide, high) = (number(root, "width").unwrap(), number(root, "height").unwrap());
    let mut words = Vec::new();
    for node in document.descendants().filter(|n| n.has_tag_name(("http://www.w3.org/2000/svg", "text"))) {
        let (x, y) = (number(node, "x").unwrap(), number(node, "y").unwrap());
        prop_assert!((0.0..=wide).contains(&x) && (0.0..=high).contains(&y), "{} {}", x, y);
        // eight units are a millimetre
        let points = number(node, "font-size").unwrap() / 8.0 / 25.4 * 72.0;
        prop_assert!(points >= 8.0, "{} pt", points);
        words.push(node.text().unwrap_or_default().trim().to_owned());
    }
    Ok(words)
}

#[test]
fn scenario_pictures_name_what_they_show() {
    let pictures: Vec<Vec<String>> = svgs(&sample::ordinary()).iter().map(|s| read(s).unwrap()).collect();
    let has = |at: usize, all: &[&str]| {
        for word in all {
            assert!(pictures[at].iter().any(|w| w == word), "{word} in {:?}", pictures[at]);
        }
    };
    assert_eq!(pictures.len(), 5);
    has(
        0,
        &[
            "N1 S1",
            "N3 S3",
            "N2",
            "S2",
            "N2 then",
            "N3 S3 now",
            "temperature, F",
            "oxygen, mg/L",
            "elevation, ft",
        ],
    );
    has(1, &["asked: 50.0 to 54.0, preferred 52.0", "to be set", "51.2", "unknown", "F"]);
    has(
        2,
        &[
            "dry",
            "ordinary",
            "wet",
            "greatest asked",
            "least asked",
            "change",
            "expected, 80 %",
            "release, F",
            "Aug",
        ],
    );
}

#[test]
fn law_pictures_are_well_formed_with_hostile_names() {
    for text in HOSTILE {
        let page = sample::with(text);
        let svgs = svgs(&page);
        assert_eq!(svgs.len(), 3);
        for svg in svgs {
            read(&svg).unwrap_or_else(|why| panic!("{text:?}: {why}"));
            let title = Document::parse(&svg)
                .unwrap()
                .root_element()
                .first_element_child()
                .unwrap()
                .text()
                .map(str::to_owned);
            assert_eq!(title.unwrap_or_default(), wanted(text));
        }
    }
}

/// Numbers that break pictures: none, endless, the same, far.
fn numbers() -> impl Strategy<Value = f64> {
    let odd =
        vec![0.0, -0.0, 1.0, 7.0, 7.0, 1e-300, 1e300, -1e300, f64::NAN, f64::INFINITY, f64::NEG_INFINITY];
    prop_oneof![proptest::sample::select(odd), -50.0..2000.0_f64]
}

proptest! {
    #![proptest_config(config(24))]
    #[test]
    fn law_pictures_stand_any_names(text in texts()) {
        for svg in svgs(&sample::with(&text)) {
            read(&svg)?;
        }
    }

    #[test]
    fn law_pictures_stand_any_numbers(
        n in proptest::collection::vec(numbers(), 12),
        asked in proptest::array::uniform3(proptest::option::of(numbers()))
    ) {
        let pool = PoolPicture {
            elevation_unit: "m".into(),
            ends: (n[0], n[1]),
            temperature_unit: "C".into(),
            temperature: vec![(n[2], n[3]), (n[4], n[5])],
            oxygen: vec![(n[6], n[7])],
            outlets: vec![("A".into(), n[8], n[9], true), ("B".into(), n[9], n[8], false)],
            zones: (0..9).map(|k| (format!("zone {k}"), n[10], n[11])).collect(),
        };
        let ranges = RangesPicture {
            unit: "C".into(),
            asked: asked.into(),
            rows: n.chunks(3).map(|c| ("row".to_owned(), Some(c[0]), Some((c[1], c[2])))).collect(),
        };
        for shows in [Shows::Pool(pool), Shows::Ranges(ranges)] {
            let picture = Picture { title: "t".into(), words: "w".into(), shows };
            for svg in svgs(&Page { title: "t".into(), blocks: vec![Block::Picture(Box::new(picture))] }) {
                read(&svg)?;
                prop_assert!(!svg.contains("NaN") && !svg.contains("inf"));
            }
        }
    }
}
