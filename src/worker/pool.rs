//! Many independent jobs on a few threads, for callers that wait for all of them.

use std::any::Any;
use std::num::NonZeroUsize;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicUsize, Ordering};
use std::thread;

/// Stack of a thread, in bytes: as much as the main thread of a program commonly has.
const STACK_BYTES: usize = 8 << 20;

/// Runs `work` on each number from 0 to `count` - 1, on at most `threads` threads, and returns the results in that order.
///
/// `told` hears on the calling thread which job is done, in the order in which they end. A job that panics has its words
/// as its error; the others go on.
pub fn in_parallel<T: Send>(
    threads: NonZeroUsize,
    count: usize,
    work: impl Fn(usize) -> T + Sync,
    mut told: impl FnMut(usize),
) -> Vec<Result<T, String>> {
    let next = AtomicUsize::new(0);
    let (done, ended) = crossbeam_channel::unbounded();
    let jobs = || {
        loop {
            let at = next.fetch_add(1, Ordering::Relaxed);
            if at >= count {
                return;
            }
            let result =
                catch_unwind(AssertUnwindSafe(|| work(at))).map_err(|panic| words(&*panic));
            if done.send((at, result)).is_err() {
                return;
            }
        }
    };
    let mut results: Vec<Option<Result<T, String>>> = (0..count).map(|_| None).collect();
    thread::scope(|scope| {
        let started = (0..threads.get().min(count)).filter(|_| {
            let builder = thread::Builder::new().stack_size(STACK_BYTES);
            builder.spawn_scoped(scope, jobs).is_ok()
        });
        if started.count() == 0 {
            jobs();
        }
        for (at, result) in ended.iter().take(count) {
            results[at] = Some(result);
            told(at);
        }
    });
    let missing = || Err("the job was lost".to_owned());
    results
        .into_iter()
        .map(|result| result.unwrap_or_else(missing))
        .collect()
}

fn words(panic: &(dyn Any + Send)) -> String {
    let text = panic.downcast_ref::<&str>().copied();
    text.or_else(|| panic.downcast_ref::<String>().map(String::as_str))
        .unwrap_or("no reason given")
        .to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_come_in_order_and_a_panic_costs_one_job() {
        for threads in 1..5 {
            let threads = NonZeroUsize::new(threads).expect("not zero");
            let mut told = Vec::new();
            let work = |at: usize| {
                assert_ne!(at, 3, "made to fail");
                at * at
            };
            let results = in_parallel(threads, 20, work, |at| told.push(at));
            told.sort_unstable();
            assert_eq!(told, (0..20).collect::<Vec<_>>());
            for (at, result) in results.into_iter().enumerate() {
                match result {
                    Ok(square) => assert_eq!(square, at * at),
                    Err(reason) => {
                        assert!(at == 3 && reason.contains("made to fail"), "{at}: {reason}")
                    }
                }
            }
        }
    }

    #[test]
    fn no_jobs_give_no_results() {
        let one = NonZeroUsize::MIN;
        assert_eq!(in_parallel(one, 0, |at| at, |_| ()), []);
    }
}
