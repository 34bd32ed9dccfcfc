//! A real process at work, killed at random moments: nothing but the last second is lost, no file is damaged.

use crate::harness::{Window, open, press, state};
use eframe::egui::Theme;
use egui_kittest::kittest::Queryable as _;
use parabound::gui::app::Start;
use parabound::study_file::StudyFile;
use std::io::{BufRead as _, BufReader};
use std::path::Path;
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

/// Processes killed, and how many work in one folder at once.
const KILLED: u32 = 50;
const AT_ONCE: u32 = 5;
const SECOND: Duration = Duration::from_secs(1);

/// What is known of a killed process.
struct Killed {
    number: u32,
    /// The changes it told of, each with the time before its end.
    changes: Vec<(u32, Duration)>,
}

impl Killed {
    /// The change that must not be lost: told a second before the end, or longer where the machine was so busy
    /// that the process itself had to wait for its turn.
    fn must_be_there(&self) -> Option<u32> {
        let waits = self.changes.windows(2).map(|w| w[0].1.saturating_sub(w[1].1));
        let last = self.changes.last().map(|c| c.1);
        let longest = waits.chain(last).max().unwrap_or_default();
        self.changes.iter().filter(|c| c.1 > SECOND + longest).map(|c| c.0).next_back()
    }
}

fn work_and_be_killed(state_folder: &Path, study: &Path, number: u32, life: Duration) -> Killed {
    let mut child = Command::new(env!("CARGO_BIN_EXE_at-work"))
        .args([state_folder.as_os_str(), study.as_os_str()])
        .arg(number.to_string())
        .stdout(Stdio::piped())
        .spawn()
        .expect("started");
    let told = BufReader::new(child.stdout.take().expect("its output"));
    let reader = std::thread::spawn(move || {
        let number = |line: std::io::Result<String>| Some((line.ok()?.parse().ok()?, Instant::now()));
        told.lines().map_while(number).collect::<Vec<(u32, Instant)>>()
    });
    std::thread::sleep(life);
    child.kill().expect("killed");
    let end = Instant::now();
    child.wait().expect("gone");
    let changes = reader.join().expect("read");
    Killed {
        number,
        changes: changes.into_iter().map(|(n, at)| (n, end.saturating_duration_since(at))).collect(),
    }
}

/// The number of the process and of its last change, from what the window shows.
fn shown(window: &Window) -> (u32, u32) {
    let (_, _, settings) = state(window).document.focused().expect("a curve");
    let from = settings.fits.window.map_or(1.0, |w| w.from);
    (((from - 1.0) * 1e3).round() as u32, (settings.reach.tolerance * 1e6).round() as u32)
}

fn every_study_can_be_read(folder: &Path) {
    for entry in std::fs::read_dir(folder).expect("listed") {
        let path = entry.expect("entry").path();
        if path.extension().is_some_and(|e| e == "parabound") {
            let bytes = std::fs::read(&path).expect("read");
            StudyFile::from_bytes(&bytes).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
        }
    }
}

#[test]
fn killed_while_at_work_fifty_times() {
    // Not random from run to run: the times differ anyway.
    let mut seed = 0x2545_f491_4f6c_dd1d_u64;
    let mut random = || {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 11) as f64 / (1_u64 << 53) as f64
    };
    let (mut restored, mut worst) = (0, Duration::ZERO);
    for round in 0..KILLED / AT_ONCE {
        let folder = tempfile::tempdir().expect("a folder");
        let state_folder = folder.path().join("state");
        let lives: Vec<Duration> =
            (0..AT_ONCE).map(|_| Duration::from_secs_f64(0.3 + 3.5 * random())).collect();
        let killed: Vec<Killed> = std::thread::scope(|scope| {
            let start = |(number, life): (u32, Duration)| {
                let (state, study) = (&state_folder, folder.path().join(format!("{number}.parabound")));
                scope.spawn(move || work_and_be_killed(state, &study, number, life))
            };
            let all: Vec<_> = (1..).zip(lives).map(start).collect();
            all.into_iter().map(|thread| thread.join().expect("done")).collect()
        });
        every_study_can_be_read(folder.path());
        if state_folder.exists() {
            every_study_can_be_read(&state_folder);
        }
        // A new window offers all of it.
        let start = Start { state_folder: Some(state_folder.clone()), ..Start::default() };
        let mut window = open([1000.0, 700.0], Theme::Dark, start);
        let mut found = Vec::new();
        while !state(&window).leftovers.is_empty() {
            press(&mut window, "Restore");
            found.push(shown(&window));
        }
        restored += found.len();
        for one in &killed {
            let back = found.iter().find(|f| f.0 == one.number).map(|f| f.1);
            let needed = one.must_be_there();
            assert!(back >= needed, "round {round}, process {}: {back:?}, needed {needed:?}", one.number);
            let lost = one.changes.iter().find(|c| Some(c.0) > back).map_or(Duration::ZERO, |c| c.1);
            worst = worst.max(lost);
        }
        assert!(window.query_by_label("Restore").is_none());
    }
    println!("{KILLED} killed, {restored} left work, at most {worst:.2?} of it was lost");
    assert!(restored > 0, "none lived long enough to have work");
}
