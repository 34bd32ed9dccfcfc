//! The program in the window: takes results and commands, then draws. Holds the parts and nothing more.

use super::apply::{self, Effect, apply};
use super::command::{Command, InterfaceSize};
use super::compute::{Ticket, Worker};
use super::extras::Extras;
use super::files::{Done, Files};
use super::job::{Request, StudyJob, broken_off, compute};
use super::keeper::Keeper;
use super::preferences::dress;
use super::reading::{self, ReadingCommand, ReadingEffect};
use super::state::{CurveKey, Failure, Page, PathPurpose, Progress, State, Study};
use super::watch::{Watch, Watched, Watching};
use super::{Program, look, panels};
use crate::figure::drawing::Paper;
use crate::settings::Settings;
use eframe::egui;
use egui::Key;
use std::path::PathBuf;
use std::sync::Arc;
use std::time::Duration;

/// What the window starts with.
#[derive(Clone, Debug, Default)]
pub struct Start {
    /// Files to open; none: the bundled sample.
    pub files: Vec<PathBuf>,
    /// The settings that studies of these files start from.
    pub settings: Settings,
    /// The page shown first.
    pub page: Page,
    /// The theme asked for; none: as remembered, or as the desktop has it.
    pub theme: Option<egui::Theme>,
    /// Opens nothing, for the empty state.
    pub empty: bool,
    /// Works on the thread that draws, for pictures and tests.
    pub inline: bool,
    /// How a study is computed; none: as the headless command does.
    pub job: Option<StudyJob>,
    /// Where running work and preferences are kept; none: nowhere.
    pub state_folder: Option<PathBuf>,
}

/// Results that come sooner are not announced.
const LATE: Duration = Duration::from_millis(150);
/// Work that takes longer shows how far it is and can be stopped.
const LONG: Duration = Duration::from_millis(500);

/// The program.
pub struct App {
    state: State,
    worker: Worker<Request, Result<Study, String>>,
    files: Files,
    /// What was asked for last: the curve, its settings, the check sum of its file.
    asked: Option<(CurveKey, Settings, String)>,
    watch: Option<Watch>,
    keeper: Option<Keeper>,
    extras: Extras,
}

impl App {
    /// The program, about to open what it starts with.
    pub fn new(ctx: &egui::Context, start: Start) -> Self {
        super::fonts::install_fonts(ctx);
        look::install(ctx);
        let (wake, wake_files) = (ctx.clone(), ctx.clone());
        let study = start.job.unwrap_or(compute);
        let job = move |(_, scan, settings): &Request, ticket: &Ticket| study(scan, settings, ticket);
        let worker = if start.inline {
            Worker::inline(job)
        } else {
            Worker::spawn(move || wake.request_repaint(), job)
        };
        let wake_watch = ctx.clone();
        // Pictures and tests are made from files that hold still.
        let watch = (!start.inline).then(|| Watch::new(move || wake_watch.request_repaint()));
        let files = Files::new(move || wake_files.request_repaint(), start.inline);
        let wake_extras = ctx.clone();
        let extras = Extras::new(move || wake_extras.request_repaint(), start.inline);
        let state = State::default();
        let mut app = Self { state, worker, files, asked: None, watch, keeper: None, extras };
        app.state.view.page = start.page;
        if let Some(folder) = start.state_folder {
            app.keeper = Some(Keeper::new(folder, ctx, &mut app.state, &mut app.files));
            if let Some(theme) = start.theme {
                app.state.preferences.dark = Some(theme == egui::Theme::Dark);
            }
            dress(ctx, &app.state.preferences);
        }
        // Our own commands do it, and are remembered.
        ctx.options_mut(|options| options.zoom_with_keyboard = false);
        if start.files.is_empty() && !start.empty {
            app.files.read_sample(0, start.settings.clone());
        }
        app.files.remembered = Arc::clone(&app.state.view.reading.remembered);
        if start.settings.read.lines.is_some() && !start.files.is_empty() {
            app.files.read_log_paths(start.files, start.settings);
            return app;
        }
        for path in start.files {
            app.files.read(path, start.settings.clone());
        }
        app
    }

    /// What the window knows.
    pub fn state(&self) -> &State {
        &self.state
    }

    /// Carries out a command, with what follows from it.
    pub fn give(&mut self, command: Command, ctx: &egui::Context) {
        for effect in apply(command, &mut self.state) {
            self.carry_out(effect, ctx);
        }
    }

    /// Asks for the study that the state needs and takes the answers that have come, as every frame does.
    pub fn compute_now(&mut self) {
        self.exchange_studies();
    }

    fn carry_out(&mut self, effect: Effect, ctx: &egui::Context) {
        self.files.remembered = Arc::clone(&self.state.view.reading.remembered);
        match effect {
            Effect::AskOpen => self.files.ask_open(),
            Effect::AskSave { product, name } => self.files.ask_save(PathPurpose::Write(product), name),
            Effect::AskSaveStudy(name) => self.files.ask_save(PathPurpose::SaveStudy, name),
            Effect::WriteStudy { path, overwrite, known, work } => {
                self.files.write_study(path, work, known, overwrite);
            }
            Effect::ForgetRecent | Effect::Restore(_) | Effect::Discard(_) | Effect::Leave => {
                if let Some(keeper) = &mut self.keeper {
                    keeper.carry_out(&effect, &self.state, &mut self.files);
                }
            }
            Effect::Read(path) => self.files.read(path, Settings::default()),
            Effect::ReadSample(index) => self.files.read_sample(index, Settings::default()),
            Effect::ReadText(text) => self.files.read_text(text, Settings::default()),
            Effect::Reread { loaded, from_disk } => self.files.reread(loaded, from_disk),
            Effect::ReadBytes(problem) => self.files.read_again(problem),
            Effect::Write { product, path, overwrite } => {
                if let Some(findings) = super::extras::with_resampled(&self.state) {
                    let paper = self.paper();
                    self.files.write(product, path, findings, paper, overwrite);
                }
            }
            Effect::CopyPicture => {
                if let Some(study) = self.state.study() {
                    let paper = self.paper();
                    self.files.paint(Arc::clone(&study.findings), paper);
                }
            }
            Effect::Stop => self.worker.stop(),
            Effect::Resample => self.extras.start_resampling(&mut self.state),
            Effect::Copy(text) => ctx.copy_text(text),
            Effect::Prefer => {
                dress(ctx, &self.state.preferences);
                if let Some(keeper) = &mut self.keeper {
                    keeper.carry_out(&effect, &self.state, &mut self.files);
                }
            }
            Effect::ListFolder(text) => self.files.list(text),
            Effect::Reading(effect) => match effect {
                ReadingEffect::Meanings(loaded) => self.files.meanings(*loaded),
                ReadingEffect::AskLogs => self.files.ask_logs(),
                ReadingEffect::AskPaste => ctx.send_viewport_cmd(egui::ViewportCommand::RequestPaste),
                ReadingEffect::OpenLogs(paths, patterns) => self.files.open_logs(paths, patterns),
                ReadingEffect::TryLogs(logs) => self.files.try_logs(*logs),
                ReadingEffect::ReadLogs(logs) => self.files.read_logs(*logs),
            },
        }
    }

    /// The paper that shows the plot as it is seen.
    fn paper(&self) -> Paper {
        let j = self.state.rotation().map_or(0, |(levels, _)| levels.j);
        Paper { bounds: self.state.bounds(), j, ..Paper::default() }
    }

    fn take_done(&mut self, done: Done, ctx: &egui::Context) {
        match done {
            Done::Painted(result) => {
                let (text, failure) = match result {
                    Ok(image) => {
                        ctx.copy_image(image);
                        ("Picture copied.".to_owned(), false)
                    }
                    Err(why) => (format!("The picture was not copied: {why}."), true),
                };
                apply::take_written(if failure { Err(text) } else { Ok(text) }, &mut self.state);
            }
            Done::Scan(loaded) => apply::take_scan(loaded, &mut self.state),
            Done::ScanAsBefore(loaded) => {
                let name = loaded.scan.file_name.clone();
                apply::take_scan(loaded, &mut self.state);
                reading::tell_as_before(&name, &mut self.state);
            }
            Done::Looked(looked) => self.state.view.reading.looked = Some(looked),
            Done::Logs(logs) => {
                let found = logs.as_ref().ok().map(|logs| logs.read.clone());
                reading::take_logs(logs, &mut self.state);
                // What was used last may fit these as well.
                if let Some(read) = found {
                    self.give(Command::Reading(ReadingCommand::TryLogs(read)), ctx);
                }
            }
            Done::Searched(read, found) => reading::take_searched(read, found, &mut self.state),
            Done::LogsRefused(text) => reading::take_logs_refused(text, &mut self.state),
            Done::Reread(loaded) => {
                let key = loaded.key;
                apply::take_reread(loaded, &mut self.state);
                if self.state.view.columns_of == Some(key) {
                    self.give(Command::ShowColumns(Some(key)), ctx);
                }
            }
            Done::Folder(scans, refused, left_out) => {
                apply::take_folder(scans, refused, left_out, &mut self.state);
            }
            Done::Problem(problem) => apply::take_problem(problem, &mut self.state),
            Done::Chosen(PathPurpose::Open, paths) => {
                for path in paths {
                    self.give(Command::OpenPath(path), ctx);
                }
            }
            // A save dialog has asked about replacing already.
            Done::Chosen(PathPurpose::Write(product), paths) => {
                for path in paths {
                    self.give(Command::ExportTo { product, path, overwrite: true }, ctx);
                }
            }
            Done::Chosen(PathPurpose::SaveStudy, paths) => {
                for path in paths {
                    self.give(Command::SaveStudyTo { path, overwrite: true }, ctx);
                }
            }
            Done::Chosen(PathPurpose::Logs, paths) if paths.is_empty() => {}
            Done::Chosen(PathPurpose::Logs, paths) => {
                self.give(Command::Reading(ReadingCommand::OpenLogs(paths)), ctx);
            }
            Done::Study(opened) => apply::take_opened(*opened, &mut self.state),
            Done::Saved(result) => apply::take_saved(result, &mut self.state),
            Done::Leftovers(_) | Done::Restored(..) | Done::Remembered(_) => {
                if let Some(keeper) = &mut self.keeper {
                    keeper.take(done, &mut self.state);
                }
            }
            Done::NoDialog(purpose, text, entries) => {
                apply::take_no_dialog(purpose, text, entries, &mut self.state);
            }
            Done::Entries(entries) => apply::take_entries(entries, &mut self.state),
            Done::Written(result) => apply::take_written(result, &mut self.state),
        }
    }

    /// Asks for the study that the state needs, once, and takes the answers that have come.
    fn exchange_studies(&mut self) {
        // Inline answers are there at once, so ask before looking.
        if let Some((key, scan, settings)) = apply::wanted(&self.state) {
            let ask = (key, settings, scan.sha256.clone());
            if self.asked.as_ref() != Some(&ask) {
                self.asked = Some(ask.clone());
                self.worker.send((key, scan, ask.1));
            }
        } else {
            self.asked = None;
        }
        if let Some(answer) = self.worker.poll() {
            let result = match answer.result {
                Ok(result) => result.map_err(Failure::from),
                Err(panic) => Err(broken_off(&panic, &answer.input)),
            };
            let (key, _, settings) = answer.input;
            apply::take_outcome(key, settings, result, &mut self.state);
        }
        self.extras.exchange(&mut self.state);
        let running = self.worker.running();
        let view = &mut self.state.view;
        view.late = running.as_ref().is_some_and(|r| r.since >= LATE);
        view.progress = running
            .filter(|r| r.since >= LONG)
            .map(|r| Progress { tenths: r.since.as_millis() as u64 / 100, step: r.step });
    }

    /// Looks again when work under way becomes late or long, and while its progress is shown.
    fn look_again(&self, ctx: &egui::Context) {
        if let Some(running) = self.worker.running() {
            let next = [LATE, LONG].into_iter().find(|t| *t > running.since);
            let wait = next.map_or(Duration::from_millis(200), |t| t - running.since);
            ctx.request_repaint_after(wait + Duration::from_millis(1));
        }
    }

    /// Hears of files that have changed on disk, and says which ones matter.
    fn look_at_files(&mut self, ctx: &egui::Context) {
        let Some(watch) = &mut self.watch else { return };
        while let Some(changed) = watch.poll() {
            match changed.what {
                Watching::Scan(key) => apply::take_changed(key, &mut self.state),
                Watching::Study(origin) => apply::take_study_changed(origin, &mut self.state),
            }
        }
        let state = &self.state;
        let scans = state.document.scans.iter().filter(|s| !state.view.changed.contains(&s.key));
        let mut watched: Vec<Watched> = scans
            .filter_map(|s| {
                let paths =
                    s.logs.as_ref().map_or_else(|| s.path.iter().cloned().collect(), |l| l.paths.clone());
                let modified = s.modified.filter(|_| !paths.is_empty())?;
                Some(Watched { what: Watching::Scan(s.key), paths, modified })
            })
            .collect();
        let origin = state.document.origin;
        watched.extend(state.kept.get(&origin).and_then(|kept| {
            let (paths, modified) = (vec![kept.path.clone()], kept.modified?);
            Some(Watched { what: Watching::Study(origin), paths, modified })
        }));
        watch.set(watched, ctx.input(|i| i.focused));
    }

    fn shortcuts(&mut self, ctx: &egui::Context) {
        for command in Command::with_shortcut() {
            let Some(keys) = command.shortcut() else { continue };
            if ctx.input_mut(|i| i.consume_shortcut(&keys)) {
                self.give(command, ctx);
            }
        }
        // On many keyboards plus is written with another key.
        let equals = egui::KeyboardShortcut::new(egui::Modifiers::COMMAND, Key::Equals);
        if ctx.input_mut(|i| i.consume_shortcut(&equals)) {
            self.give(Command::SizeInterface(InterfaceSize::Larger), ctx);
        }
        if ctx.memory(|m| m.focused().is_none()) {
            let count = |key| ctx.input(|i| i.num_presses(key)) as i32;
            let step = count(Key::ArrowUp) - count(Key::ArrowDown);
            if step != 0 {
                self.give(Command::StepLevel(step), ctx);
            }
            if ctx.input(|i| i.key_pressed(Key::Escape)) {
                self.give(Command::PinLevel(None), ctx);
            }
        }
        if !ctx.text_edit_focused() {
            let is_paste = |event: &egui::Event| match event {
                egui::Event::Paste(text) => Some(text.clone()),
                _ => None,
            };
            let pasted: Vec<String> = ctx.input(|i| i.events.iter().filter_map(is_paste).collect());
            for text in pasted {
                self.give(Command::PasteTable(text), ctx);
            }
        }
        for file in ctx.input(|i| i.raw.dropped_files.clone()) {
            self.give(Command::OpenPath(file.path().to_owned()), ctx);
        }
    }
}

impl Program for App {
    fn logic(&mut self, ctx: &egui::Context) {
        while let Some(done) = self.files.poll() {
            self.take_done(done, ctx);
        }
        self.shortcuts(ctx);
        self.look_at_files(ctx);
        self.exchange_studies();
        self.look_again(ctx);
        if let Some(keeper) = &mut self.keeper {
            keeper.note(&mut self.state, &mut self.files);
        }
    }

    fn ui(&mut self, ui: &mut egui::Ui) {
        let mut commands = Vec::new();
        panels::window_ui(ui, &self.state, &mut commands);
        if commands.is_empty() {
            return;
        }
        let ctx = ui.ctx().clone();
        for command in commands {
            self.give(command, &ctx);
        }
        self.exchange_studies();
        // What was just changed is to be seen without waiting for the next movement of the hand.
        ctx.request_repaint();
    }

    fn is_working(&self) -> bool {
        self.worker.is_waiting() || self.files.is_busy() || self.extras.is_working()
    }

    fn on_exit(&mut self) {
        if let Some(keeper) = &mut self.keeper {
            keeper.close(&self.state);
        }
    }
}
