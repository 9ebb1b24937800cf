//! One spelling for each name.

use unicode_normalization::{UnicodeNormalization, is_nfc};

/// The name in NFC, primes as `'` and micro as the Greek letter mu, so that names that
/// look alike are one.
pub fn normalised(name: &str) -> String {
    if name.is_ascii() {
        return name.to_owned();
    }
    let one_spelling = |c: char| match c {
        '\u{B5}' => '\u{3BC}',
        '\u{2032}' => '\'',
        c => c,
    };
    if is_nfc(name) {
        return name.chars().map(one_spelling).collect();
    }
    name.nfc().map(one_spelling).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_that_look_alike_are_one() {
        assert_eq!(normalised("e\u{301}tat"), "\u{e9}tat");
        assert_eq!(normalised("\u{B5}"), normalised("\u{3BC}"));
        assert_eq!(normalised("p\u{2032}"), "p'");
        assert_ne!(normalised("\u{3C1}"), normalised("rho"));
    }
}
