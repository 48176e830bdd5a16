//! Runs tests that were compiled to wasm, in Node or in a browser.
//!
//! This is wasm-bindgen's own runner, built from here so that its version stands in this project's lock
//! file beside the core's.

fn main() -> anyhow::Result<()> {
    wasm_bindgen_cli::wasm_bindgen_test_runner::run_cli_with_args(std::env::args_os())
}
