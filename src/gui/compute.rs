//! The worker: one thread, numbered requests, the newest wins, panics become failures.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, mpsc};
use std::thread::JoinHandle;

type Job<I, O> = Box<dyn Fn(&I) -> O + Send>;

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

enum Mode<I, O> {
    /// Answers at once, on the thread that asks: for tests and pictures.
    Inline(Job<I, O>, Option<Answer<I, O>>),
    Thread {
        requests: Option<mpsc::Sender<Request<I>>>,
        answers: mpsc::Receiver<(u64, Answer<I, O>)>,
        thread: Option<JoinHandle<()>>,
    },
}

/// A worker for one kind of job.
pub struct Worker<I, O> {
    newest: Arc<AtomicU64>,
    waiting: bool,
    mode: Mode<I, O>,
}

impl<I: Send + 'static, O: Send + 'static> Worker<I, O> {
    /// A worker that answers at once.
    pub fn inline(job: impl Fn(&I) -> O + Send + 'static) -> Self {
        Self { newest: Arc::default(), waiting: false, mode: Mode::Inline(Box::new(job), None) }
    }

    /// A worker on its own thread; `wake` is called after every answer. Where no thread can be
    /// started it answers at once.
    pub fn spawn(wake: impl Fn() + Send + 'static, job: impl Fn(&I) -> O + Send + Sync + 'static) -> Self {
        let newest = Arc::new(AtomicU64::new(0));
        let (requests, inbox) = mpsc::channel();
        let (outbox, answers) = mpsc::channel();
        let job = Arc::new(job);
        let (numbers, work) = (Arc::clone(&newest), Arc::clone(&job));
        let run = move || serve(&inbox, &outbox, &numbers, &wake, &*work);
        match std::thread::Builder::new().name("study".into()).spawn(run) {
            Ok(thread) => Self {
                newest,
                waiting: false,
                mode: Mode::Thread { requests: Some(requests), answers, thread: Some(thread) },
            },
            Err(_) => Self::inline(move |input| job(input)),
        }
    }

    /// Asks for a result; what was asked before is given up.
    pub fn send(&mut self, input: I) {
        let number = self.newest.fetch_add(1, Ordering::Relaxed) + 1;
        match &mut self.mode {
            Mode::Inline(job, answer) => {
                let result = guarded(&**job, &input);
                *answer = Some(Answer { input, result });
                self.waiting = true;
            }
            Mode::Thread { requests, .. } => {
                self.waiting = requests.as_ref().is_some_and(|r| r.send(Request { number, input }).is_ok());
            }
        }
    }

    /// The answer to the newest request, once.
    pub fn poll(&mut self) -> Option<Answer<I, O>> {
        let newest = self.newest.load(Ordering::Relaxed);
        let found = match &mut self.mode {
            Mode::Inline(_, answer) => answer.take(),
            Mode::Thread { answers, .. } => {
                answers.try_iter().filter(|(number, _)| *number == newest).last().map(|(_, answer)| answer)
            }
        };
        self.waiting &= found.is_none();
        found
    }

    /// Whether an answer is still to come.
    pub fn is_waiting(&self) -> bool {
        self.waiting
    }
}

impl<I, O> Drop for Worker<I, O> {
    fn drop(&mut self) {
        if let Mode::Thread { requests, thread, .. } = &mut self.mode {
            *requests = None;
            // Not joined: a study under way must not hold the window open.
            drop(thread.take());
        }
    }
}

fn serve<I, O>(
    inbox: &mpsc::Receiver<Request<I>>,
    outbox: &mpsc::Sender<(u64, Answer<I, O>)>,
    newest: &AtomicU64,
    wake: &dyn Fn(),
    job: &dyn Fn(&I) -> O,
) {
    while let Ok(mut request) = inbox.recv() {
        while let Ok(newer) = inbox.try_recv() {
            request = newer;
        }
        if request.number < newest.load(Ordering::Relaxed) {
            continue;
        }
        let result = guarded(job, &request.input);
        if outbox.send((request.number, Answer { input: request.input, result })).is_err() {
            return;
        }
        wake();
    }
}

fn guarded<I, O>(job: &(impl Fn(&I) -> O + ?Sized), input: &I) -> Result<O, String> {
    catch_unwind(AssertUnwindSafe(|| job(input))).map_err(|panic| {
        let text = panic.downcast_ref::<&str>().map(|s| (*s).to_owned());
        text.or_else(|| panic.downcast_ref::<String>().cloned()).unwrap_or_else(|| "no reason given".into())
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::time::{Duration, Instant};

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

    #[test]
    fn the_newest_request_wins() {
        let (started, starts) = mpsc::channel();
        let (go, gate) = mpsc::channel::<()>();
        let gate = std::sync::Mutex::new(gate);
        let mut worker = Worker::spawn(
            || {},
            move |i: &u32| {
                started.send(*i).ok();
                if *i == 0 {
                    gate.lock().map(|g| g.recv().ok()).ok();
                }
                i * 10
            },
        );
        worker.send(0);
        assert_eq!(starts.recv_timeout(Duration::from_secs(10)), Ok(0));
        for i in 1..=50 {
            worker.send(i);
        }
        assert!(worker.is_waiting());
        go.send(()).expect("the job waits");
        let answer = wait(&mut worker);
        assert_eq!((answer.input, answer.result), (50, Ok(500)));
        assert!(!worker.is_waiting());
        assert!(worker.poll().is_none());
        // Of the fifty only the last was worked on.
        assert_eq!(starts.try_iter().collect::<Vec<_>>(), [50]);
    }

    #[test]
    fn a_panic_is_an_answer_and_the_worker_lives_on() {
        for mut worker in [Worker::spawn(|| {}, job), Worker::inline(job)] {
            worker.send(7);
            assert!(wait(&mut worker).result.expect_err("seven panics").contains("seven"));
            worker.send(8);
            assert_eq!(wait(&mut worker).result, Ok(8));
        }
        fn job(i: &u32) -> u32 {
            assert!(*i != 7, "seven is bad");
            *i
        }
    }
}
