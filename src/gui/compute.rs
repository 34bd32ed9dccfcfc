//! The worker: one thread and numbered requests. The request under way is finished and shown, then the newest is
//! taken and those between are passed over: something new comes however fast the hand moves. Panics become
//! failures; work that takes long can be stopped.

use std::panic::{AssertUnwindSafe, catch_unwind, resume_unwind};
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::sync::{Arc, Mutex, mpsc};
use std::time::{Duration, Instant};

type Job<I, O> = Arc<dyn Fn(&I, &Ticket) -> O + Send + Sync>;
type Wake = Arc<dyn Fn() + Send + Sync>;

/// What a job is given to say how far it is, and to hear that it is no longer wanted.
#[derive(Clone, Debug, Default)]
pub struct Ticket {
    stopped: Arc<AtomicBool>,
    step: Arc<Mutex<String>>,
}

/// What a job that was stopped unwinds with; no fault, so no message is printed.
struct Stopped;

impl Ticket {
    /// Says what is done now. A job that is no longer wanted ends here.
    pub fn step(&self, name: &str) {
        if self.stopped.load(Ordering::Relaxed) {
            resume_unwind(Box::new(Stopped));
        }
        if let Ok(mut step) = self.step.lock() {
            name.clone_into(&mut step);
        }
    }
}

struct Request<I> {
    number: u64,
    input: I,
}

/// An answer with what was asked.
#[derive(Debug)]
pub struct Answer<I, O> {
    /// What was asked.
    pub input: I,
    /// The result, or the text of the panic that took its place.
    pub result: Result<O, String>,
}

/// Work under way.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Running {
    /// Since the last answer, or since it was asked for.
    pub since: Duration,
    /// What is done now.
    pub step: String,
}

struct Thread<I, O> {
    requests: mpsc::Sender<Request<I>>,
    answers: mpsc::Receiver<(u64, Answer<I, O>)>,
    ticket: Ticket,
}

enum Mode<I, O> {
    /// Answers at once, on the thread that asks: for tests and pictures.
    Inline(Option<Answer<I, O>>),
    Beside(Thread<I, O>, Wake),
}

/// A worker for one kind of job.
pub struct Worker<I, O> {
    job: Job<I, O>,
    newest: Arc<AtomicU64>,
    answered: u64,
    /// When an answer last came, or was first asked for after a rest.
    since: Instant,
    mode: Mode<I, O>,
}

impl<I: Send + 'static, O: Send + 'static> Worker<I, O> {
    /// A worker that answers at once.
    pub fn inline(job: impl Fn(&I, &Ticket) -> O + Send + Sync + 'static) -> Self {
        Self::with(Arc::new(job), Mode::Inline(None))
    }

    fn with(job: Job<I, O>, mode: Mode<I, O>) -> Self {
        Self { job, newest: Arc::default(), answered: 0, since: Instant::now(), mode }
    }

    /// A worker on its own thread; `wake` is called after every answer. Where no thread can be
    /// started it answers at once.
    pub fn spawn(
        wake: impl Fn() + Send + Sync + 'static,
        job: impl Fn(&I, &Ticket) -> O + Send + Sync + 'static,
    ) -> Self {
        let mut worker = Self::with(Arc::new(job), Mode::Inline(None));
        worker.start(Arc::new(wake));
        worker
    }

    fn start(&mut self, wake: Wake) {
        let (requests, inbox) = mpsc::channel();
        let (outbox, answers) = mpsc::channel();
        let ticket = Ticket::default();
        let (job, numbers, theirs) = (Arc::clone(&self.job), Arc::clone(&self.newest), ticket.clone());
        let call = Arc::clone(&wake);
        let run = move || serve(&inbox, &outbox, &numbers, &*call, &*job, &theirs);
        if std::thread::Builder::new().name(THREAD.into()).spawn(run).is_ok() {
            self.mode = Mode::Beside(Thread { requests, answers, ticket }, wake);
        } else {
            self.mode = Mode::Inline(None);
        }
    }

    /// Asks for a result; of what was asked before and not begun nothing is done.
    pub fn send(&mut self, input: I) {
        if !self.is_waiting() {
            self.since = Instant::now();
        }
        let number = self.newest.fetch_add(1, Ordering::Relaxed) + 1;
        match &mut self.mode {
            Mode::Inline(answer) => {
                let result = guarded(&*self.job, &input, &Ticket::default());
                *answer = result.map(|result| Answer { input, result });
            }
            Mode::Beside(thread, _) => {
                if thread.requests.send(Request { number, input }).is_err() {
                    self.answered = number;
                }
            }
        }
    }

    /// The newest answer that has come, once: to the newest request or to one that was overtaken meanwhile.
    pub fn poll(&mut self) -> Option<Answer<I, O>> {
        let newest = self.newest.load(Ordering::Relaxed);
        let (number, answer) = match &mut self.mode {
            Mode::Inline(answer) => (newest, answer.take()?),
            Mode::Beside(thread, _) => thread.answers.try_iter().last()?,
        };
        self.answered = number;
        self.since = Instant::now();
        Some(answer)
    }

    /// Whether an answer is still to come.
    pub fn is_waiting(&self) -> bool {
        self.answered < self.newest.load(Ordering::Relaxed)
    }

    /// The work under way, if an answer is still to come.
    pub fn running(&self) -> Option<Running> {
        let Mode::Beside(thread, _) = &self.mode else { return None };
        let step = thread.ticket.step.lock().map(|s| s.clone()).unwrap_or_default();
        self.is_waiting().then(|| Running { since: self.since.elapsed(), step })
    }

    /// Gives up what is under way. The job ends at its next step; a new thread stands ready at once.
    pub fn stop(&mut self) {
        self.answered = self.newest.load(Ordering::Relaxed);
        if let Mode::Beside(thread, wake) = &self.mode {
            thread.ticket.stopped.store(true, Ordering::Relaxed);
            let wake = Arc::clone(wake);
            self.start(wake);
        }
    }
}

impl<I, O> Drop for Worker<I, O> {
    fn drop(&mut self) {
        // Not joined: a study under way must not hold the window open.
        if let Mode::Beside(thread, _) = &self.mode {
            thread.ticket.stopped.store(true, Ordering::Relaxed);
        }
    }
}

/// Name of the thread, by which the report of a panic knows it.
const THREAD: &str = "study";

fn serve<I, O>(
    inbox: &mpsc::Receiver<Request<I>>,
    outbox: &mpsc::Sender<(u64, Answer<I, O>)>,
    newest: &AtomicU64,
    wake: &dyn Fn(),
    job: &dyn Fn(&I, &Ticket) -> O,
    ticket: &Ticket,
) {
    while let Ok(mut request) = inbox.recv() {
        while let Ok(newer) = inbox.try_recv() {
            request = newer;
        }
        // A newer one is on its way.
        if request.number < newest.load(Ordering::Relaxed) {
            continue;
        }
        let Some(result) = guarded(job, &request.input, ticket) else { return };
        if outbox.send((request.number, Answer { input: request.input, result })).is_err() {
            return;
        }
        wake();
    }
}

/// The result or the text of a panic; none when the job was stopped.
fn guarded<I, O>(job: &dyn Fn(&I, &Ticket) -> O, input: &I, ticket: &Ticket) -> Option<Result<O, String>> {
    place::listen();
    match catch_unwind(AssertUnwindSafe(|| job(input, ticket))) {
        Ok(result) => Some(Ok(result)),
        Err(payload) if payload.is::<Stopped>() => None,
        Err(payload) => {
            let text = payload.downcast_ref::<&str>().map(|s| (*s).to_owned());
            let text = text.or_else(|| payload.downcast_ref::<String>().cloned());
            let place = place::take().map_or_else(String::new, |p| format!(" ({p})"));
            Some(Err(format!("{}{place}", text.unwrap_or_else(|| "no reason given".into()))))
        }
    }
}

/// Where a panic happened; only the hook is told. A study works on threads of its own, so the latest place of any
/// thread stands in where this one has none.
mod place {
    use std::cell::RefCell;
    use std::sync::{Mutex, Once};

    thread_local! {
        static PLACE: RefCell<Option<String>> = const { RefCell::new(None) };
    }
    static LATEST: Mutex<Option<String>> = Mutex::new(None);
    static LISTENING: Once = Once::new();

    /// Keeps the place of every panic, for the thread it happened on; what was done about panics before goes on.
    pub(super) fn listen() {
        LISTENING.call_once(|| {
            let before = std::panic::take_hook();
            std::panic::set_hook(Box::new(move |info| {
                let place = info.location().map(|l| {
                    // The file from its folder on: what stands before differs from machine to machine.
                    let file = l.file().rsplit_once("src/").map_or(l.file(), |(_, file)| file);
                    format!("{file}, line {}", l.line())
                });
                if let Ok(mut latest) = LATEST.lock() {
                    latest.clone_from(&place);
                }
                PLACE.with(|p| *p.borrow_mut() = place);
                before(info);
            }));
        });
    }

    /// Where the latest panic of this thread happened, once.
    pub(super) fn take() -> Option<String> {
        PLACE.with(|p| p.borrow_mut().take()).or_else(|| LATEST.lock().ok()?.take())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn wait<I: Send + 'static, O: Send + 'static>(worker: &mut Worker<I, O>) -> Answer<I, O> {
        let start = Instant::now();
        loop {
            if let Some(answer) = worker.poll() {
                return answer;
            }
            assert!(start.elapsed() < Duration::from_secs(20), "no answer");
            std::thread::sleep(Duration::from_millis(1));
        }
    }

    /// A worker whose job ends only when it is let, and tells what it has begun.
    fn gated() -> (Worker<u32, u32>, mpsc::Receiver<u32>, mpsc::Sender<()>) {
        let (started, starts) = mpsc::channel();
        let (go, gate) = mpsc::channel::<()>();
        let (started, gate) = (Mutex::new(started), Mutex::new(gate));
        let worker = Worker::spawn(
            || {},
            move |i: &u32, ticket: &Ticket| {
                started.lock().map(|s| s.send(*i).ok()).ok();
                ticket.step("waiting");
                gate.lock().map(|g| g.recv().ok()).ok();
                ticket.step("ending");
                i * 10
            },
        );
        (worker, starts, go)
    }

    #[test]
    fn what_is_under_way_is_finished_and_then_the_newest_wins() {
        let (mut worker, starts, go) = gated();
        worker.send(0);
        let patience = Duration::from_secs(10);
        assert_eq!(starts.recv_timeout(patience), Ok(0));
        for i in 1..=50 {
            worker.send(i);
        }
        go.send(()).expect("the job waits");
        let answer = wait(&mut worker);
        assert_eq!((answer.input, answer.result), (0, Ok(0)), "overtaken, and shown all the same");
        assert!(worker.is_waiting());
        go.send(()).expect("the job waits");
        let answer = wait(&mut worker);
        assert_eq!((answer.input, answer.result), (50, Ok(500)));
        assert!(!worker.is_waiting() && worker.poll().is_none());
        // Of the fifty only the last was worked on.
        assert_eq!(starts.try_iter().collect::<Vec<_>>(), [50]);
    }

    #[test]
    fn a_hand_faster_than_the_work_sees_new_results_all_the_same() {
        let (mut worker, starts, go) = gated();
        let patience = Duration::from_secs(10);
        let mut shown = 0;
        worker.send(0);
        for i in 1..=20 {
            starts.recv_timeout(patience).expect("begun");
            // Three more movements before every answer.
            (0..3).for_each(|j| worker.send(3 * i + j));
            go.send(()).expect("the job waits");
            wait(&mut worker);
            shown += 1;
        }
        assert_eq!(shown, 20);
    }

    #[test]
    fn what_takes_long_tells_its_step_and_can_be_stopped() {
        let (mut worker, starts, go) = gated();
        let patience = Duration::from_secs(10);
        worker.send(1);
        assert_eq!(starts.recv_timeout(patience), Ok(1));
        let start = Instant::now();
        while worker.running().is_some_and(|r| r.step != "waiting") {
            assert!(start.elapsed() < patience);
        }
        worker.stop();
        assert!(!worker.is_waiting() && worker.running().is_none());
        // Whoever waits at the gate first, the old job has no answer and the new one has.
        worker.send(2);
        go.send(()).expect("waits");
        go.send(()).expect("waits");
        let answer = wait(&mut worker);
        assert_eq!((answer.input, answer.result), (2, Ok(20)));
    }

    #[test]
    fn a_panic_is_an_answer_with_its_place_and_the_worker_lives_on() {
        for mut worker in [Worker::spawn(|| {}, job), Worker::inline(job)] {
            worker.send(7);
            let text = wait(&mut worker).result.expect_err("seven panics");
            assert!(text.contains("seven") && text.contains("gui/compute.rs, line"), "{text}");
            worker.send(8);
            assert_eq!(wait(&mut worker).result, Ok(8));
        }
        fn job(i: &u32, _: &Ticket) -> u32 {
            assert!(*i != 7, "seven is bad");
            *i
        }
    }
}
