//! Random tokens: reading never panics, errors lie inside the text, and what is read
//! without an error prints to the same tree.

use proptest::prelude::*;
use scalewright::syntax::token::RESERVED;

use super::printing::check_printing;
use super::read;

const PIECES: [&str; 62] = [
    "U",
    "L",
    "x_momentum",
    "p'",
    "θ₀",
    "d_x",
    "rho",
    "µ",
    "1",
    "10",
    "2.5",
    "1e-4",
    "10^",
    "10^-4",
    "10⁻⁴",
    "m/s",
    "J/(kg.K)",
    "1/s",
    "%",
    "°C",
    "\"a text\"",
    "\"open",
    "+",
    "-",
    "*",
    "·",
    "×",
    "/",
    "^",
    "(",
    ")",
    "{",
    "}",
    ",",
    ":",
    ".",
    "..",
    "=",
    "~",
    "<",
    ">",
    "<<",
    "≫",
    "+-",
    "±",
    "->",
    "→",
    "∂",
    "∇",
    "²",
    "⁻¹",
    "# comment\n",
    "\n",
    " ",
    "leading",
    "order",
    "others",
    "cartesian",
    "$",
    "−",
    "\u{301}",
    "\u{feff}",
];

fn piece() -> impl Strategy<Value = &'static str> {
    let reserved: Vec<&'static str> = RESERVED.iter().map(|(_, word)| *word).collect();
    prop_oneof![
        3 => prop::sample::select(PIECES.to_vec()),
        1 => prop::sample::select(reserved),
    ]
}

fn soup() -> impl Strategy<Value = String> {
    let blank = prop::sample::select(vec!["", " ", " ", "\n"]);
    prop::collection::vec((piece(), blank), 0..60)
        .prop_map(|pieces| pieces.into_iter().flat_map(|(a, b)| [a, b]).collect())
}

pub(super) fn check(text: &str) {
    let (_, errors) = read(text);
    for error in &errors {
        let span = error.span();
        let (start, end) = (span.start as usize, span.end as usize);
        assert!(text.get(start..end).is_some(), "{error:?} lies outside");
        let told = error.diagnostic();
        assert!(!told.message.is_empty() && !told.message.ends_with('.'));
    }
    if errors.is_empty() {
        check_printing(text);
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(4_000))]

    #[test]
    fn token_soup_is_read(text in soup()) {
        check(&text);
    }

    #[test]
    fn any_text_is_read(text in "\\PC{0,80}") {
        check(&text);
    }

    #[test]
    fn expressions_of_tokens_are_read(text in soup()) {
        check(&format!("show {}", text.replace('\n', " ")));
    }
}
