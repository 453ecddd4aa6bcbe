//! The built program in a real pseudo-terminal.

use std::fs;
use std::path::Path;
use std::process::Command;

use tempfile::TempDir;
use vt100::MouseProtocolMode;

use crate::sites::{CAST, SITE, with};
use crate::terminal::Terminal;

const UP: &str = "\u{1b}[A";
const DOWN: &str = "\u{1b}[B";
const RIGHT: &str = "\u{1b}[C";
const CTRL_C: &str = "\u{3}";

/// A shell that tells the settings of the terminal before and after the program, and how that ended. The shell lives
/// through a signal to both.
const SHELL: &str = r#"trap : TERM INT; stty echo; before=$(stty -g); "$@"; code=$?; echo "before $before"; echo "after $(stty -g)"; echo "ended with $code""#;

/// A shell with job control: the program stops, a line goes to the shell, the program goes on.
const JOBS: &str = r#"set -m; stty echo; before=$(stty -g); "$@"; echo "stopped as"; jobs -p; echo "raw mode $(test "$before" = "$(stty -g)" && echo gone)"; read line; fg >/dev/null; code=$?; echo "before $before"; echo "after $(stty -g)"; echo "ended with $code""#;

/// The program on what its arguments name, with a folder that is its home and gone afterwards.
struct Run {
    home: TempDir,
    terminal: Terminal,
}

impl Run {
    fn start(arguments: &[&str], no_color: bool, size: (u16, u16)) -> Self {
        Self::at_home(tempfile::tempdir().unwrap(), arguments, no_color, size)
    }

    fn at_home(home: TempDir, arguments: &[&str], no_color: bool, size: (u16, u16)) -> Self {
        Self::in_shell(SHELL, home, arguments, no_color, size)
    }

    fn in_shell(shell: &str, home: TempDir, arguments: &[&str], no_color: bool, size: (u16, u16)) -> Self {
        let mut command = Command::new("sh");
        command.args(["-c", shell, "sh", env!("CARGO_BIN_EXE_gatemix")]).args(arguments);
        command.current_dir(home.path()).env("HOME", home.path()).env("XDG_CONFIG_HOME", home.path());
        command.env("TERM", "xterm-256color").env_remove("COLORTERM").env("LC_ALL", "C.UTF-8");
        if no_color {
            command.env("NO_COLOR", "1")
        } else {
            command.env_remove("NO_COLOR")
        };
        Self { home, terminal: Terminal::start(command, size) }
    }

    fn folder(&self) -> &Path {
        self.home.path()
    }

    /// Waits for the end; the terminal is as it was before.
    fn ended(&mut self) {
        let terminal = &mut self.terminal;
        terminal.wait_for_end();
        let (screen, text) = (terminal.screen(), terminal.text());
        assert!(text.contains("ended with 0"), "{text}");
        assert!(!screen.alternate_screen() && !screen.hide_cursor() && !screen.bracketed_paste(), "{text}");
        assert_eq!(screen.mouse_protocol_mode(), MouseProtocolMode::None);
        // the settings may be longer than a line
        let joined: String = text.lines().map(str::trim_end).collect();
        let between = |from: &str, to: &str| {
            joined.split(from).nth(1).and_then(|rest| rest.split(to).next()).unwrap().to_owned()
        };
        let (before, after) = (between("before ", "after "), between("after ", "ended"));
        assert!(before.contains(':'), "{text}");
        assert_eq!(before, after, "raw mode is left on");
    }
}

/// The release as the screen tells it: the line that holds a text, without blanks.
fn line_with(terminal: &Terminal, piece: &str) -> String {
    let text = terminal.text();
    text.lines().find(|line| line.contains(piece)).unwrap_or_default().to_owned()
}

/// Colours in what was written: parameters 30 to 38, 40 to 48, 90 to 107 of a sequence that ends with `m`.
fn colours(bytes: &[u8]) -> Vec<String> {
    let text = String::from_utf8_lossy(bytes).into_owned();
    let mut out = Vec::new();
    for piece in text.split("\u{1b}[").skip(1) {
        let Some(end) = piece.find(|c: char| c.is_ascii_alphabetic()) else { continue };
        if !piece[end..].starts_with('m') {
            continue;
        }
        let colour = |p: &str| matches!(p.parse(), Ok(30..=38 | 40..=48 | 90..=107));
        if piece[..end].split(';').any(colour) {
            out.push(piece[..=end].to_owned());
        }
    }
    out
}

/// On the demonstration: a flow is changed and the release follows, the best mix is taken from the ranking.
fn evening(no_color: bool) {
    let mut run = Run::start(&[], no_color, (120, 40));
    let terminal = &mut run.terminal;
    terminal.wait("the picture of the pool", |s| s.alternate_screen() && s.contents().contains("[1 pool]"));
    terminal.wait_for("Ashlar Dam");
    assert!(terminal.screen().hide_cursor() && terminal.screen().bracketed_paste());
    assert_ne!(terminal.screen().mouse_protocol_mode(), MouseProtocolMode::None);
    terminal.send("2");
    terminal.wait_for("the setting now");
    // the board begins at the first gate that flows; two rows below it is one in colder water
    terminal.send(&DOWN.repeat(2));
    terminal.send("\r");
    terminal.wait_for("flow of N4, cfs");
    terminal.send("200\r");
    terminal.wait_for("colder");
    let changed = line_with(terminal, "against now");
    terminal.send("3");
    terminal.wait_for("[3 rank]");
    terminal.wait("the ranking", |s| {
        let text = s.contents();
        let begins = |l: &str| l.split_whitespace().take(3).eq([">", "1", "N3"]);
        text.lines().any(begins) && !text.contains("ranking ")
    });
    terminal.send("\r");
    terminal.wait_for("no. 1 of the ranking is try");
    terminal.wait("another release", |s| {
        let text = s.contents();
        text.lines().any(|l| l.contains("against now")) && !text.contains(changed.trim())
    });
    terminal.send("q");
    run.ended();
    let colours = colours(&run.terminal.bytes);
    assert_eq!(colours.is_empty(), no_color, "{colours:?}");
}

#[test]
fn scenario_an_evening_at_the_terminal() {
    evening(false);
}

#[test]
fn scenario_the_same_without_colours() {
    evening(true);
}

#[test]
fn scenario_a_signal_ends_it_and_gives_the_terminal_back() {
    let mut run = Run::start(&[], false, (80, 24));
    run.terminal.wait_for("[1 pool]");
    // to the program and the shell around it, which outlives it
    let group = format!("-{}", run.terminal.pid());
    assert!(Command::new("kill").args(["-TERM", "--", &group]).status().unwrap().success());
    run.ended();
}

#[test]
fn scenario_ctrl_c_quits_while_something_is_typed() {
    let mut run = Run::start(&[], false, (80, 24));
    run.terminal.wait_for("[1 pool]");
    run.terminal.send("2");
    run.terminal.wait_for("[2 mix]");
    run.terminal.send("\r");
    run.terminal.wait_for("Enter sets it");
    run.terminal.send(CTRL_C);
    run.ended();
}

#[test]
fn scenario_ctrl_z_gives_the_terminal_to_the_shell_and_coming_back_finds_everything_as_it_was() {
    let mut run = Run::in_shell(JOBS, tempfile::tempdir().unwrap(), &[], false, (120, 40));
    let terminal = &mut run.terminal;
    terminal.wait_for("[1 pool]");
    terminal.send("2");
    terminal.wait_for("the setting now");
    terminal.send(&DOWN.repeat(2));
    terminal.send("\r");
    terminal.wait_for("flow of N4, cfs");
    terminal.send("200\r");
    terminal.wait_for("colder");
    let told = line_with(terminal, "against now");
    let begin = told.find("against now").unwrap();
    let tried = &told[begin..told.find("colder").unwrap()];
    terminal.send("\u{1a}");
    terminal.wait("the shell", |s| !s.alternate_screen() && s.contents().contains("raw mode"));
    let screen = terminal.screen();
    assert!(!screen.hide_cursor() && !screen.bracketed_paste(), "{}", terminal.text());
    assert_eq!(screen.mouse_protocol_mode(), MouseProtocolMode::None);
    terminal.wait_for("raw mode gone");
    if cfg!(target_os = "linux") {
        let text = terminal.text();
        let pid = text.lines().skip_while(|l| !l.starts_with("stopped as")).nth(1).unwrap().trim();
        let stat = fs::read_to_string(format!("/proc/{pid}/stat"));
        // proc(5): the state follows the name in brackets
        assert!(stat.unwrap().contains("(gatemix) T "), "it is not stopped");
    }
    // while it was away the terminal became smaller
    terminal.resize((100, 30));
    terminal.send("\n");
    terminal.wait("the screens", |s| s.alternate_screen() && s.contents().contains("[2 mix]"));
    terminal.wait_for(tried);
    assert!(terminal.screen().hide_cursor() && terminal.screen().bracketed_paste());
    terminal.send("1");
    terminal.wait_for("[1 pool]");
    terminal.send("q");
    run.ended();
}

#[test]
fn scenario_a_broken_file_shows_its_problems_and_opens_once_it_is_mended() {
    let home = tempfile::tempdir().unwrap();
    let folder = home.path().join("dam");
    fs::create_dir_all(folder.join("profiles")).unwrap();
    fs::write(folder.join("profiles/a.csv"), CAST).unwrap();
    let broken = with(SITE, "centre: 50", "centre: fifty");
    fs::write(folder.join("site.yaml"), &broken).unwrap();
    let line = broken.lines().position(|l| l.contains("fifty")).unwrap() + 1;
    let mut run = Run::at_home(home, &["dam"], false, (100, 30));
    run.terminal.wait_for("give no answer");
    run.terminal.wait_for(&format!("{line}"));
    run.terminal.wait_for("fifty");
    fs::write(run.folder().join("dam/site.yaml"), SITE).unwrap();
    run.terminal.wait_for("[1 pool]");
    run.terminal.wait_for("Test Dam");
    run.terminal.send("q");
    run.ended();
}

#[test]
fn scenario_settings_outlive_the_program() {
    let mut run = Run::start(&[], false, (80, 24));
    run.terminal.wait_for("units: US");
    run.terminal.send(",  ");
    run.terminal.wait_for("SI: m, m3/s, C");
    run.terminal.send("\u{1b}");
    run.terminal.wait("the settings to close", |s| !s.contents().contains("SI: m, m3/s, C"));
    run.terminal.send("q");
    run.ended();
    let mut run = Run::at_home(run.home, &[], false, (80, 24));
    run.terminal.wait_for("units: SI");
    run.terminal.send("q");
    run.ended();
}

#[test]
fn scenario_settings_that_cannot_be_read_are_told_and_not_written_over() {
    let home = tempfile::tempdir().unwrap();
    let file = home.path().join("gatemix/settings.yaml");
    fs::create_dir_all(file.parent().unwrap()).unwrap();
    let broken = "units: us\ntheme: [mono\n";
    fs::write(&file, broken).unwrap();
    let mut run = Run::at_home(home, &[], false, (200, 24));
    run.terminal.wait_for("settings.yaml:");
    run.terminal.send(",  ");
    run.terminal.wait_for("cannot be written over");
    run.terminal.send(CTRL_C);
    run.ended();
    assert_eq!(fs::read_to_string(file).unwrap(), broken);
}

#[test]
fn scenario_a_word_of_the_settings_it_does_not_know_is_told_and_left_alone() {
    let home = tempfile::tempdir().unwrap();
    let file = home.path().join("gatemix/settings.yaml");
    fs::create_dir_all(file.parent().unwrap()).unwrap();
    fs::write(&file, "theme: dark\n").unwrap();
    let mut run = Run::at_home(home, &[], false, (200, 24));
    run.terminal.wait_for("settings.yaml: flag: theme: ");
    run.terminal.wait_for("`dark`");
    run.terminal.send(", ");
    run.terminal.wait_for("kept for the next time");
    run.terminal.send(CTRL_C);
    run.ended();
    let kept = fs::read_to_string(file).unwrap();
    assert!(kept.ends_with("\nunits: us\ntheme: dark\n"), "{kept}");
}

#[test]
fn scenario_a_demonstration_hidden_by_a_folder_of_its_name_is_not_listed() {
    let home = tempfile::tempdir().unwrap();
    fs::create_dir_all(home.path().join("ashlar")).unwrap();
    fs::create_dir_all(home.path().join("dam/profiles")).unwrap();
    fs::write(home.path().join("dam/site.yaml"), SITE).unwrap();
    let listed = |home: TempDir| {
        let mut run = Run::at_home(home, &["."], false, (100, 30));
        run.terminal.wait_for("dam");
        let text = run.terminal.text();
        run.terminal.send("q");
        run.ended();
        (text.contains("ashlar"), run.home)
    };
    let (there, home) = listed(home);
    assert!(!there, "it would open the folder");
    fs::remove_dir(home.path().join("ashlar")).unwrap();
    assert!(listed(home).0, "nothing hides it");
}

#[test]
fn scenario_a_storm_of_keys_with_resizes_ends_with_the_terminal_given_back() {
    let home = tempfile::tempdir().unwrap();
    let folder = home.path().join("dam");
    fs::create_dir_all(folder.join("profiles")).unwrap();
    fs::write(folder.join("profiles/a.csv"), CAST).unwrap();
    fs::write(folder.join("site.yaml"), SITE).unwrap();
    let mut run = Run::at_home(home, &["dam"], false, (80, 24));
    run.terminal.wait_for("[1 pool]");
    let keys =
        ["1", "2", "3", UP, DOWN, RIGHT, "\u{1b}[D", "\t", "+", "-", ">", " ", "\r", "u", "r", "n", "c", "d"];
    let more = [
        "x",
        "l",
        "p",
        "[",
        "]",
        "z",
        "?",
        ",",
        "y",
        "7",
        "\u{1b}[5~",
        "\u{1b}[6~",
        "\u{1b}[<0;40;12M",
        "\u{1b}\u{1b}",
    ];
    // a fixed run through all of them, in an order that does not repeat soon
    let keys: Vec<&str> = keys.into_iter().chain(more).collect();
    let mut at = 0_usize;
    for number in 0..2000_usize {
        at = (at * 7 + number * number + 3) % keys.len();
        run.terminal.send(keys[at]);
        if number % 50 == 0 {
            let written = run.terminal.bytes.len();
            run.terminal.resize([(80, 24), (1, 1), (40, 10), (200, 60), (120, 40), (24, 6)][number / 50 % 6]);
            run.terminal.wait_for_bytes(written);
        }
    }
    run.terminal.resize((120, 40));
    // the reader of keys takes 1024 bytes at most and the rest with the next key: the last may need a push
    run.terminal.send_until_end(CTRL_C);
    run.ended();
}
