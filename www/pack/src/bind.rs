//! The two bindings of one compiled core: a package for Node, and the glue inside the page.

use std::path::Path;

use anyhow::{Context, Result};
use wasm_bindgen_cli_support::Bindgen;

/// Name of the files, and of the package for Node.
const NAME: &str = "leastlight";

/// What the page's script calls the core by.
const GLOBAL: &str = "wasm_bindgen";

/// The core as a CommonJS package that is ready as soon as it is required.
pub fn for_node(wasm: &Path, folder: &Path) -> Result<()> {
    generate(bindgen(wasm).nodejs(true)?, folder)?;
    // Its own package.json, because the one above it in this project says "module".
    let package = format!(
        "{{\n  \"name\": \"{NAME}\",\n  \"version\": \"{}\",\n  \"private\": true,\n  \"type\": \"commonjs\",\n  \
         \"main\": \"{NAME}.js\",\n  \"types\": \"{NAME}.d.ts\"\n}}\n",
        env!("CARGO_PKG_VERSION")
    );
    std::fs::write(folder.join("package.json"), package).context("cannot write package.json")
}

/// The core for classic scripts, which is what works by double click from disk.
pub fn for_page(wasm: &Path, folder: &Path) -> Result<()> {
    // Without the default path the glue never looks for a .wasm beside the page.
    let mut bindgen = bindgen(wasm);
    generate(bindgen.no_modules(true)?.no_modules_global(GLOBAL)?.omit_default_module_path(true), folder)?;
    // A core that has trapped is replaced by running the glue once more, and `let` would forbid the second time.
    let file = folder.join(format!("{NAME}.js"));
    let glue = std::fs::read_to_string(&file).with_context(|| format!("cannot read {}", file.display()))?;
    let rest =
        glue.strip_prefix(&format!("let {GLOBAL} = ")).context("the glue does not begin as it used to")?;
    std::fs::write(&file, format!("var {GLOBAL} = {rest}")).context("cannot write the glue")
}

fn bindgen(wasm: &Path) -> Bindgen {
    let mut bindgen = Bindgen::new();
    bindgen.input_path(wasm).out_name(NAME).typescript(true);
    bindgen.remove_name_section(true).remove_producers_section(true);
    bindgen
}

fn generate(bindgen: &mut Bindgen, folder: &Path) -> Result<()> {
    // A file of an earlier binding that is no longer made must not stay and be packed.
    if folder.exists() {
        std::fs::remove_dir_all(folder).with_context(|| format!("cannot clear {}", folder.display()))?;
    }
    std::fs::create_dir_all(folder).with_context(|| format!("cannot make {}", folder.display()))?;
    bindgen.generate(folder).context("binding the core failed")
}
