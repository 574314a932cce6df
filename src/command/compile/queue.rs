//! A work queue on scoped threads: each worker takes the next item that nobody has taken.

use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::{Mutex, PoisonError};
use std::thread;

/// Does the work on every item, on so many threads, and gives the results in the order of the items.
pub fn in_parallel<I: Sync, O: Send>(
    items: &[I],
    workers: usize,
    work: impl Fn(&I) -> O + Sync,
) -> Vec<O> {
    let workers = workers.clamp(1, items.len().max(1));
    if workers == 1 {
        return items.iter().map(work).collect();
    }
    let next = AtomicUsize::new(0);
    let done = Mutex::new(Vec::with_capacity(items.len()));
    let take = || {
        loop {
            let at = next.fetch_add(1, Ordering::Relaxed);
            let Some(item) = items.get(at) else {
                return;
            };
            let result = work(item);
            let mut done = done.lock().unwrap_or_else(PoisonError::into_inner);
            done.push((at, result));
        }
    };
    thread::scope(|scope| {
        for _ in 0..workers {
            scope.spawn(take);
        }
    });
    let mut done = done.into_inner().unwrap_or_else(PoisonError::into_inner);
    done.sort_by_key(|(at, _)| *at);
    done.into_iter().map(|(_, result)| result).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::time::Duration;

    #[test]
    fn results_come_in_the_order_of_the_items() {
        let items: Vec<u64> = (0..40).collect();
        let slow_first = |item: &u64| {
            thread::sleep(Duration::from_millis(if *item < 4 { 20 } else { 0 }));
            item * item
        };
        let expected: Vec<u64> = items.iter().map(|item| item * item).collect();
        for workers in [0, 1, 3, 100] {
            assert_eq!(in_parallel(&items, workers, slow_first), expected);
        }
        assert_eq!(in_parallel(&[], 4, slow_first), Vec::<u64>::new());
    }
}
