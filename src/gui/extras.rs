//! Work beside the study: the fits over all windows, the levels of the J looked at, and the errors by resampling,
//! which can be stopped.

use super::compute::{Ticket, Worker};
use super::state::State;
use crate::figure::{RotationPicture, WindowPicture, rotation_picture};
use crate::findings::{Findings, FitBootstrap};
use crate::fit::BootstrapSettings;
use crate::study::{RotatingLevels, bootstrap_fit, rotating_levels, study_windows, take_bootstraps};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

/// How far a piece of work is, and whether it is still wanted.
#[derive(Debug, Default)]
pub struct Steps {
    done: AtomicUsize,
    all: AtomicUsize,
    stop: AtomicBool,
}

impl Steps {
    /// Steps done and steps in all.
    pub fn steps(&self) -> (usize, usize) {
        (self.done.load(Ordering::Relaxed), self.all.load(Ordering::Relaxed))
    }

    /// Asks the work to end.
    pub fn stop(&self) {
        self.stop.store(true, Ordering::Relaxed);
    }

    /// Notes a step; false when the work is to end.
    fn step(&self, done: usize, all: usize) -> bool {
        self.done.store(done, Ordering::Relaxed);
        self.all.store(all, Ordering::Relaxed);
        !self.stop.load(Ordering::Relaxed)
    }
}

/// The fits over all windows of one study.
#[derive(Clone, Debug)]
pub struct Windows {
    /// The study.
    pub findings: Arc<Findings>,
    /// What they look like; none where no window could be fitted.
    pub picture: Option<Arc<WindowPicture>>,
}

/// The levels of one J of one study.
#[derive(Clone, Debug)]
pub struct Rotation {
    /// The study.
    pub findings: Arc<Findings>,
    /// The J.
    pub j: u32,
    /// The levels and what they look like; none where this J has none.
    pub found: Option<Arc<(RotatingLevels, RotationPicture)>>,
}

/// Errors by resampling, one entry a fit: none where there is no fit, else the errors or why there are none.
pub type Resampled = Vec<Option<Result<FitBootstrap, String>>>;

/// What is known of the errors by resampling.
#[derive(Clone, Debug, Default)]
pub enum Resampling {
    /// Nothing was asked.
    #[default]
    None,
    /// Under way.
    Running(Arc<Steps>),
    /// Ended before the end.
    Stopped,
    /// Done, for this study and so often.
    Done(Arc<Findings>, BootstrapSettings, Arc<Resampled>),
    /// Broken off, and why.
    Failed(String),
}

/// The study shown, with its resampled errors where there are any: what a file of it holds.
pub fn with_resampled(state: &State) -> Option<Arc<Findings>> {
    let shown = &state.study()?.findings;
    match &state.resampling {
        Resampling::Done(findings, settings, found) if Arc::ptr_eq(findings, shown) => {
            let mut findings = Findings::clone(findings);
            take_bootstraps(&mut findings, *settings, found.to_vec());
            Some(Arc::new(findings))
        }
        _ => Some(Arc::clone(shown)),
    }
}

#[derive(Clone)]
struct ResamplingJob {
    findings: Arc<Findings>,
    settings: BootstrapSettings,
    progress: Arc<Steps>,
}

/// A study and a J of it.
type OfJ = (Arc<Findings>, u32);

/// The workers.
pub struct Extras {
    windows: Worker<Arc<Findings>, Option<WindowPicture>>,
    asked: Option<Arc<Findings>>,
    rotation: Worker<OfJ, Option<(RotatingLevels, RotationPicture)>>,
    asked_j: Option<OfJ>,
    resampling: Worker<ResamplingJob, Option<Resampled>>,
}

fn windows_of(findings: &Arc<Findings>) -> Option<WindowPicture> {
    if findings.window_study.is_some() {
        return WindowPicture::of(findings);
    }
    let study = study_windows(findings, &Default::default(), &mut |_, _| true).ok()??;
    WindowPicture::of_study(&study, WindowPicture::half_width_in_force_angstrom(findings))
}

fn rotation_of((findings, j): &OfJ) -> Option<(RotatingLevels, RotationPicture)> {
    let levels = rotating_levels(findings, *j)?;
    let picture = rotation_picture(findings, &levels)?;
    Some((levels, picture))
}

/// None when it was stopped.
fn resample(job: &ResamplingJob, wake: &dyn Fn()) -> Option<Resampled> {
    let fits = job.findings.fits.len();
    let all = fits * job.settings.repeats;
    let mut found = Vec::with_capacity(fits);
    for index in 0..fits {
        let before = index * job.settings.repeats;
        let mut progress = |done: usize, _: usize| {
            // A hundred looks at the bar are enough.
            if (before + done).is_multiple_of((all / 100).max(1)) {
                wake();
            }
            job.progress.step(before + done, all)
        };
        let result = bootstrap_fit(&job.findings, index, job.settings, &mut progress);
        if job.progress.stop.load(Ordering::Relaxed) {
            return None;
        }
        found.push(result.map_err(|e| e.to_string()).transpose());
    }
    Some(found)
}

impl Extras {
    /// Workers of their own, or, `inline`, on the thread that asks; `wake` is called when there is something new.
    pub fn new(wake: impl Fn() + Clone + Send + Sync + 'static, inline: bool) -> Self {
        let (wake_windows, wake_rotation, wake_done, wake_steps) =
            (wake.clone(), wake.clone(), wake.clone(), wake);
        let job = move |job: &ResamplingJob, _: &Ticket| resample(job, &wake_steps);
        let windows = |findings: &Arc<Findings>, _: &Ticket| windows_of(findings);
        let rotation = |of: &OfJ, _: &Ticket| rotation_of(of);
        if inline {
            return Self {
                windows: Worker::inline(windows),
                asked: None,
                rotation: Worker::inline(rotation),
                asked_j: None,
                resampling: Worker::inline(job),
            };
        }
        Self {
            windows: Worker::spawn(wake_windows, windows),
            asked: None,
            rotation: Worker::spawn(wake_rotation, rotation),
            asked_j: None,
            resampling: Worker::spawn(wake_done, job),
        }
    }

    /// Whether something is still to come.
    pub fn is_working(&self) -> bool {
        self.windows.is_waiting() || self.rotation.is_waiting() || self.resampling.is_waiting()
    }

    /// Starts resampling the fits shown.
    pub fn start_resampling(&mut self, state: &mut State) {
        let Some(study) = state.study() else { return };
        let settings = BootstrapSettings { repeats: state.view.repeats(), ..BootstrapSettings::default() };
        let (findings, progress) = (Arc::clone(&study.findings), Arc::new(Steps::default()));
        state.resampling = Resampling::Running(Arc::clone(&progress));
        self.resampling.send(ResamplingJob { findings, settings, progress });
    }

    /// Asks for the windows of the study shown, where they are looked at, and takes what has come.
    pub fn exchange(&mut self, state: &mut State) {
        if state.view.looks_at_windows()
            && let Some(study) = state.study()
            && !self.asked.as_ref().is_some_and(|asked| Arc::ptr_eq(asked, &study.findings))
        {
            self.asked = Some(Arc::clone(&study.findings));
            self.windows.send(Arc::clone(&study.findings));
        }
        if let Some(answer) = self.windows.poll() {
            // A panic leaves nothing to show; the study itself stands.
            let picture = answer.result.ok().flatten().map(Arc::new);
            state.windows = Some(Windows { findings: answer.input, picture });
        }
        self.exchange_rotation(state);
        if let Some(answer) = self.resampling.poll() {
            state.resampling = match answer.result {
                Ok(Some(found)) => {
                    Resampling::Done(answer.input.findings, answer.input.settings, Arc::new(found))
                }
                Ok(None) => Resampling::Stopped,
                Err(panic) => Resampling::Failed(format!(
                    "The resampling broke off: {panic}. This is a fault of the program; your scan and settings are unharmed."
                )),
            };
        }
    }

    /// Asks for the levels of the J looked at and takes what has come.
    fn exchange_rotation(&mut self, state: &mut State) {
        let wanted =
            state.study().filter(|_| state.view.j > 0).map(|s| (Arc::clone(&s.findings), state.view.j));
        if let Some(wanted) = wanted {
            let is_asked = |asked: &OfJ| asked.1 == wanted.1 && Arc::ptr_eq(&asked.0, &wanted.0);
            if !self.asked_j.as_ref().is_some_and(is_asked) {
                self.asked_j = Some((Arc::clone(&wanted.0), wanted.1));
                self.rotation.send(wanted);
            }
        }
        if let Some(answer) = self.rotation.poll() {
            let (findings, j) = answer.input;
            // A panic leaves nothing to show; the study itself stands.
            let found = answer.result.ok().flatten().map(Arc::new);
            state.rotation = Some(Rotation { findings, j, found });
        }
    }
}
