//! HTML through a reader that follows the standard and names what it had to mend.

use gatemix::report::page::{Format, Page, written};
use proptest::prelude::*;
use scraper::{ElementRef, Html, Selector};

use crate::columns::config;

use super::{HOSTILE, sample, shown, texts, wanted};

fn all<'a>(html: &'a Html, selector: &str) -> Vec<ElementRef<'a>> {
    let selector = Selector::parse(selector).unwrap();
    html.select(&selector).collect()
}

fn said(element: ElementRef) -> String {
    shown(&element.text().collect::<String>())
}

/// What holds for every piece in HTML.
fn held(page: &Page) -> Result<Html, TestCaseError> {
    let source = written(page, Format::Html);
    prop_assert_eq!(&source, &written(page, Format::Html));
    let html = Html::parse_document(&source);
    prop_assert!(html.errors.is_empty(), "{:?}", html.errors);
    for element in all(&html, "*") {
        let of = element.value();
        let name = of.name();
        let known = [
            "html",
            "head",
            "meta",
            "title",
            "style",
            "body",
            "main",
            "section",
            "h1",
            "h2",
            "h3",
            "h4",
            "h5",
            "h6",
            "p",
            "strong",
            "ul",
            "li",
            "dl",
            "div",
            "dt",
            "dd",
            "table",
            "caption",
            "thead",
            "tbody",
            "tr",
            "th",
            "td",
            "span",
            "figure",
            "figcaption",
            "svg",
            "desc",
            "rect",
            "line",
            "polyline",
            "polygon",
            "circle",
            "text",
        ];
        prop_assert!(known.contains(&name), "<{}>", name);
        for (attribute, value) in of.attrs() {
            prop_assert!(!attribute.starts_with("on"), "{}", attribute);
            prop_assert!(!["href", "src", "style", "xlink:href", "srcset", "data"].contains(&attribute));
            prop_assert!(attribute == "xmlns" || !value.contains("://"), "{}={}", attribute, value);
        }
    }
    let style = all(&html, "style").iter().map(ElementRef::inner_html).collect::<String>();
    prop_assert!(!style.contains("url(") && !style.contains("@import") && !style.contains("http"));
    for table in all(&html, "table") {
        let cells = |row: ElementRef| row.child_elements().count();
        let rows: Vec<usize> = table.select(&Selector::parse("tr").unwrap()).map(cells).collect();
        prop_assert!(rows.iter().all(|cells| *cells == rows[0]), "{:?}", rows);
        prop_assert_eq!(table.select(&Selector::parse("caption").unwrap()).count(), 1);
        prop_assert!(table.select(&Selector::parse("th").unwrap()).all(|th| th.attr("scope").is_some()));
    }
    for svg in all(&html, "svg") {
        let first: Vec<_> = svg.child_elements().take(2).map(|e| e.value().name().to_owned()).collect();
        prop_assert_eq!(first, ["title", "desc"]);
    }
    Ok(html)
}

/// Every text of a piece that holds one text everywhere.
fn every(text: &str) -> Result<(), TestCaseError> {
    let html = held(&sample::with(text))?;
    let want = wanted(text);
    for one in [
        "head > title",
        "h1",
        "h2",
        "h6",
        "li:not(.blanks li)",
        "dt",
        "dd",
        "caption",
        "svg > title",
        "svg > desc",
    ] {
        let found = all(&html, one);
        prop_assert!(!found.is_empty(), "{}", one);
        for element in found {
            prop_assert_eq!(&said(element), &want, "{}", one);
        }
    }
    let cells: Vec<String> = all(&html, "th, td").into_iter().map(said).collect();
    let table = [&want, &want, &want, &want, &want, ""];
    prop_assert_eq!(cells, table.repeat(2).into_iter().map(str::to_owned).collect::<Vec<_>>());
    prop_assert_eq!(said(all(&html, ".warning")[0]), shown(&format!("Warning: {want}")));
    prop_assert_eq!(said(all(&html, ".blanks span")[0]), want);
    prop_assert_eq!(all(&html, "svg").len(), 3);
    Ok(())
}

#[test]
fn law_html_gives_back_hostile_texts() {
    for text in HOSTILE {
        every(text).unwrap_or_else(|why| panic!("{text:?}: {why}"));
    }
}

#[test]
fn scenario_a_piece_stands_by_itself() {
    let html = held(&sample::ordinary()).unwrap();
    assert_eq!(all(&html, "html[lang=en] > head > meta[charset=utf-8]").len(), 1);
    let policy = all(&html, "meta[http-equiv=Content-Security-Policy]")[0].attr("content");
    assert_eq!(policy, Some("default-src 'none'; style-src 'unsafe-inline'"));
    assert_eq!(all(&html, "section").len(), 2);
    assert_eq!(all(&html, "section.sheet figure").len(), 5);
    assert_eq!(all(&html, ".beside > table + figure").len(), 1);
    // a short cell is kept on one line, a long one is not
    assert!(all(&html, "td.short").iter().any(|cell| said(*cell) == "2026-07-01 08:30 -08:00"));
    assert_eq!(all(&html, "section.sheet .pictures figure.half").len(), 2);
    assert_eq!(all(&html, "tbody tr").len(), 7);
}

proptest! {
    #![proptest_config(config(24))]
    #[test]
    fn law_html_gives_back_any_text(text in texts()) {
        every(&text)?;
    }
}
