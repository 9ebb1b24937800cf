//! Texts as LaTeX takes them, in any font encoding: what TeX would act on is escaped,
//! letters with accents are composed, Greek letters and signs become mathematics. A
//! character with no such form is shown by its number, so that every text compiles.

use unicode_normalization::UnicodeNormalization;
use unicode_normalization::char::is_combining_mark;

/// A text, escaped.
pub fn text(text: &str) -> String {
    let mut out = String::new();
    let mut chars = text.nfd().peekable();
    while let Some(c) = chars.next() {
        let mut letter = character(c);
        while let Some(mark) = chars.next_if(|mark| is_combining_mark(*mark)) {
            letter = accented(&letter, mark);
        }
        out.push_str(&letter);
    }
    out
}

/// A name in a table cell: it may break behind a dot or a slash too.
pub fn breakable(name: &str) -> String {
    text(name)
        .replace('.', ".\\allowbreak{}")
        .replace('/', "/\\allowbreak{}")
}

/// A message of the program, which sets names in backticks.
pub fn backticked(message: &str) -> String {
    let parts = message.split('`').enumerate();
    let parts = parts.map(|(idx, part)| match idx % 2 {
        0 => text(part),
        _ => format!("\\texttt{{{}}}", breakable(part)),
    });
    parts.collect()
}

fn character(c: char) -> String {
    let plain = match c {
        '\\' => "\\textbackslash{}",
        '{' => "\\{",
        '}' => "\\}",
        '$' => "\\$",
        '&' => "\\&",
        '#' => "\\#",
        '%' => "\\%",
        '_' => "\\_\\allowbreak{}",
        '^' => "\\textasciicircum{}",
        '~' => "\\ensuremath{\\sim}",
        // Without braces these join into other signs or ligatures.
        '<' => "\\ensuremath{<}",
        '>' => "\\ensuremath{>}",
        '|' => "\\ensuremath{|}",
        '"' => "''",
        '`' => "\\textasciigrave{}",
        '-' => "-{}",
        '[' => "{[}",
        ']' => "{]}",
        'ß' => "\\ss{}",
        'æ' => "\\ae{}",
        'Æ' => "\\AE{}",
        'œ' => "\\oe{}",
        'Œ' => "\\OE{}",
        'ø' => "\\o{}",
        'Ø' => "\\O{}",
        'ł' => "\\l{}",
        'Ł' => "\\L{}",
        'ı' => "\\i{}",
        '–' => "--",
        '—' => "---",
        '‘' => "`",
        '’' => "'",
        '“' => "``",
        '”' => "''",
        '…' => "\\dots{}",
        '\u{a0}' => "~",
        c if c == ' ' || c.is_ascii_graphic() => return c.to_string(),
        c if c.is_control() || c.is_whitespace() => " ",
        c => return other(c),
    };
    plain.to_owned()
}

/// A sign that mathematics has, or the number of the character.
fn other(c: char) -> String {
    match sign(c) {
        Some(sign) => format!("\\ensuremath{{{sign}}}"),
        None => format!("{{[}}U+{:04X}{{]}}", u32::from(c)),
    }
}

/// A character in mathematics, where it has a command or is a raised or lowered digit.
pub fn sign(c: char) -> Option<String> {
    if let Some(letter) = greek_letter(c) {
        return Some(letter);
    }
    let digit = |digits: &str| digits.chars().position(|digit| digit == c);
    if let Some(digit) = digit("⁰¹²³⁴⁵⁶⁷⁸⁹") {
        return Some(format!("^{{{digit}}}"));
    }
    if let Some(digit) = digit("₀₁₂₃₄₅₆₇₈₉") {
        return Some(format!("_{{{digit}}}"));
    }
    let command = match c {
        '°' => "^{\\circ}",
        '·' => "\\cdot ",
        '×' => "\\times ",
        '±' => "\\pm ",
        '÷' => "\\div ",
        '−' => "-",
        '⁻' => "^{-}",
        '≤' => "\\le ",
        '≥' => "\\ge ",
        '≪' => "\\ll ",
        '≫' => "\\gg ",
        '≈' => "\\approx ",
        '≠' => "\\ne ",
        '→' => "\\to ",
        '∂' => "\\partial ",
        '∇' => "\\nabla ",
        '√' => "\\surd ",
        '∞' => "\\infty ",
        'ℓ' => "\\ell ",
        '′' => "'",
        _ => return None,
    };
    Some(command.to_owned())
}

/// The Greek letters that have a command of their own, by their names.
pub const GREEK: [(&str, char); 34] = [
    ("alpha", 'α'),
    ("beta", 'β'),
    ("gamma", 'γ'),
    ("delta", 'δ'),
    ("epsilon", 'ε'),
    ("zeta", 'ζ'),
    ("eta", 'η'),
    ("theta", 'θ'),
    ("iota", 'ι'),
    ("kappa", 'κ'),
    ("lambda", 'λ'),
    ("mu", 'μ'),
    ("nu", 'ν'),
    ("xi", 'ξ'),
    ("pi", 'π'),
    ("rho", 'ρ'),
    ("sigma", 'σ'),
    ("tau", 'τ'),
    ("upsilon", 'υ'),
    ("phi", 'φ'),
    ("chi", 'χ'),
    ("psi", 'ψ'),
    ("omega", 'ω'),
    ("Gamma", 'Γ'),
    ("Delta", 'Δ'),
    ("Theta", 'Θ'),
    ("Lambda", 'Λ'),
    ("Xi", 'Ξ'),
    ("Pi", 'Π'),
    ("Sigma", 'Σ'),
    ("Upsilon", 'Υ'),
    ("Phi", 'Φ'),
    ("Psi", 'Ψ'),
    ("Omega", 'Ω'),
];

fn greek_letter(c: char) -> Option<String> {
    let c = if c == 'µ' { 'μ' } else { c };
    let (name, _) = GREEK.iter().find(|(_, letter)| *letter == c)?;
    Some(format!("\\{name} "))
}

/// A letter under an accent.
fn accented(letter: &str, mark: char) -> String {
    let accent = match mark {
        '\u{300}' => "\\`",
        '\u{301}' => "\\'",
        '\u{302}' => "\\^",
        '\u{303}' => "\\~",
        '\u{304}' => "\\=",
        '\u{306}' => "\\u",
        '\u{307}' => "\\.",
        '\u{308}' => "\\\"",
        '\u{30a}' => "\\r",
        '\u{30b}' => "\\H",
        '\u{30c}' => "\\v",
        '\u{323}' => "\\d",
        '\u{327}' => "\\c",
        _ => return format!("{letter}{}", other(mark)),
    };
    let letter = match letter {
        "i" => "\\i",
        "j" => "\\j",
        letter => letter,
    };
    format!("{accent}{{{letter}}}")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nothing_in_a_text_is_a_command() {
        assert_eq!(
            text("50 % of a_b & {c} #1 \\x ~ ^"),
            "50 \\% of a\\_\\allowbreak{}b \\& \\{c\\} \\#1 \\textbackslash{}x \\ensuremath{\\sim} \\textasciicircum{}"
        );
    }

    #[test]
    fn letters_of_other_alphabets_are_composed_or_numbered() {
        assert_eq!(text("Éø"), "\\'{E}\\o{}");
        assert_eq!(
            text("ρ₀ m²"),
            "\\ensuremath{\\rho }\\ensuremath{_{0}} m\\ensuremath{^{2}}"
        );
        assert_eq!(text("海"), "{[}U+6D77{]}");
    }
}
