//! The terminal: taken and given back in one place, whatever ends the program.

use std::cell::RefCell;
use std::io::{self, IsTerminal, Write, stdin, stdout};
use std::panic;
use std::rc::Rc;
use std::thread;

use crossterm::event::{
    DisableBracketedPaste, DisableMouseCapture, EnableBracketedPaste, EnableMouseCapture,
};
use crossterm::terminal::{
    BeginSynchronizedUpdate, EndSynchronizedUpdate, EnterAlternateScreen, LeaveAlternateScreen,
    disable_raw_mode, enable_raw_mode,
};
use crossterm::{clipboard::CopyToClipboard, cursor, execute, queue};
use ratatui::Terminal;
use ratatui::backend::CrosstermBackend;

use super::look::{Symbols, Theme};

/// Whether screens can be shown: both ends of the terminal are one.
pub(super) fn is_there() -> bool {
    stdin().is_terminal() && stdout().is_terminal()
}

/// What the terminal says of its colours: none under `NO_COLOR` (no-color.org), the palette where it names 256 or
/// more, else the 16.
pub(super) fn colours() -> Theme {
    let says = |name: &str| std::env::var(name).unwrap_or_default();
    let term = says("TERM");
    if !says("NO_COLOR").is_empty() || term == "dumb" {
        Theme::Mono
    } else if term.contains("256color") || matches!(says("COLORTERM").as_str(), "truecolor" | "24bit") {
        Theme::Palette
    } else {
        Theme::Ansi
    }
}

/// What its letters can be, where the user likes nothing else: a plain locale has plain characters (POSIX).
pub(super) fn symbols() -> Symbols {
    let locale =
        ["LC_ALL", "LC_CTYPE", "LANG"].iter().find_map(|n| std::env::var(n).ok().filter(|v| !v.is_empty()));
    match locale.as_deref() {
        Some("C" | "POSIX") => Symbols::Ascii,
        _ => Symbols::default(),
    }
}

/// A writer that holds everything until a frame is whole.
#[derive(Clone, Default)]
struct Held(Rc<RefCell<Vec<u8>>>);

impl Write for Held {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.0.borrow_mut().extend_from_slice(bytes);
        Ok(bytes.len())
    }

    /// Nothing: the frame goes when it is whole.
    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

impl Held {
    /// Sends what is held in one write, as one change of the screen where the terminal knows that.
    fn send(&self) -> io::Result<()> {
        let held = self.0.take();
        if held.is_empty() {
            return Ok(());
        }
        let mut frame = Vec::with_capacity(held.len() + 32);
        queue!(frame, BeginSynchronizedUpdate)?;
        frame.extend(held);
        queue!(frame, EndSynchronizedUpdate)?;
        let mut out = stdout().lock();
        out.write_all(&frame)?;
        out.flush()
    }
}

/// The terminal while the screens have it; given back when dropped.
pub(super) struct Taken {
    terminal: Terminal<CrosstermBackend<Held>>,
    held: Held,
    mouse: bool,
}

impl Taken {
    /// Takes the terminal.
    pub(super) fn take(mouse: bool) -> io::Result<Self> {
        give_back_on_panic();
        let held = Held::default();
        // nobody else gives back what is taken only half-way
        match enter(mouse).and_then(|()| blank(&held)) {
            Ok(terminal) => Ok(Self { terminal, held, mouse }),
            Err(error) => {
                give_back();
                Err(error)
            }
        }
    }

    /// Columns and rows.
    pub(super) fn size(&self) -> (u16, u16) {
        self.terminal.size().map_or((80, 24), |s| (s.width, s.height))
    }

    /// Draws a frame and sends it in one write.
    pub(super) fn draw(&mut self, draw: impl FnOnce(&mut ratatui::Frame)) -> io::Result<()> {
        self.terminal.draw(draw)?;
        self.held.send()
    }

    /// Puts text on the clipboard of the terminal, where it takes that.
    pub(super) fn copy(&mut self, text: &str) -> io::Result<()> {
        queue!(self.held, CopyToClipboard::to_clipboard_from(text))?;
        self.held.send()
    }

    /// Takes the mouse, or leaves it to the terminal.
    pub(super) fn mouse(&mut self, taken: bool) -> io::Result<()> {
        if taken == self.mouse {
            return Ok(());
        }
        self.mouse = taken;
        if taken { execute!(stdout(), EnableMouseCapture) } else { execute!(stdout(), DisableMouseCapture) }
    }

    /// Gives the terminal to the shell until the program is called back.
    #[cfg(unix)]
    pub(super) fn suspend(&mut self) -> io::Result<()> {
        give_back();
        signal_hook::low_level::raise(signal_hook::consts::SIGTSTP)?;
        enter(self.mouse)?;
        // the screen just entered is blank; to clear it would ask where the cursor is, which not every terminal answers
        self.terminal = blank(&self.held)?;
        // the one before shows the cursor as it goes
        self.held.0.take();
        Ok(())
    }

    /// Where there is no such signal nothing happens.
    #[cfg(not(unix))]
    pub(super) fn suspend(&mut self) -> io::Result<()> {
        Ok(())
    }
}

impl Drop for Taken {
    fn drop(&mut self) {
        give_back();
    }
}

/// Frames on a blank screen.
fn blank(held: &Held) -> io::Result<Terminal<CrosstermBackend<Held>>> {
    Terminal::new(CrosstermBackend::new(held.clone()))
}

fn enter(mouse: bool) -> io::Result<()> {
    enable_raw_mode()?;
    execute!(stdout(), EnterAlternateScreen, EnableBracketedPaste, cursor::Hide)?;
    if mouse { execute!(stdout(), EnableMouseCapture) } else { Ok(()) }
}

/// Gives everything back; what cannot be is left, since nobody is there to be told.
fn give_back() {
    _ = execute!(stdout(), DisableMouseCapture, DisableBracketedPaste, LeaveAlternateScreen, cursor::Show);
    _ = disable_raw_mode();
}

/// A fault of the screens gives the terminal back before it is told; one of a worker is told on the screens.
fn give_back_on_panic() {
    let screens = thread::current().id();
    let before = panic::take_hook();
    panic::set_hook(Box::new(move |fault| {
        if thread::current().id() == screens {
            give_back();
            before(fault);
        }
    }));
}
