//! The threads that share long work: as many as asked for (`RAYON_NUM_THREADS`), within what the machine has, and
//! fewer where the system gives no more. Results do not depend on their number.

use rayon::ThreadPoolBuilder;

/// Most threads for each core: more only take memory.
const PER_CORE: usize = 2;

/// Makes the threads. Where not even one can be made, this thread does the work itself.
pub(super) fn make() {
    let cores = std::thread::available_parallelism().map_or(1, usize::from);
    let asked = std::env::var("RAYON_NUM_THREADS").ok().and_then(|text| text.parse().ok());
    let mut wanted = within(asked, cores);
    // The shared pool is made once, for better or worse: whether it can be is tried apart.
    while wanted > 0 && builder(wanted).build().is_err() {
        wanted /= 2;
    }
    let pool = if wanted == 0 { builder(1).use_current_thread() } else { builder(wanted) };
    // A pool that is there already (a second run in one process) does as well.
    drop(pool.build_global());
}

fn builder(threads: usize) -> ThreadPoolBuilder {
    ThreadPoolBuilder::new().num_threads(threads)
}

/// The number of threads: what is asked for, at most [`PER_CORE`] for each core; else one for each core.
fn within(asked: Option<usize>, cores: usize) -> usize {
    match asked {
        None | Some(0) => cores,
        Some(asked) => asked.min(PER_CORE * cores),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_asked_for_is_bounded() {
        assert_eq!((within(None, 4), within(Some(0), 4), within(Some(1), 4)), (4, 4, 1));
        assert_eq!((within(Some(8), 4), within(Some(100_000), 4)), (8, 8));
    }
}
