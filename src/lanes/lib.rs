//! What is computed for every grain and every pixel, many at a time?
//!
//! Plain arithmetic over blocks of numbers, without a branch on a single grain and without a function of the standard
//! library beyond the square root, so that native and wasm agree to the last bit. It is a crate of its own because it
//! is compiled at another level of optimisation than the rest of the page, which is built for size. It knows vectors
//! and grids, no comets: `tail::kernel` and `tail::cloud` of the main crate give the numbers their meaning.
#![forbid(unsafe_code)]

pub mod grid;
pub mod lay;
pub mod row;
pub mod solve;
pub mod respond;
pub mod strew;
pub mod tone;
