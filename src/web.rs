//! The browser shell: the only file with wasm-bindgen exports.
