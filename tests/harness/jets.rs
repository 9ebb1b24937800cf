//! Values of expressions with all their derivatives at one place: Taylor polynomials in four
//! coordinates, for comparing forms of vector calculus that are equal but spelt otherwise.

use std::collections::BTreeMap;

use scalewright::model::{Meaning, Model, frames};
use scalewright::number::rational_to_f64;
use scalewright::syntax::ast::{Expr, ExprKind, Name, Operator, Sign};

/// Powers of the displacements along the coordinates.
type Powers = [u32; 4];

/// The highest total power that is kept: as many derivatives may be taken.
const ORDER: u32 = 4;

/// A quantity around one place.
#[derive(Debug, Clone, Default)]
pub(crate) struct Jet(BTreeMap<Powers, f64>);

impl Jet {
    pub(crate) fn number(value: f64) -> Jet {
        Jet(BTreeMap::from([([0; 4], value)]))
    }

    /// The value at the place.
    pub(crate) fn value(&self) -> f64 {
        self.0.get(&[0; 4]).copied().unwrap_or(0.0)
    }

    fn coordinate(value: f64, axis: usize) -> Jet {
        let mut jet = Jet::number(value);
        let mut powers = [0; 4];
        powers[axis] = 1;
        jet.0.insert(powers, 1.0);
        jet
    }

    fn plus(mut self, other: &Jet, factor: f64) -> Jet {
        for (powers, value) in &other.0 {
            *self.0.entry(*powers).or_default() += factor * value;
        }
        self
    }

    fn times(&self, other: &Jet) -> Jet {
        let mut product = Jet::default();
        for (a, x) in &self.0 {
            for (b, y) in &other.0 {
                let powers = std::array::from_fn(|axis| a[axis] + b[axis]);
                if powers.iter().sum::<u32>() <= ORDER {
                    *product.0.entry(powers).or_default() += x * y;
                }
            }
        }
        product
    }

    fn derivative(&self, axis: usize) -> Jet {
        let steps = self.0.iter().filter(|(powers, _)| powers[axis] > 0);
        let lowered = steps.map(|(powers, value)| {
            let mut lower = *powers;
            lower[axis] -= 1;
            (lower, value * f64::from(powers[axis]))
        });
        Jet(lowered.collect())
    }

    /// A function whose derivatives at the value are given, the function itself first.
    fn applied(&self, derivatives: impl Fn(u32) -> f64) -> Jet {
        let mut step = self.clone();
        step.0.remove(&[0; 4]);
        let (mut power, mut factorial, mut sum) = (Jet::number(1.0), 1.0, Jet::default());
        for order in 0..=ORDER {
            factorial *= f64::from(order.max(1));
            sum = sum.plus(&power, derivatives(order) / factorial);
            power = power.times(&step);
        }
        sum
    }

    fn reciprocal(&self) -> Jet {
        let value = self.value();
        self.applied(|order| {
            let factorial: f64 = (1..=order).map(f64::from).product();
            factorial * (-1.0_f64).powi(order as i32) / value.powi(order as i32 + 1)
        })
    }

    fn sine(&self, quarter_turns: u32) -> Jet {
        let value = self.value();
        self.applied(|order| {
            (value + f64::from(order + quarter_turns) * std::f64::consts::FRAC_PI_2).sin()
        })
    }

    fn whole_power(&self, power: i64) -> Jet {
        let base = if power < 0 {
            self.reciprocal()
        } else {
            self.clone()
        };
        (0..power.abs()).fold(Jet::number(1.0), |product, _| product.times(&base))
    }
}

/// All names of a model with values around one place, drawn at random but the same each time.
pub(crate) struct Place<'a> {
    model: &'a Model,
    values: BTreeMap<String, Jet>,
}

impl<'a> Place<'a> {
    /// A place in the frame of a model. Coordinates stand in order of declaration.
    pub(crate) fn new(model: &'a Model) -> Place<'a> {
        let mut draw = Draw(7);
        let mut values = BTreeMap::new();
        for (axis, info) in model.coordinates.iter().enumerate() {
            let value = 0.4 + 0.7 * draw.next();
            values.insert(info.name.text.clone(), Jet::coordinate(value, axis));
        }
        for info in &model.fields {
            values.insert(info.name.text.clone(), draw.field());
        }
        for info in &model.symbols {
            values.insert(info.name.clone(), Jet::number(0.5 + draw.next()));
        }
        Place { model, values }
    }

    /// The parts of a sum by process; parts without a name are together under no name.
    pub(crate) fn by_process(&self, expr: &Expr) -> BTreeMap<String, f64> {
        let mut parts = BTreeMap::new();
        self.collect(expr, 1.0, "", &mut parts);
        parts
    }

    fn collect(&self, expr: &Expr, sign: f64, process: &str, parts: &mut BTreeMap<String, f64>) {
        match &expr.kind {
            ExprKind::Sum(terms) => terms.iter().for_each(|(own, term)| {
                let own = if *own == Sign::Plus { sign } else { -sign };
                self.collect(term, own, process, parts);
            }),
            ExprKind::Bracket(inside) => self.collect(inside, sign, process, parts),
            ExprKind::Negate(inside) => self.collect(inside, -sign, process, parts),
            ExprKind::As { expr, process } => self.collect(expr, sign, &process.text, parts),
            ExprKind::Call {
                function,
                arguments,
                ..
            } if function.text == "D_t" => {
                let [tendency, advection] = self.material(&self.jet(&arguments[0]));
                *parts.entry("tendency".to_owned()).or_default() += sign * tendency.value();
                *parts.entry("advection".to_owned()).or_default() += sign * advection.value();
            }
            _ => *parts.entry(process.to_owned()).or_default() += sign * self.jet(expr).value(),
        }
    }

    /// What an expression is around the place.
    pub(crate) fn jet(&self, expr: &Expr) -> Jet {
        match &expr.kind {
            ExprKind::Number(number) => Jet::number(rational_to_f64(&number.value)),
            ExprKind::Name(name) => self.values[name].clone(),
            ExprKind::Sum(terms) => terms.iter().fold(Jet::default(), |sum, (sign, term)| {
                sum.plus(
                    &self.jet(term),
                    if *sign == Sign::Plus { 1.0 } else { -1.0 },
                )
            }),
            ExprKind::Product(factors) => self.product(factors),
            ExprKind::Negate(inside) => Jet::default().plus(&self.jet(inside), -1.0),
            ExprKind::Bracket(inside) => self.jet(inside),
            ExprKind::As { expr, .. } => self.jet(expr),
            ExprKind::Power { base, exponent } => self
                .jet(base)
                .whole_power(self.jet(exponent).value() as i64),
            ExprKind::Derivative { operand, by } => {
                let by = by.iter().map(|(name, order)| (name.text.as_str(), *order));
                self.differentiated(self.jet(operand), by)
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(function, order.unwrap_or(1), &self.jet(&arguments[0])),
            other => panic!("no value: {other:?}"),
        }
    }

    fn product(&self, factors: &[(Operator, Expr)]) -> Jet {
        factors
            .iter()
            .fold(Jet::number(1.0), |product, (operator, factor)| {
                let factor = self.jet(factor);
                match operator {
                    Operator::Times => product.times(&factor),
                    Operator::Over => product.times(&factor.reciprocal()),
                }
            })
    }

    fn call(&self, function: &Name, order: u32, argument: &Jet) -> Jet {
        let power = |jet: Jet| jet.whole_power(i64::from(order));
        match function.text.as_str() {
            "sin" => power(argument.sine(0)),
            "cos" => power(argument.sine(1)),
            "tan" => power(argument.sine(0).times(&argument.sine(1).reciprocal())),
            "D_t" => {
                let [tendency, advection] = self.material(argument);
                tendency.plus(&advection, 1.0)
            }
            name => {
                let along = name.strip_prefix("d_").expect("a derivative is d_x");
                self.differentiated(argument.clone(), std::iter::once((along, order)))
            }
        }
    }

    fn differentiated<'n>(&self, mut jet: Jet, by: impl Iterator<Item = (&'n str, u32)>) -> Jet {
        for (name, order) in by {
            let coordinates = &self.model.coordinates;
            let axis = coordinates.iter().position(|info| info.name.text == name);
            let axis = axis.expect("a coordinate");
            jet = (0..order).fold(jet, |jet, _| jet.derivative(axis));
        }
        jet
    }

    /// Tendency and advection.
    fn material(&self, carried: &Jet) -> [Jet; 2] {
        let along = |name: &str| self.differentiated(carried.clone(), std::iter::once((name, 1)));
        let velocity = self.model.velocity.as_ref().expect("a velocity");
        let mut advection = Jet::default();
        for (field, coordinate) in &velocity.components {
            let mut step = self.values[&field.text].times(&along(&coordinate.text));
            let Some(Meaning::Coordinate(id)) = self.model.meaning(&coordinate.text, None) else {
                panic!("no coordinate: {coordinate:?}");
            };
            if let Some(metric) = frames::metric(id, self.model, coordinate.span) {
                step = step.times(&self.jet(&metric));
            }
            advection = advection.plus(&step, 1.0);
        }
        [along("t"), advection]
    }
}

/// Numbers between 0 and 1 that look random.
struct Draw(u64);

impl Draw {
    fn next(&mut self) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// A field with every derivative that is kept.
    fn field(&mut self) -> Jet {
        let mut jet = Jet::default();
        for index in 0..(ORDER + 1).pow(4) {
            let powers: Powers =
                std::array::from_fn(|axis| index / (ORDER + 1).pow(axis as u32) % (ORDER + 1));
            if powers.iter().sum::<u32>() <= ORDER {
                jet.0.insert(powers, 2.0 * self.next() - 1.0);
            }
        }
        jet
    }
}
