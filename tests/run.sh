#!/usr/bin/env bash
# Every check there is, in order of how soon it tells. Called by `./build.sh test`, after the build.
# A check that cannot run has failed: nothing is skipped for want of a tool.
set -uo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/.."

wasm_target=wasm32-unknown-unknown
export CARGO_TARGET_DIR=${CARGO_TARGET_DIR:-$PWD/target}
export CARGO_TERM_COLOR=never
tools=$CARGO_TARGET_DIR/tools
lines=()
failed=0

step() { # name, command…
    local name=$1 begin=$SECONDS verdict=passed
    shift
    printf '\n== %s\n' "$name"
    "$@" || verdict=FAILED
    [ "$verdict" = passed ] || failed=$((failed + 1))
    lines+=("$(printf '%-7s %4d s  %s' "$verdict" $((SECONDS - begin)) "$name")")
}

install_browsers() {
    local package absent=()
    for package in chromium chromium-driver firefox-esr webkit2gtk-driver xvfb xauth; do
        dpkg-query -W -f='${Status}' "$package" 2>/dev/null | grep -q 'ok installed' || absent+=("$package")
    done
    if [ ${#absent[@]} -gt 0 ]; then
        local as_root=()
        [ "$(id -u)" = 0 ] || as_root=(sudo)
        "${as_root[@]}" apt-get update -q || return
        DEBIAN_FRONTEND=noninteractive "${as_root[@]}" apt-get install -q -y --no-install-recommends "${absent[@]}" || return
    fi
    # Debian has no package of Firefox's driver.
    [ -x "$tools/bin/geckodriver" ] || cargo install geckodriver --version 0.37.1 --locked --root "$tools"
}

# The runner is content with no tests at all, so its own count is asked for.
wasm_tests() { # NAME=VALUE…, which say where they run
    env "$@" CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_RUNNER="$CARGO_TARGET_DIR/debug/wasm-runner" \
        cargo test --locked --target "$wasm_target" --test wasm | tee "$CARGO_TARGET_DIR/wasm-tests.txt" || return
    grep -q '^test result: ok. [1-9]' "$CARGO_TARGET_DIR/wasm-tests.txt"
}

# Native answers of an earlier run would speak for a core that is no more.
rm -f target/replay.jsonl target/replay-log.json

step "browsers and drivers are here" install_browsers
step "source is formatted" cargo fmt --all --check
step "clippy" cargo clippy --locked --workspace --all-targets -- -D warnings
step "clippy, wasm" cargo clippy --locked --target "$wasm_target" --lib --test wasm -- -D warnings
step "core" cargo test --locked
step "documentation" env RUSTDOCFLAGS="-D warnings" cargo doc --locked --no-deps --quiet
# With the runner, as it was built: other features would compile everything below it a second time.
step "packer" cargo test --locked --package pack --features runner
step "boundary, in Node" wasm_tests
step "boundary, in Chromium" wasm_tests WASM_BINDGEN_USE_BROWSER=1 CHROMEDRIVER=/usr/bin/chromedriver
step "shipped files, in Node" node --test tests/node/*.test.mjs
step "shipped page, in three browsers" env PATH="$tools/bin:$PATH" node --test tests/browser/*.test.mjs

printf '\n'
printf '%s\n' "${lines[@]}"
printf '%d passed, %d failed\n' $((${#lines[@]} - failed)) "$failed"
exit $((failed > 0))
