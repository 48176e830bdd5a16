#!/usr/bin/env bash
# ./build.sh        builds dist/leastlight.html (the page, one file) and dist/node/ (the core for Node)
# ./build.sh test   the same, then runs every check; installs the browsers and drivers that are missing
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")"

root=$PWD
wasm_target=wasm32-unknown-unknown
export CARGO_TARGET_DIR=${CARGO_TARGET_DIR:-$root/target}
made=$root/target/page # what lies between the sources and dist/

say() { printf '\n== %s\n' "$*"; }

missing() { # what, the command that installs it on Debian 12
    printf '%s is missing. On Debian 12:\n    %s\nThen run this again.\n' "$1" "$2" >&2
    exit 1
}

check_tools() {
    # A fresh rustup puts itself on the path of new shells only.
    [ ! -f "$HOME/.cargo/env" ] || . "$HOME/.cargo/env"
    command -v cc >/dev/null || missing "A C linker" "sudo apt-get install -y build-essential"
    command -v rustup >/dev/null && command -v cargo >/dev/null ||
        missing "Rust (cargo and rustup)" "sudo apt-get install -y curl && curl --proto '=https' --tlsv1.2 -sSf sh.rustup.rs | sh -s -- -y"
    local node_help="sudo apt-get install -y npm && sudo npm install -g n && sudo n 20"
    command -v node >/dev/null || missing "Node 20 or newer" "$node_help"
    node -e 'process.exit(parseInt(process.versions.node) >= 20 ? 0 : 1)' ||
        missing "Node 20 or newer ($(node --version) is here)" "$node_help"
    command -v npm >/dev/null || missing "npm" "sudo apt-get install -y npm"
    local wanted have
    wanted=$(sed -n 's/^rust-version = "\(.*\)"/\1/p' Cargo.toml)
    have=$(rustc --version | cut -d' ' -f2)
    printf '%s\n%s\n' "$wanted" "$have" | sort -CV ||
        missing "Rust $wanted or newer ($have is here)" "rustup update stable"
    rustup target list --installed | grep -qx "$wasm_target" || rustup target add "$wasm_target"
}

install_packages() {
    # The stamp is written last, so a broken install is done again.
    local stamp=node_modules/.made-from
    if [ "$(cat "$stamp" 2>/dev/null)" != "$(sha256sum <package-lock.json)" ]; then
        npm ci --ignore-scripts --no-audit --no-fund
        sha256sum <package-lock.json >"$stamp"
    fi
}

# The compiler writes file names into panic messages. Each folder of this machine gets a name that is the
# same everywhere, so that the same source gives the same bytes.
rust_flags() {
    local sysroot commit folder flags
    sysroot=$(rustc --print sysroot)
    commit=$(rustc -vV | sed -n 's/^commit-hash: //p')
    flags="--remap-path-prefix=$root=."
    flags+=$'\x1f'"--remap-path-prefix=$sysroot/lib/rustlib/src/rust=/rustc/$commit"
    for folder in "${CARGO_HOME:-$HOME/.cargo}"/registry/src/*/; do
        flags+=$'\x1f'"--remap-path-prefix=${folder%/}=crates"
    done
    printf '%s' "$flags"
}

build_core() {
    say "the core"
    # All sources must lie in the registry folder before its name can be asked for.
    cargo fetch --locked --target "$wasm_target" --target "$(rustc -vV | sed -n 's/^host: //p')"
    CARGO_ENCODED_RUSTFLAGS=$(rust_flags) cargo build --locked --release --lib --target "$wasm_target"
    # The tests want the runner too; asking for both at once compiles what they share once.
    cargo build --locked --package pack ${1:+--features runner}
    local core=$CARGO_TARGET_DIR/$wasm_target/release/leastlight.wasm
    "$CARGO_TARGET_DIR/debug/pack" bind nodejs "$core" dist/node
    "$CARGO_TARGET_DIR/debug/pack" bind no-modules "$core" "$made/core"
}

build_page() {
    say "the page"
    node_modules/.bin/tsc --project www/tsconfig.json
    local script
    for script in main worker; do
        node_modules/.bin/esbuild "www/$script.js" --bundle --minify --format=iife --target=es2022 --charset=utf8 \
            --log-level=warning --outfile="$made/$script.js"
    done
    node_modules/.bin/esbuild www/style.css --bundle --minify --charset=utf8 --loader:.svg=dataurl \
        --log-level=warning --outfile="$made/page.css"
    "$CARGO_TARGET_DIR/debug/pack" page www/index.html "$made/page.css" "$made/core/leastlight_bg.wasm" \
        "$made/core/leastlight.js" "$made/worker.js" "$made/main.js" "$made/leastlight.html"
    # Only a page that passes the gate reaches dist/.
    rm -f dist/leastlight.html
    node www/pack/gate.js "$made/leastlight.html" "$root" "$HOME" "${CARGO_HOME:-$HOME/.cargo}" "$(rustc --print sysroot)"
    mv "$made/leastlight.html" dist/leastlight.html
}

report() {
    say "built with $(rustc --version)"
    local file
    for file in dist/leastlight.html dist/node/leastlight.js dist/node/leastlight_bg.wasm; do
        printf '%s  %9d bytes  SHA-256 %s\n' "$root/$file" "$(stat -c %s "$file")" "$(sha256sum <"$file" | cut -d' ' -f1)"
    done
}

show() {
    if [ -z "${CI:-}" ] && [ -t 1 ] && [ -n "${DISPLAY:-}${WAYLAND_DISPLAY:-}" ] && command -v xdg-open >/dev/null; then
        xdg-open dist/leastlight.html >/dev/null 2>&1 &
    fi
}

case "${1:-}" in
"" | test) ;;
*)
    sed -n '2,3s/^# //p' "$0" >&2
    exit 2
    ;;
esac
check_tools
install_packages
build_core "${1:+runner}"
build_page
report
if [ "${1:-}" = test ]; then
    exec bash tests/run.sh
fi
show
