//! Every code that a diagnostic may carry, explained: what it means in one sentence, and
//! what mends it in another. The prompt's help and the language reference show this
//! table; a test holds it to the codes that the program writes.

/// A code with its explanation.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Explained {
    /// The code.
    pub code: &'static str,
    /// What it means.
    pub meaning: &'static str,
    /// What to do about it.
    pub mend: &'static str,
}

/// The explanation of a code.
pub fn find(code: &str) -> Option<&'static Explained> {
    CODES.iter().find(|explained| explained.code == code)
}

macro_rules! codes {
    ($($code:literal: $meaning:literal $mend:literal;)+) => {
        &[$(Explained { code: $code, meaning: $meaning, mend: $mend }),+]
    };
}

/// All codes: of the form of a script, of its names and units, of its values, of its
/// equations, of its requests.
#[rustfmt::skip]
pub const CODES: &[Explained] = codes! {
    // The form.
    "unreadable-file":
        "A file cannot be opened or read."
        "Check its path and that reading it is allowed.";
    "not-utf8":
        "A file is no UTF-8 text."
        "Save it as UTF-8 in your editor.";
    "unexpected-character":
        "A character stands here that no script has outside texts and comments."
        "Take it out, or put quotes around the text it belongs to.";
    "unexpected-word":
        "A word or sign stands here where the statement wants another."
        "Compare the statement with its form: `help scale`, `help rank`, and so on.";
    "unfinished":
        "A statement, a bracket, a phenomenon or a text ends too early."
        "Write the rest of it: the message says what could stand there.";
    "too-deep":
        "Brackets, signs or powers are nested beyond the limit."
        "Give a part of the expression a name of its own.";
    "too-long":
        "A script, a statement or a unit is longer than the limit."
        "Divide it; a script brings in its parts with `use`.";
    "not-available":
        "The words are those of the language, but this version does not answer them."
        "Leave the statement out, or take a later version.";
    "unlike-orders":
        "The order behind the first `∂` differs from the sum of the orders below."
        "Write the same order above and below: `∂²u/∂x²`.";
    // Names and units.
    "unknown-name":
        "Nothing of this name is declared."
        "Declare it, check its spelling, or `use` the module that has it.";
    "unknown-unit":
        "No unit is written so."
        "Check its spelling; for a product with a symbol write `*` before the symbol.";
    "unknown-module":
        "The library has no module of this name."
        "`scalewright library` lists the modules; a file is named in quotes.";
    "unknown-equation":
        "No equation of this name is declared."
        "Declare it, check its spelling, or `use` the module that has it.";
    "unknown-process":
        "The equation has no process of this name."
        "Take one of those that the message lists, or name a term with `as`.";
    "unknown-phenomenon":
        "No phenomenon of this name is declared."
        "Declare it, or check its spelling.";
    "unit-or-symbol":
        "A unit behind a number consists only of names that are declared too, and counts as the unit."
        "For the product write `*`; for the unit change nothing.";
    "unit-apart":
        "A unit stands on another line than its number."
        "Write it right behind the number.";
    "unit-after-quotient":
        "A bare number is divided by a number with a unit, which reads two ways."
        "Write one number, `0.5 m`, or brackets, `1/(2 m)`.";
    "two-solidi":
        "A unit has a second `/` outside brackets."
        "Write one `/` and brackets: `J/(kg.K)`.";
    "offset-unit":
        "A reading in degC or degF stands where only a difference or a size may stand."
        "Write differences, ranges and sizes in K.";
    "second-value":
        "A name gets a second value at the same level."
        "Keep one of the two; a phenomenon may give a value of its own.";
    "name-clash":
        "A name has two meanings."
        "Choose another name for one of them.";
    "value-overridden":
        "A value given here takes the place of one from a module or from the script."
        "Nothing to mend, if that is what you want.";
    "use-cycle":
        "Modules use one another in a ring."
        "Put what they share into a module of its own.";
    "outside-folder":
        "A file lies outside the folder of the script."
        "Move it there, or name a wider folder with `--root DIR`.";
    "circular-definition":
        "A name is defined by way of itself."
        "Give one name of the ring a value of its own.";
    // Dimensions and values.
    "unlike-dimensions":
        "Two things that are added, compared or set equal have unlike dimensions."
        "Mend the one that is wrong: both are shown with their dimensions.";
    "not-dimensionless":
        "A plain number is wanted, and this has a dimension."
        "Divide it by something of the same dimension.";
    "not-positive":
        "A scale, a tolerance or a factor must be positive."
        "Write its amount; a number with a sign is a `constant`.";
    "range-upside-down":
        "A range has its ends in the wrong order, or a factor below 1."
        "Write the smaller end first, and a factor above 1.";
    "range-holds-zero":
        "The range of a constant holds 0, so its size has no lower end."
        "Take a range on one side of 0.";
    "margin-too-wide":
        "A margin behind `+-` takes a scale to 0 or below."
        "Take a smaller margin, or a factor: `within 2`.";
    "derived-scale":
        "A scale that follows others has a range of its own."
        "Put the range on a factor: `scale k = 1 within 3`, then `k*U*H/L`.";
    "too-large":
        "A number, an exponent or a count of terms is beyond the limits."
        "Choose units in which the numbers are of ordinary size, or split what is too big.";
    "divides-by-zero":
        "Something is divided by a 0."
        "Mend the value, or leave the quotient out.";
    // Equations.
    "not-a-product":
        "A sum stands where only a product of powers has a size."
        "Give the sum a name first, or write its size: `(a + b ~ D)`.";
    "one-term":
        "An equation is written with one term, which nothing balances."
        "Write the terms it lacks.";
    "zero-derivative":
        "A derivative vanishes, since its field does not depend on the coordinate."
        "Nothing to mend, unless the field lacks a coordinate.";
    "zero-constant":
        "A term is gone, since a constant in it is 0."
        "Nothing to mend, if the constant is meant to be 0.";
    "no-velocity":
        "`D_t` needs to know what it carries with."
        "Declare it: `velocity (u, v, w) along (x, y, z)`.";
    "no-frame":
        "A vector operation needs to know the coordinates."
        "Declare them: `frame cartesian (x, y, z)`.";
    "not-a-vector":
        "A vector stands where a plain quantity is wanted, or the other way round."
        "Write a component, or put three components in brackets.";
    "cancels-upwards":
        "A sum or product is given a size above its largest part."
        "Give it a size below its parts, or leave its size out.";
    "not-split":
        "A function of something that varies has no size by itself."
        "Split the field, name a constant level, or write its size: `(... ~ SIZE)`.";
    // Requests.
    "nothing-to-rank":
        "There is no equation to answer for."
        "Declare an `equation`, or `use` a module that has one.";
    "open-scale":
        "A name in the equation or expression has no value yet."
        "Give it one: `scale W = 1 cm/s`.";
    "ratio-not-small":
        "A part that should be small beside another for an expansion is not small."
        "Choose scales for which it is, or expand about the larger part.";
    "singular-expansion":
        "An expression is expanded about a place where it is infinite or not defined."
        "Take another origin, or write the expression's size: `(... ~ SIZE)`.";
    "not-a-relation":
        "What stands behind `from` is no linear combination of equations, or an equation behind `using` has nothing to replace."
        "Write `from d_x(y_momentum) - d_y(x_momentum)`; behind `using` one factor on the left.";
    "nothing-replaced":
        "The left side of an equation behind `using` does not occur in the equation it is put into."
        "Leave it out, or put something on its left that the equation holds.";
    "free-groups":
        "The limit does not say how some groups go with the small one."
        "Place those that are listed behind `with`, or write `others ~ 1`.";
    "contradicting-limit":
        "A place given to a group contradicts a relation among the groups."
        "Take one of the places out: the relation settles it.";
    "order-too-high":
        "The expansion is asked for to a higher order than the limit."
        "Ask for a lower order.";
    "not-open":
        "`find` is asked for a scale that has a value."
        "Leave the scale open, `scale W in m/s`, or ask for another one.";
    "no-balance":
        "`find` sees no set of balances that fixes the open scales: some equations contradict each other."
        "Look at the equations that are named; one may lack a term, or a given scale may be far off.";
    "lone-leading-term":
        "One term alone leads, and nothing can balance it."
        "Check the scales; the message says which change would bring a second term up.";
    "lone-process":
        "The terms of one process are left alone in a reduced equation and must cancel one another."
        "Nothing to mend, if they do, like the parts of a divergence.";
    "lost-derivative":
        "The reduced equation has lost a highest derivative, and with it a boundary condition."
        "Look for thin layers where the dropped term comes back: `layers`.";
    "undetermined-field":
        "The full equations determine a field that the reduced ones do not."
        "Add an equation, or go to a higher order: `expand`.";
    "cannot-match":
        "No change of scales makes the groups of two phenomena equal."
        "Ask for fewer groups behind `matching`.";
    "cannot-write":
        "A file or the output cannot be written."
        "Check the path, the room on the disk and the permissions.";
    "interrupted":
        "A computation was stopped before its end."
        "Ask for less, or let it run to its end.";
};

#[cfg(test)]
mod tests {
    use std::fs;
    use std::path::{Path, PathBuf};

    use super::*;

    /// Hyphenated words in the source that are no codes.
    const OTHER_WORDS: [&str; 5] = [
        "pound-force",
        "pounds-force",
        "acre-foot",
        "acre-feet",
        "claim-not-met",
    ];

    #[test]
    fn every_code_stands_once_with_two_sentences() {
        for (idx, explained) in CODES.iter().enumerate() {
            let first = CODES.iter().position(|found| found.code == explained.code);
            assert_eq!(first, Some(idx), "{}", explained.code);
            for text in [explained.meaning, explained.mend] {
                assert!(text.ends_with('.'), "{text}");
            }
        }
        assert!(find("no-such-code").is_none());
    }

    #[test]
    fn every_code_that_the_program_writes_is_explained() {
        let mut files = Vec::new();
        rust_files(
            Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/src")),
            &mut files,
        );
        let mut seen = 0;
        for path in files.iter().filter(|path| !path.ends_with("codes.rs")) {
            let text = fs::read_to_string(path).unwrap();
            let code = text.split("#[cfg(test)]").next().unwrap_or("");
            for word in code.split('"').filter(|word| is_hyphenated(word)) {
                seen += 1;
                let known = find(word).is_some() || OTHER_WORDS.contains(&word);
                assert!(known, "`{word}` in {} is not explained", path.display());
            }
        }
        assert!(seen > 60, "{seen}");
    }

    fn rust_files(folder: &Path, found: &mut Vec<PathBuf>) {
        for entry in fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                rust_files(&path, found);
            } else if path.extension().is_some_and(|end| end == "rs") {
                found.push(path);
            }
        }
    }

    fn is_hyphenated(word: &str) -> bool {
        word.contains('-')
            && word
                .split('-')
                .all(|part| !part.is_empty() && part.chars().all(|c| c.is_ascii_lowercase()))
    }
}
