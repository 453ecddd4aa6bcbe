//! Markdown through a reader of CommonMark with pipe tables.

use gatemix::report::page::{Block, Format, Page, Table, written};
use proptest::prelude::*;
use pulldown_cmark::{Event, Options, Parser, Tag, TagEnd};

use crate::columns::config;

use super::{HOSTILE, sample, shown, texts, wanted};

/// What a reader finds: texts of blocks in order, and what must not be there.
#[derive(Debug, Default, PartialEq)]
struct Found {
    texts: Vec<String>,
    rows: Vec<usize>,
    odd: Vec<String>,
}

fn read(markdown: &str) -> Found {
    let mut found = Found::default();
    let mut text = String::new();
    let options = Options::ENABLE_TABLES | Options::ENABLE_STRIKETHROUGH | Options::ENABLE_TASKLISTS;
    for event in Parser::new_ext(markdown, options) {
        match event {
            Event::Text(t) => text.push_str(&t),
            Event::End(TagEnd::Paragraph | TagEnd::Heading(_) | TagEnd::Item | TagEnd::TableCell) => {
                found.texts.push(shown(&std::mem::take(&mut text)));
                if event == Event::End(TagEnd::TableCell)
                    && let Some(cells) = found.rows.last_mut()
                {
                    *cells += 1;
                }
            }
            Event::Start(Tag::TableRow | Tag::TableHead) => found.rows.push(0),
            Event::Start(
                Tag::Paragraph
                | Tag::Heading { .. }
                | Tag::List(None)
                | Tag::Item
                | Tag::Table(_)
                | Tag::TableCell
                | Tag::Strong
                | Tag::BlockQuote(None),
            )
            | Event::End(_)
            | Event::Rule => {}
            other => found.odd.push(format!("{other:?}")),
        }
    }
    found
}

fn every(text: &str) -> Result<(), TestCaseError> {
    let text = &wanted(text);
    let page = Page {
        title: text.clone(),
        blocks: vec![
            Block::Heading(1, text.clone()),
            Block::Words(text.clone()),
            Block::List(vec![text.clone(), text.clone()]),
            Block::Table(Table {
                caption: String::new(),
                head: vec!["a".into(), text.clone(), "c".into()],
                rows: vec![vec![text.clone(), "b".into(), text.clone()], vec![text.clone()]],
                right: vec![2],
            }),
            Block::Warning(text.clone()),
            Block::Facts(vec![("Asset".into(), text.clone())]),
            Block::Blanks(vec![format!("a {text}")]),
        ],
    };
    let found = read(&written(&page, Format::Markdown));
    prop_assert_eq!(&found.odd, &Vec::<String>::new());
    prop_assert_eq!(&found.rows, &vec![3, 3, 3]);
    let t = text.as_str();
    let mut want = vec![t.to_owned(); 5];
    if t.is_empty() {
        // no text is no paragraph
        want.remove(2);
    }
    want.extend(["a", t, "c", t, "b", t, t, "", ""].map(str::to_owned));
    want.push(shown(&format!("Warning: {t}")));
    want.push(shown(&format!("Asset: {t}")));
    want.push(format!("{}: {}", shown(&format!("a {t}")), "_".repeat(30)));
    prop_assert_eq!(&found.texts, &want);
    Ok(())
}

#[test]
fn law_markdown_gives_back_hostile_texts() {
    for text in HOSTILE {
        every(text).unwrap_or_else(|why| panic!("{text:?}: {why}"));
    }
}

proptest! {
    #![proptest_config(config(150))]
    #[test]
    fn law_markdown_gives_back_any_text(text in texts()) {
        every(&text)?;
        let whole = written(&sample::with(&text), Format::Markdown);
        prop_assert!(read(&whole).odd.is_empty(), "{:?}", read(&whole).odd);
        prop_assert_eq!(&whole, &written(&sample::with(&text), Format::Markdown));
    }
}
