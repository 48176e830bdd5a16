//! Host-side half of the build: binds the compiled core to JavaScript, and packs the page into one file.
//!
//! ```text
//! pack bind nodejs|no-modules CORE.wasm FOLDER
//! pack page TEMPLATE.html STYLE.css CORE.wasm GLUE.js WORKER.js SCRIPT.js PAGE.html
//! ```

mod bind;
mod page;

use std::path::Path;

use anyhow::{Context, Result, bail};

fn main() -> Result<()> {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let words: Vec<&str> = arguments.iter().map(String::as_str).collect();
    match words.as_slice() {
        ["bind", "nodejs", wasm, folder] => bind::for_node(Path::new(wasm), Path::new(folder)),
        ["bind", "no-modules", wasm, folder] => bind::for_page(Path::new(wasm), Path::new(folder)),
        ["page", template, style, core, glue, worker, script, out] => {
            let packed = page::pack(
                &text(template)?,
                &page::Parts {
                    style: text(style)?,
                    core: std::fs::read(core).with_context(|| format!("cannot read {core}"))?,
                    glue: text(glue)?,
                    worker: text(worker)?,
                    script: text(script)?,
                },
            )?;
            std::fs::write(out, packed).with_context(|| format!("cannot write {out}"))
        }
        _ => bail!(
            "pack bind nodejs|no-modules CORE FOLDER, or pack page TEMPLATE STYLE CORE GLUE WORKER SCRIPT PAGE"
        ),
    }
}

fn text(path: &str) -> Result<String> {
    std::fs::read_to_string(path).with_context(|| format!("cannot read {path}"))
}
