use gatemix::report::page::*;
use gatemix::tasks::{self, Asked, note::*};
fn main() {
    let a: Vec<String> = std::env::args().collect();
    let c = tasks::open(
        &Asked { site: Some(a[1].clone()), on: a.get(2).filter(|s| *s != "-").cloned(), ..Asked::default() },
        chrono::Utc::now(),
    )
    .unwrap();
    let words: Vec<tasks::Word> = a
        .iter()
        .skip(3)
        .map(|w| if w.contains('%') { tasks::Word::Open(w) } else { tasks::Word::Set(w) })
        .collect();
    let t = std::time::Instant::now();
    let n = note(&c, &NoteAsked { words, ..NoteAsked::default() }, &|_| std::ops::ControlFlow::Continue(()));
    eprintln!("{:?}", t.elapsed());
    let n = match n {
        Ok(n) => n,
        Err(f) => {
            println!("{}", gatemix::units::in_system(&f.words(), c.system));
            return;
        }
    };
    let p = gatemix::report::note::page(&c, &n);
    println!("### {}", p.title);
    for b in p.blocks {
        match b {
            Block::Heading(n, t) => println!("\n{} {t}", "#".repeat(n.into())),
            Block::Words(t) => println!("{t}"),
            Block::Warning(t) => println!("!! {t}"),
            Block::List(l) => {
                for t in l {
                    println!("- {t}")
                }
            }
            Block::Facts(l) => {
                for (a, b) in l {
                    println!("{a}: {b}")
                }
            }
            Block::Blanks(l) => {
                for t in l {
                    println!("{t} ______")
                }
            }
            Block::Table(t) => {
                println!("[{}]\n| {} |", t.caption, t.head.join(" | "));
                for r in t.rows {
                    println!("| {} |", r.join(" | "))
                }
            }
            Block::Picture(p) => println!("<{}> {}", p.title, p.words),
            Block::Sheet => println!("=========="),
            other => println!("{other:?}"),
        }
    }
}
