//! Work shared among threads, with results that do not depend on how many there are.

use std::num::NonZeroUsize;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::thread;

/// Most threads of one piece of work: the pieces are short, and others use the machine too.
const MOST: usize = 4;

/// Calls `work` on stretches of `items` of at most `stretch`, on as many threads as the machine
/// has, and returns what it gave in the order of the items.
pub fn shared<T: Sync, R: Send>(
    items: &[T],
    stretch: usize,
    work: impl Fn(&[T]) -> R + Sync,
) -> Vec<R> {
    let stretches: Vec<&[T]> = items.chunks(stretch.max(1)).collect();
    let threads = thread::available_parallelism()
        .map_or(1, NonZeroUsize::get)
        .min(MOST)
        .min(stretches.len());
    if threads < 2 {
        return stretches.into_iter().map(work).collect();
    }
    let next = AtomicUsize::new(0);
    let run = || {
        let mut out = Vec::new();
        loop {
            let k = next.fetch_add(1, Ordering::Relaxed);
            let Some(s) = stretches.get(k) else {
                return out;
            };
            out.push((k, work(s)));
        }
    };
    let mut all: Vec<(usize, R)> = Vec::with_capacity(stretches.len());
    thread::scope(|scope| {
        let others: Vec<_> = (1..threads).map(|_| scope.spawn(run)).collect();
        all.extend(run());
        for other in others {
            match other.join() {
                Ok(part) => all.extend(part),
                Err(panic) => std::panic::resume_unwind(panic),
            }
        }
    });
    all.sort_by_key(|e| e.0);
    all.into_iter().map(|e| e.1).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_stand_in_the_order_of_the_items() {
        let items: Vec<usize> = (0..1003).collect();
        let sums = shared(&items, 10, |s| s.iter().sum::<usize>());
        assert_eq!(sums.len(), 101);
        assert_eq!(sums[100], 1000 + 1001 + 1002);
        assert_eq!(sums.iter().sum::<usize>(), 1003 * 1002 / 2);
        assert!(shared(&items[..0], 10, <[usize]>::len).is_empty());
    }
}
