//! How quick the screens are, measured on the built program in a pseudo-terminal, through its own threads: the time
//! from its start to the first full screen, from a key that changes a flow to the frame with the new mix, the bytes of
//! a frame, and what it does while nobody types.
//!
//! ```sh
//! cargo bench --bench screens
//! ```

#![allow(
    clippy::unwrap_used,
    clippy::print_stdout,
    reason = "a bench stops at its first surprise and prints"
)]

#[cfg(unix)]
#[path = "../screens/terminal.rs"]
mod terminal;

#[cfg(unix)]
mod measured {
    use std::fs;
    use std::process::Command;
    use std::time::{Duration, Instant};

    use super::terminal::Terminal;

    /// What is held: start and key, milliseconds (choice: what feels at once).
    const START_MS: f64 = 100.0;
    const KEY_MS: f64 = 30.0;
    const ROUNDS: usize = 7;
    const IDLE: Duration = Duration::from_secs(5);

    fn start(home: &std::path::Path) -> Terminal {
        let mut command = Command::new(env!("CARGO_BIN_EXE_gatemix"));
        command.current_dir(home).env("HOME", home).env("XDG_CONFIG_HOME", home);
        command.env("TERM", "xterm-256color").env("LC_ALL", "C.UTF-8").env_remove("NO_COLOR");
        Terminal::start(command, (120, 40))
    }

    fn ms(since: Instant) -> f64 {
        1000.0 * since.elapsed().as_secs_f64()
    }

    fn middle(times: &mut [f64]) -> (f64, f64) {
        times.sort_by(f64::total_cmp);
        (times[times.len() / 2], times[0])
    }

    /// User and system time so far, in ticks of the machine (proc(5): fields 14 and 15).
    fn ticks(pid: i32) -> u64 {
        let stat = fs::read_to_string(format!("/proc/{pid}/stat")).unwrap();
        let after = stat.rsplit_once(')').unwrap().1;
        after.split_whitespace().skip(11).take(2).map(|f| f.parse::<u64>().unwrap()).sum()
    }

    pub(crate) fn run() -> bool {
        let home = tempfile::tempdir().unwrap();
        let mut starts = Vec::new();
        for _ in 0..ROUNDS {
            let begun = Instant::now();
            let mut terminal = start(home.path());
            terminal.wait("the first full screen", |s| {
                let text = s.contents();
                text.contains("[1 pool]") && text.contains("Thermocline")
            });
            starts.push(ms(begun));
            terminal.send("q");
            terminal.wait_for_end();
        }
        let mut terminal = start(home.path());
        terminal.wait_for("Thermocline");
        let first = terminal.bytes.len();
        terminal.send("2");
        terminal.wait_for("the setting now");
        terminal.wait("the ranking", |s| s.contents().contains("50.6 to 58.6 F"));
        // the flow of N4, two rows below the first gate that flows
        terminal.send(&"\u{1b}[B".repeat(2));
        terminal.wait_for("[|N4]");
        let mut keys = Vec::new();
        let mut bytes = Vec::new();
        // up and down again, so that each step shows in the digits
        for key in [">", ">", ">", "<", "<", "<"] {
            let before = terminal.text();
            let release = |text: &str| {
                text.lines().find(|l| l.starts_with("tried")).map(str::to_owned).unwrap_or_default()
            };
            let (old, written, begun) = (release(&before), terminal.bytes.len(), Instant::now());
            terminal.send(key);
            terminal.wait("the new release", |s| release(&s.contents()) != old);
            keys.push(ms(begun));
            bytes.push(terminal.bytes.len() - written);
        }
        let (start_ms, start_least) = middle(&mut starts);
        let (key_ms, key_least) = middle(&mut keys);
        println!(
            "start to the first full screen    {start_ms:6.1} ms (least {start_least:.1}; held: {START_MS})"
        );
        println!("key to the frame with the new mix {key_ms:6.1} ms (least {key_least:.1}; held: {KEY_MS})");
        println!("bytes up to the first full screen {first:6}, after a key {bytes:?}");
        idle(&mut terminal);
        terminal.send("q");
        terminal.wait_for_end();
        start_ms < START_MS && key_ms < KEY_MS
    }

    /// What it does while nobody types.
    #[cfg(target_os = "linux")]
    fn idle(terminal: &mut Terminal) {
        terminal.wait("the ranking to end", |s| !s.contents().contains("ranking "));
        let (before, written) = (ticks(terminal.pid()), terminal.bytes.len());
        std::thread::sleep(IDLE);
        let used = ticks(terminal.pid()) - before;
        terminal.drain();
        println!(
            "idle for {} s                      {used} ticks of the processor, {} bytes written",
            IDLE.as_secs(),
            terminal.bytes.len() - written
        );
    }

    #[cfg(not(target_os = "linux"))]
    fn idle(_: &mut Terminal) {}
}

#[cfg(unix)]
fn main() -> std::process::ExitCode {
    if measured::run() { std::process::ExitCode::SUCCESS } else { std::process::ExitCode::FAILURE }
}

#[cfg(not(unix))]
fn main() {}
