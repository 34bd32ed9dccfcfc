//! Work on two threads. Results do not depend on whether a second thread was there: the parts are cut the same way,
//! and each part is computed as it would be alone.

/// Lists shorter than this are not worth a second thread (starting one costs some ten microseconds).
pub(crate) const WORTH_A_THREAD: usize = 56;

/// Both results, the second computed on a thread of its own.
pub(crate) fn side_by_side<A, B: Send>(
    first: impl FnOnce() -> A,
    second: impl FnOnce() -> B + Send,
) -> (A, B) {
    std::thread::scope(|scope| {
        let other = scope.spawn(second);
        let own = first();
        match other.join() {
            Ok(other) => (own, other),
            Err(panic) => std::panic::resume_unwind(panic),
        }
    })
}

/// `work` on the two halves of `items`, joined in order; on one thread where there are fewer than `least`.
pub(crate) fn in_halves<T: Sync, R: Send>(
    items: &[T],
    least: usize,
    work: impl Fn(&[T]) -> Vec<R> + Sync,
) -> Vec<R> {
    if items.len() < least.max(2) {
        return work(items);
    }
    let (low, high) = items.split_at(items.len() / 2);
    let (mut all, mut rest) = side_by_side(|| work(low), || work(high));
    all.append(&mut rest);
    all
}

#[cfg(test)]
mod tests {
    use super::in_halves;

    #[test]
    fn halves_come_back_in_order() {
        for count in [0, 1, 11, 12, 33] {
            let items: Vec<usize> = (0..count).collect();
            assert_eq!(in_halves(&items, 12, <[usize]>::to_vec), items);
        }
    }
}
