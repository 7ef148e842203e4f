//! The jobs as plain exports, called and timed by page.html.

mod jobs;

use jobs::Jobs;
use std::cell::RefCell;

thread_local! {
    static JOBS: RefCell<Option<Jobs>> = const { RefCell::new(None) };
}

fn with<T>(work: impl FnOnce(&mut Jobs) -> T) -> T {
    JOBS.with_borrow_mut(|jobs| work(jobs.as_mut().expect("set first")))
}

#[no_mangle]
pub extern "C" fn grains_set(scene: usize, beta_greatest: f64) -> usize {
    JOBS.set(Some(Jobs::new(scene, beta_greatest)));
    jobs::GRAINS
}

#[no_mangle]
pub extern "C" fn grains_solve() -> f64 {
    with(Jobs::solve)
}

#[no_mangle]
pub extern "C" fn grains_see() -> usize {
    with(Jobs::see)
}

#[no_mangle]
pub extern "C" fn grains_render(samples: usize, cell_px: usize) -> usize {
    with(|jobs| jobs.render(samples, cell_px))
}

#[no_mangle]
pub extern "C" fn grains_tone() -> usize {
    with(Jobs::tone)
}

#[no_mangle]
pub extern "C" fn grains_rgba() -> *const u8 {
    with(|jobs| jobs.rgba.as_ptr())
}

#[no_mangle]
pub extern "C" fn grains_print() -> u32 {
    with(|jobs| jobs.print())
}
