//! What the YAML parser's complaints mean to someone who writes a configuration.

/// A complaint in plain words.
pub(crate) struct Explained {
    /// What is wrong.
    pub(crate) message: String,
    /// How to mend it.
    pub(crate) help: &'static str,
}

const ALIGN: &str = "keys of one map start in the same column; put text that goes on over several lines in quotes";
const QUOTE: &str = "put the text in quotes";

/// Part of the parser's words, what it means, what mends it. The first match counts.
const MEANINGS: [(&str, &str, &str); 21] = [
    ("tab", "a tab cannot stand here", "indent with spaces: YAML does not allow tabs there"),
    (
        "mapping values are not allowed",
        "a `:` is not expected here",
        "put text that holds `: ` in quotes, or align this line with the keys above it",
    ),
    (
        "illegal placement of ':'",
        "a `:` is not expected here",
        "close the bracket or the quotes before this line, or put text that holds `: ` in quotes",
    ),
    (
        "simple key expect",
        "the text before this is not `key: value`",
        "write `key: value` with a space after the colon, or delete the text",
    ),
    ("unknown escape", "`\\` begins an escape that is not known", "write `\\\\` for a backslash, or use single quotes"),
    ("hexadecimal", "this escape needs hexadecimal digits", "write `\\\\` for a backslash, or use single quotes"),
    ("quoted scalar", "quotes are opened here and not closed", "close the quotes on the same line"),
    ("double-quoted", "there is text after the closing quote", "put the whole value in one pair of quotes"),
    (
        "anchor",
        "anchors (`&name`) and aliases (`*name`) are not allowed",
        "write the value out; put text that begins with `&` or `*` in quotes",
    ),
    ("unexpected character", "text cannot begin with this character", QUOTE),
    ("cannot start with", "text cannot begin with these characters", QUOTE),
    ("recursion limit", "maps and lists are nested more than 64 deep", "check the brackets and the indentation"),
    ("did not find expected key", "this line does not align with the keys above it", ALIGN),
    (
        "expected '-' indicator",
        "this line aligns with a list but does not begin with `- `",
        "begin it with `- `, or align it with the keys that it belongs to",
    ),
    (
        "block sequence entries",
        "a list item (`- `) is not expected here",
        "begin the list on the line below its key; put text that begins with `- ` in quotes",
    ),
    ("expected node content", "a value is missing here", "write the value, and close each bracket"),
    ("flow sequence, expected", "expected `,` or `]`", "put a comma between items and close each `[`"),
    ("flow mapping, did not", "expected `,` or `}`", "put a comma between keys and close each `{`"),
    ("misplaced bracket", "this bracket closes nothing", "delete it, or put the text in quotes"),
    (
        "flow construct",
        "this line is inside a bracket that is still open, and is not indented",
        "close the bracket before this line, or indent the line",
    ),
    ("<document start>", "there is text after the end of the value", "write one key a line: `key: value`"),
];

/// Puts the parser's words plainly; words that are not known are shown as they are.
pub(crate) fn explain(info: &str) -> Explained {
    match MEANINGS.iter().find(|(part, ..)| info.contains(part)) {
        Some((_, message, help)) => Explained { message: format!("this is not valid YAML: {message}"), help },
        None => Explained { message: format!("this is not valid YAML: {info}"), help: ALIGN },
    }
}
