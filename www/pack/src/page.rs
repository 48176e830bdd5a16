//! One file that holds everything: the template's markers are filled, and the policy names each script and
//! the style by hash, so that nothing else can run and nothing can be loaded.

use anyhow::{Result, bail, ensure};
use base64::{Engine, engine::general_purpose::STANDARD};
use sha2::{Digest, Sha256};

/// What goes into the template.
pub struct Parts {
    /// The style sheet, one text.
    pub style: String,
    /// The compiled core, as bound for classic scripts.
    pub core: Vec<u8>,
    /// The glue that makes the core callable.
    pub glue: String,
    /// What a worker runs after the glue. The page keeps it as text; a worker obeys the policy of its page.
    pub worker: String,
    /// The page's own script, one classic script.
    pub script: String,
}

/// The markers, in the order in which they stand in the template.
const MARKERS: [&str; 6] = [
    "<!-- csp -->",
    "<!-- style -->",
    "<!-- core -->",
    "<!-- glue -->",
    "<!-- worker -->",
    "<!-- script -->",
];

/// The policy must hold before anything else is read, so it follows the charset at once.
const BEFORE_POLICY: &str = "<meta charset=\"utf-8\">";

/// Fills the template.
pub fn pack(template: &str, parts: &Parts) -> Result<String> {
    ensure_inline("the glue", &parts.glue, &["</script", "<script", "<!--"])?;
    ensure_inline("the worker", &parts.worker, &["</script", "<script", "<!--"])?;
    ensure_inline("the script", &parts.script, &["</script", "<script", "<!--"])?;
    ensure_inline("the style", &parts.style, &["</style"])?;

    let pieces = split(template)?;
    ensure!(pieces[0].trim_end().ends_with(BEFORE_POLICY), "{} must follow {BEFORE_POLICY}", MARKERS[0]);

    let policy = policy(&[&parts.glue, &parts.script], &parts.style);
    let filled = [
        format!("<meta http-equiv=\"Content-Security-Policy\" content=\"{policy}\">"),
        format!("<style>{}</style>", parts.style),
        format!(
            "<script type=\"application/octet-stream\" id=\"core\">{}</script>",
            STANDARD.encode(&parts.core)
        ),
        format!("<script id=\"glue\">{}</script>", parts.glue),
        format!("<script type=\"text/plain\" id=\"worker\">{}</script>", parts.worker),
        format!("<script>{}</script>", parts.script),
    ];
    let mut page = pieces[0].to_owned();
    for (part, piece) in filled.iter().zip(&pieces[1..]) {
        page += part;
        page += piece;
    }
    Ok(page)
}

/// The template around its markers. It is cut before anything is put in, so a text that goes in may hold
/// what looks like a marker.
fn split(template: &str) -> Result<Vec<&str>> {
    let mut pieces = Vec::new();
    let mut rest = template;
    for marker in MARKERS {
        ensure!(template.matches(marker).count() == 1, "the template must hold {marker} once");
        let Some((before, after)) = rest.split_once(marker) else {
            bail!("{marker} stands too early: the order is {}", MARKERS.join(" "));
        };
        pieces.push(before);
        rest = after;
    }
    pieces.push(rest);
    Ok(pieces)
}

/// A text that ends its own element early, or whose bytes a parser would change, would not match its hash.
fn ensure_inline(name: &str, text: &str, forbidden: &[&str]) -> Result<()> {
    let lower = text.to_ascii_lowercase();
    for word in forbidden {
        ensure!(!lower.contains(word), "{name} must not hold {word}");
    }
    ensure!(!text.contains(['\r', '\0']), "{name} must not hold a carriage return or a zero byte");
    Ok(())
}

/// Nothing by default; these scripts, this style, wasm, the worker and pictures made in the page.
fn policy(scripts: &[&str], style: &str) -> String {
    let hashes: Vec<String> = scripts.iter().map(|script| hash(script)).collect();
    format!(
        "default-src 'none'; script-src {} 'wasm-unsafe-eval'; style-src {}; worker-src blob:; \
         img-src data: blob:; connect-src 'none'; form-action 'none'; base-uri 'none'",
        hashes.join(" "),
        hash(style)
    )
}

/// A source expression of Content Security Policy level 3, section 2.3.1 (hash-source).
fn hash(text: &str) -> String {
    format!("'sha256-{}'", STANDARD.encode(Sha256::digest(text)))
}

#[cfg(test)]
mod tests {
    use super::*;

    const TEMPLATE: &str = "<meta charset=\"utf-8\">\n<!-- csp -->\n<!-- style -->\n<!-- core -->\n\
                            <!-- glue -->\n<!-- worker -->\n<!-- script -->\nend";

    fn parts() -> Parts {
        Parts {
            style: "p{}".to_owned(),
            core: vec![0, 1, 2],
            glue: "let a;".to_owned(),
            worker: "b();".to_owned(),
            script: "a=1;".to_owned(),
        }
    }

    #[test]
    fn hash_is_that_of_the_policys_own_example() {
        // W3C, Content Security Policy Level 2, section 4.2.5, example: the text `alert('Hello, world.');`.
        assert_eq!(hash("alert('Hello, world.');"), "'sha256-qznLcsROx4GACP2dm0UCKCzCG+HiZ1guq6ZZDob/Tng='");
    }

    #[test]
    fn every_part_stands_where_its_marker_stood() {
        let page = pack(TEMPLATE, &parts()).unwrap();
        assert!(page.contains(
            "<style>p{}</style>\n<script type=\"application/octet-stream\" id=\"core\">AAEC</script>"
        ));
        assert!(page.ends_with(
            "<script id=\"glue\">let a;</script>\n<script type=\"text/plain\" id=\"worker\">b();</script>\n\
             <script>a=1;</script>\nend"
        ));
    }

    #[test]
    fn a_marker_inside_a_part_stays_as_it_is() {
        let style = "/*<!-- core -->*/".to_owned();
        let page = pack(TEMPLATE, &Parts { style, ..parts() }).unwrap();
        assert!(page.contains("<style>/*<!-- core -->*/</style>"));
    }

    #[test]
    fn a_script_that_would_end_its_own_element_is_refused() {
        for script in ["'</script>'", "'</SCRIPT '", "'<!--'", "a\r\nb"] {
            assert!(pack(TEMPLATE, &Parts { script: script.to_owned(), ..parts() }).is_err(), "{script}");
            assert!(pack(TEMPLATE, &Parts { glue: script.to_owned(), ..parts() }).is_err(), "{script}");
            assert!(pack(TEMPLATE, &Parts { worker: script.to_owned(), ..parts() }).is_err(), "{script}");
        }
        assert!(pack(TEMPLATE, &Parts { style: "</style>".to_owned(), ..parts() }).is_err());
    }

    #[test]
    fn markers_are_there_once_in_order_and_the_policy_comes_first() {
        for template in [
            TEMPLATE.replace("<!-- core -->", ""),
            TEMPLATE.replace("<!-- core -->", "<!-- core --><!-- core -->"),
            TEMPLATE.replace("<!-- style -->\n<!-- core -->", "<!-- core -->\n<!-- style -->"),
            TEMPLATE.replace("<!-- csp -->", "<title>first</title><!-- csp -->"),
        ] {
            assert!(pack(&template, &parts()).is_err(), "{template}");
        }
    }
}
