//! Every term of a dimensionless equation has dimension one, and putting the scales back
//! gives the term that was written: for every script of the tests and of the library, every
//! equation and every term to divide by.

use std::path::{Path, PathBuf};
use std::{fs, io};

use scalewright::algebra::monomial::{Monomial, Symbol};
use scalewright::algebra::product::{Base, Factor, Product, factors_size};
use scalewright::algebra::quantities::Quantities;
use scalewright::analysis::nondimensional::{expression, ratio};
use scalewright::analysis::{Case, cases};
use scalewright::model::modules::{Main, NoFiles, load};
use scalewright::model::terms::Term;
use scalewright::model::{Model, declarations, dimensions};
use scalewright::number::Exponent;
use scalewright::source::Sources;
use scalewright::units::Dimension;

use crate::harness::Tally;

#[test]
fn scales_are_put_back() {
    let mut tally = Tally::default();
    for path in scripts() {
        let text = fs::read_to_string(&path).expect("a script can be read");
        let Some((model, cases)) = checked(&text) else {
            continue;
        };
        tally.begin(&path.display().to_string());
        cases
            .iter()
            .for_each(|case| compare(&mut tally, &model, case));
    }
    tally.finish("scales put back", 100, 13_000);
}

fn scripts() -> Vec<PathBuf> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut found = Vec::new();
    for folder in ["tests/published/cases", "tests/inputs", "stdlib"] {
        walk(&root.join(folder), &mut found).expect("the folders of scripts can be read");
    }
    found.sort();
    found
}

fn walk(folder: &Path, found: &mut Vec<PathBuf>) -> io::Result<()> {
    for entry in fs::read_dir(folder)? {
        let path = entry?.path();
        if path.is_dir() {
            walk(&path, found)?;
        } else if path.extension().is_some_and(|ending| ending == "scl") {
            found.push(path);
        }
    }
    Ok(())
}

/// The model of a script and its phenomena; none if it has errors, as some fixtures should.
fn checked(text: &str) -> Option<(Model, Vec<Case>)> {
    let main = Main {
        name: "script.scl".to_owned(),
        text: text.to_owned(),
        path: None,
        folder: PathBuf::new(),
        root: PathBuf::new(),
    };
    let (scripts, errors) = load(&main, &NoFiles, &mut Sources::default());
    if errors.iter().any(|error| error.is_error()) {
        return None;
    }
    let (mut model, mut errors) = declarations::gather(scripts);
    errors.extend(dimensions::check(&mut model));
    if errors.iter().any(|error| error.diagnostic().is_error()) {
        return None;
    }
    let (cases, errors) = cases(&model);
    let is_sound = !errors.iter().any(|error| error.diagnostic().is_error());
    (is_sound && !model.equations.is_empty()).then_some((model, cases))
}

fn compare(tally: &mut Tally, model: &Model, case: &Case) {
    let quantities = &case.setting.quantities;
    for equation in &case.equations {
        for divisor in &equation.terms {
            for term in &equation.terms {
                let what = format!("{}, {} by {}", equation.name, term.text, divisor.text);
                let ratio = ratio(term, divisor).expect("a ratio is within the limits");
                tally.same(&what, dimension(&ratio, model), Dimension::one());
                let back = back(term, divisor, &ratio, quantities);
                let written = resolved(&term.product, quantities);
                let is_same = back.is_like(&written) && back.number == written.number;
                tally.same(&what, is_same, true);
            }
        }
    }
}

fn dimension(monomial: &Monomial, model: &Model) -> Dimension {
    monomial
        .powers()
        .iter()
        .fold(Dimension::one(), |product, (symbol, power)| {
            let own = match symbol {
                Symbol::Declared(id) => model.symbols[id.idx()].dimension,
                Symbol::Function(_) => Some(Dimension::one()),
            };
            let own = own.expect("a checked symbol has a dimension");
            let own = own.power(*power).expect("within the limits");
            product.times(&own).expect("within the limits")
        })
}

/// Coefficient times divisor times the expression, each variable of it over its scale.
fn back(term: &Term, divisor: &Term, ratio: &Monomial, quantities: &Quantities) -> Product {
    let size = ratio
        .times(&divisor.size.resolved)
        .expect("within the limits");
    let mut product = as_product(&size);
    for factor in expression(&term.product).factors {
        let own = std::slice::from_ref(&factor);
        let scale = factors_size(own, quantities).expect("within the limits");
        let below = as_product(&scale.resolved).power(Exponent::ONE.negated());
        product = product
            .times(&single(factor))
            .and_then(|product| product.times(&below?))
            .expect("within the limits");
    }
    product
}

/// A term with derived scales replaced.
fn resolved(product: &Product, quantities: &Quantities) -> Product {
    let number = Product::number(product.number.clone());
    product.factors.iter().fold(number, |found, factor| {
        let next = match &factor.base {
            Base::Symbol(symbol) => as_product(&quantities.symbol_size(symbol).resolved)
                .power(factor.power)
                .expect("within the limits"),
            _ => single(factor.clone()),
        };
        found.times(&next).expect("within the limits")
    })
}

fn single(factor: Factor) -> Product {
    Product {
        factors: vec![factor],
        ..Product::number(scalewright::number::Number::one())
    }
}

fn as_product(monomial: &Monomial) -> Product {
    let powers = monomial.powers().iter();
    Product {
        number: monomial.number.clone(),
        factors: powers
            .map(|(symbol, power)| Factor {
                base: Base::Symbol(symbol.clone()),
                power: *power,
            })
            .collect(),
    }
}
