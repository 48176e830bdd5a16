//! The few steps through an XML tree that a certificate needs, and the writing of one.

use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;
use roxmltree::{Document, Node};

/// The names of the two vocabularies. They are names and no addresses: nothing is ever fetched.
pub(super) const DCC: &str = "https://ptb.de/dcc";
/// That of the numbers.
pub(super) const SI: &str = "https://ptb.de/si";
/// That of signatures.
pub(super) const SIGNATURE: &str = "http://www.w3.org/2000/09/xmldsig#";

/// Parses a text, or says where it is no XML.
pub(super) fn parsed(text: &str) -> Result<Document<'_>, Faults> {
    Document::parse(text).map_err(|error| {
        let at = error.pos();
        let sentence = format!(
            "A digital calibration certificate is an XML file; this text is none from line {}, column {} on: {error}.",
            at.row, at.col
        );
        vec![Fault::new("", Code::Unreadable, Tree::Null, &sentence)]
    })
}

/// The first child of a name in a vocabulary.
pub(super) fn child<'a, 'i>(node: Node<'a, 'i>, vocabulary: &str, name: &str) -> Option<Node<'a, 'i>> {
    node.children().find(|child| is(*child, vocabulary, name))
}

/// The node at the end of a path of names of the `dcc` vocabulary.
pub(super) fn down<'a, 'i>(node: Node<'a, 'i>, path: &[&str]) -> Option<Node<'a, 'i>> {
    path.iter().try_fold(node, |node, name| child(node, DCC, name))
}

/// Whether a node is an element of a name in a vocabulary.
pub(super) fn is(node: Node, vocabulary: &str, name: &str) -> bool {
    node.is_element() && node.tag_name().name() == name && node.tag_name().namespace() == Some(vocabulary)
}

/// The text of an element with single spaces; empty where there is none.
pub(super) fn text(node: Option<Node>) -> String {
    let words = |node: Node| node.text().unwrap_or("").split_whitespace().collect::<Vec<_>>().join(" ");
    node.map(words).unwrap_or_default()
}

/// A text that may be there in several languages: the English one, else the first.
pub(super) fn in_words(node: Option<Node>) -> String {
    let Some(node) = node else { return String::new() };
    let contents = || node.children().filter(|child| is(*child, DCC, "content"));
    let english = contents().find(|content| content.attribute("lang") == Some("en"));
    text(english.or_else(|| contents().next()))
}

/// Writes elements one within the other, each on its line.
#[derive(Default)]
pub(super) struct Writer {
    out: String,
    open: Vec<&'static str>,
}

impl Writer {
    /// Opens an element, writes what `inside` writes, and closes it.
    pub(super) fn element(
        &mut self,
        name: &'static str,
        attributes: &[(&str, &str)],
        inside: impl FnOnce(&mut Writer),
    ) {
        self.begin(name, attributes);
        self.out.push_str(">\n");
        self.open.push(name);
        inside(self);
        self.open.pop();
        self.indent();
        self.out += &format!("</{name}>\n");
    }

    /// An element that holds text.
    pub(super) fn text(&mut self, name: &'static str, attributes: &[(&str, &str)], text: &str) {
        self.begin(name, attributes);
        self.out += &format!(">{}</{name}>\n", escaped(text));
    }

    /// The whole file.
    pub(super) fn finish(self) -> String {
        format!("<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n{}", self.out)
    }

    fn begin(&mut self, name: &str, attributes: &[(&str, &str)]) {
        self.indent();
        self.out += &format!("<{name}");
        for (key, value) in attributes {
            self.out += &format!(" {key}=\"{}\"", escaped(value));
        }
    }

    fn indent(&mut self) {
        self.out += &"  ".repeat(self.open.len());
    }
}

/// Text in which nothing is taken for markup.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for character in text.chars() {
        match character {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            other => out.push(other),
        }
    }
    out
}

/// Whether XML 1.0 can hold a text at all.
pub(super) fn is_writable(text: &str) -> bool {
    text.chars()
        .all(|c| matches!(c, '\t' | '\n' | '\r' | ' '..='\u{d7ff}' | '\u{e000}'..='\u{fffd}' | '\u{10000}'..))
}
