//! Products: one summand of a multiplied-out equation, as number, symbols, fields and
//! derivatives, with its size and its text.

use std::sync::Arc;

use crate::algebra::calculus;
use crate::algebra::monomial::{Monomial, Symbol};
use crate::algebra::quantities::{CoordinateId, FieldId, Quantities, Size, Variation};
use crate::algebra::series::Elementary;
use crate::number::{Exponent, Number, TooLarge, raised_digit};

/// A number times bases to rational powers, in the order in which they were written.
/// No base stands twice and no power is 0.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Product {
    /// The exact factor, with its sign.
    pub number: Number,
    /// The rest.
    pub factors: Vec<Factor>,
}

/// A base to a power.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Factor {
    /// What is raised.
    pub base: Base,
    /// To what.
    pub power: Exponent,
}

/// What a product may hold.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub enum Base {
    /// A scale, a constant or a function of constants.
    Symbol(Symbol),
    /// A coordinate.
    Coordinate(CoordinateId),
    /// A field.
    Field(FieldId),
    /// A derivative.
    Derivative(Box<Derivative>),
    /// The amount of a product of fields.
    Absolute(Box<Factors>),
    /// An expression with a size of its own.
    Sized(Arc<Sized>),
    /// The average of a product that holds fluctuations.
    Mean(Box<Factors>),
    /// A function of something that varies. It stands only on the way to a term: there
    /// it is expanded about a constant level.
    Function(Box<Applied>),
}

/// The factors of a product without a number.
pub type Factors = Vec<Factor>;

/// A derivative that stays as it is.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Derivative {
    /// What is differentiated: one base, or several that vary alike.
    pub operand: Factors,
    /// Coordinates with their orders, the innermost first.
    pub by: Vec<(CoordinateId, u32)>,
}

/// A function of one product, `sin(phi)`.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Applied {
    /// The function.
    pub function: Elementary,
    /// Its argument.
    pub argument: Product,
}

/// An expression with a size of its own, `(A + B ~ D)`.
#[derive(Debug, Clone)]
pub struct Sized {
    /// Its text, brackets included.
    pub text: String,
    /// Its size.
    pub size: Size,
    /// The sizes of its parts, the largest of which it must not exceed; none where they
    /// cannot be told.
    pub parts: Vec<Monomial>,
    /// How it varies, over the shortest of its parts' lengths.
    pub variations: Vec<Variation>,
    /// The fields in it.
    pub fields: Vec<FieldId>,
    /// Where it stands, so that two of them are told apart.
    pub place: u32,
}

impl PartialEq for Sized {
    fn eq(&self, other: &Sized) -> bool {
        self.cmp(other) == std::cmp::Ordering::Equal
    }
}

impl Eq for Sized {}

impl PartialOrd for Sized {
    fn partial_cmp(&self, other: &Sized) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}

impl Ord for Sized {
    fn cmp(&self, other: &Sized) -> std::cmp::Ordering {
        (&self.text, self.place).cmp(&(&other.text, other.place))
    }
}

impl Product {
    /// A pure number.
    pub fn number(number: Number) -> Product {
        Product {
            number,
            factors: Vec::new(),
        }
    }

    /// One base.
    pub fn base(base: Base) -> Product {
        Product {
            number: Number::one(),
            factors: vec![Factor {
                base,
                power: Exponent::ONE,
            }],
        }
    }

    /// The product; a base of both stands where it stood first.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn times(&self, other: &Product) -> Result<Product, TooLarge> {
        let mut product = Product {
            number: self.number.times(&other.number)?,
            factors: self.factors.clone(),
        };
        for factor in &other.factors {
            product.put(factor)?;
        }
        Ok(product)
    }

    fn put(&mut self, factor: &Factor) -> Result<(), TooLarge> {
        let present = self
            .factors
            .iter()
            .position(|found| found.base == factor.base);
        match present {
            None => self.factors.push(factor.clone()),
            Some(idx) => {
                let power = self.factors[idx].power.plus(factor.power)?;
                if power.is_zero() {
                    self.factors.remove(idx);
                } else {
                    self.factors[idx].power = power;
                }
            }
        }
        Ok(())
    }

    /// The power. The number must not be 0 where the exponent is negative.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn power(&self, exponent: Exponent) -> Result<Product, TooLarge> {
        if exponent.is_zero() {
            return Ok(Product::number(Number::one()));
        }
        let factors = self
            .factors
            .iter()
            .map(|factor| {
                Ok(Factor {
                    base: factor.base.clone(),
                    power: factor.power.times(exponent)?,
                })
            })
            .collect::<Result<_, TooLarge>>()?;
        Ok(Product {
            number: self.number.power(exponent)?,
            factors,
        })
    }

    /// The same with the other sign.
    #[must_use]
    pub fn negated(&self) -> Product {
        Product {
            number: self.number.negated(),
            factors: self.factors.clone(),
        }
    }

    /// Whether both are the same but for their numbers, the order of their factors and
    /// that of the coordinates of a derivative.
    pub fn is_like(&self, other: &Product) -> bool {
        self.factors == other.factors || self.likeness() == other.likeness()
    }

    /// Its factors in an order of their own: equal for like products.
    pub fn likeness(&self) -> Factors {
        canonical(&self.factors)
    }

    /// The number and symbols of a monomial.
    pub fn constants(monomial: &Monomial) -> Product {
        let factors = monomial.powers().iter().map(|(symbol, power)| Factor {
            base: Base::Symbol(symbol.clone()),
            power: *power,
        });
        Product {
            number: monomial.number.clone(),
            factors: factors.collect(),
        }
    }

    /// The same with derived scales and constants replaced.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn resolved(&self, quantities: &Quantities) -> Result<Product, TooLarge> {
        let mut found = Product::number(self.number.clone());
        for factor in &self.factors {
            let next = match &factor.base {
                Base::Symbol(symbol) => {
                    let size = quantities.symbol_size(symbol).resolved;
                    Product::constants(&size.power(factor.power)?)
                }
                Base::Coordinate(_)
                | Base::Field(_)
                | Base::Derivative(_)
                | Base::Absolute(_)
                | Base::Sized(_)
                | Base::Mean(_)
                | Base::Function(_) => Product {
                    number: Number::one(),
                    factors: vec![factor.clone()],
                },
            };
            found = found.times(&next)?;
        }
        Ok(found)
    }

    /// Its size: number times sizes of its factors.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn size(&self, quantities: &Quantities) -> Result<Size, TooLarge> {
        let size = factors_size(&self.factors, quantities)?;
        let number = Monomial::number(self.number.clone());
        Ok(Size {
            written: size.written.times(&number)?,
            resolved: size.resolved.times(&number)?,
        })
    }

    /// All fields in it, in order, each once.
    pub fn fields(&self) -> Vec<FieldId> {
        let mut fields = Vec::new();
        collect_fields(&self.factors, &mut fields);
        fields
    }

    /// All derivatives in it, outermost ones first.
    pub fn derivatives(&self) -> Vec<&Derivative> {
        let mut found = Vec::new();
        collect_derivatives(&self.factors, &mut found);
        found
    }
}

fn canonical(factors: &[Factor]) -> Factors {
    let mut factors: Factors = factors
        .iter()
        .map(|factor| Factor {
            base: canonical_base(&factor.base),
            power: factor.power,
        })
        .collect();
    factors.sort();
    factors
}

fn canonical_base(base: &Base) -> Base {
    match base {
        Base::Derivative(derivative) => {
            let mut by = derivative.by.clone();
            by.sort_unstable();
            Base::Derivative(Box::new(Derivative {
                operand: canonical(&derivative.operand),
                by,
            }))
        }
        Base::Absolute(inside) => Base::Absolute(Box::new(canonical(inside))),
        Base::Mean(inside) => Base::Mean(Box::new(canonical(inside))),
        Base::Function(applied) => Base::Function(Box::new(Applied {
            function: applied.function,
            argument: Product {
                number: applied.argument.number.clone(),
                factors: canonical(&applied.argument.factors),
            },
        })),
        Base::Symbol(_) | Base::Coordinate(_) | Base::Field(_) | Base::Sized(_) => base.clone(),
    }
}

fn collect_fields(factors: &[Factor], fields: &mut Vec<FieldId>) {
    for factor in factors {
        match &factor.base {
            Base::Symbol(_) | Base::Coordinate(_) => {}
            Base::Field(id) => push_new(fields, *id),
            Base::Derivative(derivative) => collect_fields(&derivative.operand, fields),
            Base::Absolute(inside) => collect_fields(inside, fields),
            Base::Sized(sized) => sized.fields.iter().for_each(|id| push_new(fields, *id)),
            Base::Mean(inside) => collect_fields(inside, fields),
            Base::Function(applied) => collect_fields(&applied.argument.factors, fields),
        }
    }
}

fn push_new(fields: &mut Vec<FieldId>, id: FieldId) {
    if !fields.contains(&id) {
        fields.push(id);
    }
}

fn collect_derivatives<'a>(factors: &'a [Factor], found: &mut Vec<&'a Derivative>) {
    for factor in factors {
        match &factor.base {
            Base::Symbol(_) | Base::Coordinate(_) | Base::Field(_) | Base::Sized(_) => {}
            Base::Derivative(derivative) => {
                found.push(derivative);
                collect_derivatives(&derivative.operand, found);
            }
            Base::Absolute(inside) | Base::Mean(inside) => collect_derivatives(inside, found),
            Base::Function(applied) => collect_derivatives(&applied.argument.factors, found),
        }
    }
}

/// The size of factors, without a number.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn factors_size(factors: &[Factor], quantities: &Quantities) -> Result<Size, TooLarge> {
    let mut size = Size {
        written: Monomial::one(),
        resolved: Monomial::one(),
    };
    for factor in factors {
        let base = base_size(&factor.base, quantities)?;
        size.written = size.written.times(&base.written.power(factor.power)?)?;
        size.resolved = size.resolved.times(&base.resolved.power(factor.power)?)?;
    }
    Ok(size)
}

fn base_size(base: &Base, quantities: &Quantities) -> Result<Size, TooLarge> {
    match base {
        Base::Symbol(symbol) => Ok(quantities.symbol_size(symbol)),
        Base::Coordinate(id) => Ok(quantities.coordinate(*id).size.clone()),
        Base::Field(id) => Ok(quantities.field(*id).size.clone()),
        Base::Derivative(derivative) => calculus::derivative_size(derivative, quantities),
        Base::Absolute(inside) | Base::Mean(inside) => factors_size(inside, quantities),
        Base::Sized(sized) => Ok(sized.size.clone()),
        // Its level is told where it is expanded.
        Base::Function(_) => Ok(Size {
            written: Monomial::one(),
            resolved: Monomial::one(),
        }),
    }
}

/// How the program spells what it makes: with the names of one model.
#[derive(Debug, Clone, Copy)]
pub struct Speller<'a> {
    /// Names of the scales and constants.
    pub symbols: &'a [String],
    /// Names of fields and coordinates.
    pub quantities: &'a Quantities,
    /// `∂u/∂x` rather than `d_x(u)`.
    pub with_partials: bool,
}

impl Speller<'_> {
    /// A product without its sign: `2*u*∂u/∂x/rho`.
    pub fn product(&self, product: &Product) -> String {
        let over: Vec<String> = product
            .factors
            .iter()
            .filter(|factor| factor.power.is_negative())
            .map(|factor| self.factor(&factor.base, factor.power.negated()))
            .collect();
        let mut above: Vec<String> = product
            .factors
            .iter()
            .filter(|factor| !factor.power.is_negative())
            .map(|factor| self.factor(&factor.base, factor.power))
            .collect();
        let number = product.number.abs();
        if !number.is_one() || above.is_empty() {
            above.insert(0, number.to_string());
        }
        let mut text = above.join("*");
        for part in over {
            text.push('/');
            text.push_str(&part);
        }
        text
    }

    /// A product with its sign.
    pub fn signed(&self, product: &Product) -> String {
        let sign = if product.number.is_negative() {
            "-"
        } else {
            ""
        };
        format!("{sign}{}", self.product(product))
    }

    fn factor(&self, base: &Base, power: Exponent) -> String {
        let text = match base {
            Base::Symbol(symbol) => self.symbol(symbol).to_owned(),
            Base::Coordinate(id) => self.quantities.coordinate(*id).name.clone(),
            Base::Field(id) => self.quantities.field(*id).name.clone(),
            Base::Derivative(derivative) => self.derivative(derivative),
            Base::Absolute(inside) => format!("abs({})", self.factors(inside)),
            Base::Sized(sized) => sized.text.clone(),
            Base::Mean(inside) => format!("mean({})", self.factors(inside)),
            Base::Function(applied) => applied.function.text(&self.signed(&applied.argument)),
        };
        if power == Exponent::ONE {
            return text;
        }
        let bracket = self.with_partials && matches!(base, Base::Derivative(_));
        let text = if bracket { format!("({text})") } else { text };
        if power.is_whole() {
            format!("{text}^{power}")
        } else {
            format!("{text}^({power})")
        }
    }

    /// The name of a symbol.
    pub fn symbol<'s>(&'s self, symbol: &'s Symbol) -> &'s str {
        match symbol {
            Symbol::Declared(id) => &self.symbols[id.idx()],
            Symbol::Function(function) => &function.text,
        }
    }

    fn factors(&self, factors: &[Factor]) -> String {
        self.product(&Product {
            number: Number::one(),
            factors: factors.to_vec(),
        })
    }

    fn derivative(&self, derivative: &Derivative) -> String {
        let inside = self.factors(&derivative.operand);
        let name = |id: &CoordinateId| self.quantities.coordinate(*id).name.as_str();
        if !self.with_partials {
            return derivative
                .by
                .iter()
                .fold(inside, |text, (id, order)| match order {
                    1 => format!("d_{}({text})", name(id)),
                    order => format!("d_{}^{order}({text})", name(id)),
                });
        }
        let is_name = matches!(
            derivative.operand.as_slice(),
            [Factor { base: Base::Field(_) | Base::Coordinate(_), power }] if *power == Exponent::ONE
        );
        let total: u32 = derivative.by.iter().map(|(_, order)| order).sum();
        let below: String = derivative
            .by
            .iter()
            .rev()
            .map(|(id, order)| format!("∂{}{}", name(id), superscript(*order)))
            .collect();
        if is_name {
            format!("∂{}{inside}/{below}", superscript(total))
        } else {
            format!("∂{}({inside})/{below}", superscript(total))
        }
    }

    /// A monomial of scales as the language writes it: `rho*f*U*L`, `dP/(rho*L)`.
    pub fn monomial(&self, monomial: &Monomial) -> String {
        self.quotient(&monomial.number, &symbol_factors(monomial))
    }

    /// The size of a product in the user's own scales, in the order of its factors:
    /// `f*U` for `f*v`.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn scale(&self, product: &Product) -> Result<String, TooLarge> {
        let mut scales = Product::number(product.number.abs());
        for factor in &product.factors {
            let size = factors_size(std::slice::from_ref(factor), self.quantities)?.written;
            scales = scales.times(&Product {
                number: size.number.abs(),
                factors: symbol_factors(&size),
            })?;
        }
        Ok(self.quotient(&scales.number, &scales.factors))
    }

    /// A number times factors, those below the line together.
    fn quotient(&self, number: &Number, factors: &[Factor]) -> String {
        let side = |is_below: bool| {
            factors
                .iter()
                .filter(move |factor| factor.power.is_negative() == is_below)
                .map(move |factor| {
                    let power = if is_below {
                        factor.power.negated()
                    } else {
                        factor.power
                    };
                    self.factor(&factor.base, power)
                })
        };
        let mut above: Vec<String> = side(false).collect();
        let below: Vec<String> = side(true).collect();
        if !number.is_one() || above.is_empty() {
            above.insert(0, number.to_string());
        }
        let above = above.join("*");
        match below.as_slice() {
            [] => above,
            [single] => format!("{above}/{single}"),
            several => format!("{above}/({})", several.join("*")),
        }
    }
}

/// The symbols of a monomial as factors, in order.
pub fn symbol_factors(monomial: &Monomial) -> Vec<Factor> {
    monomial
        .powers()
        .iter()
        .map(|(symbol, power)| Factor {
            base: Base::Symbol(symbol.clone()),
            power: *power,
        })
        .collect()
}

/// An order as superscript; nothing for 1.
pub fn superscript(order: u32) -> String {
    if order == 1 {
        return String::new();
    }
    order.to_string().chars().map(raised_digit).collect()
}
