//! The functions of one argument that expressions may use, over a [`Range`]: extrema
//! inside the range count, and a pole or a place outside the domain is an error.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use super::range::{Range, RangeError};

/// A function of one dimensionless argument (of `Sqrt` and `Abs`: any).
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Function {
    /// `sqrt`: the square root.
    Sqrt,
    /// `abs`: the amount.
    Abs,
    /// `exp`: e to the power.
    Exp,
    /// `log`: the natural logarithm.
    Log,
    /// `log10`: the logarithm to the base 10.
    Log10,
    /// `sin`, of an angle in rad.
    Sin,
    /// `cos`, of an angle in rad.
    Cos,
    /// `tan`, of an angle in rad.
    Tan,
    /// `asin`, in rad.
    Asin,
    /// `acos`, in rad.
    Acos,
    /// `atan`, in rad.
    Atan,
    /// `sinh`.
    Sinh,
    /// `cosh`.
    Cosh,
    /// `tanh`.
    Tanh,
}

/// How far beyond 1 the argument of `asin` and `acos` may have come by rounding.
const ROUNDING: f64 = 1e-12;

impl Function {
    /// All functions.
    pub const ALL: [Function; 14] = [
        Function::Sqrt,
        Function::Abs,
        Function::Exp,
        Function::Log,
        Function::Log10,
        Function::Sin,
        Function::Cos,
        Function::Tan,
        Function::Asin,
        Function::Acos,
        Function::Atan,
        Function::Sinh,
        Function::Cosh,
        Function::Tanh,
    ];

    /// Its name in the language.
    pub fn name(self) -> &'static str {
        match self {
            Function::Sqrt => "sqrt",
            Function::Abs => "abs",
            Function::Exp => "exp",
            Function::Log => "log",
            Function::Log10 => "log10",
            Function::Sin => "sin",
            Function::Cos => "cos",
            Function::Tan => "tan",
            Function::Asin => "asin",
            Function::Acos => "acos",
            Function::Atan => "atan",
            Function::Sinh => "sinh",
            Function::Cosh => "cosh",
            Function::Tanh => "tanh",
        }
    }

    /// The function of this name.
    pub fn named(name: &str) -> Option<Function> {
        Function::ALL
            .into_iter()
            .find(|function| function.name() == name)
    }

    /// Its values over a range.
    ///
    /// # Errors
    /// [`RangeError::OutOfDomain`] where it is not defined over the whole range,
    /// [`RangeError::DividesByZero`] for a pole of `tan` in it, [`RangeError::TooLarge`].
    pub fn over(self, argument: &Range) -> Result<Range, RangeError> {
        let in_domain = |fits: bool| fits.then_some(()).ok_or(RangeError::OutOfDomain);
        let values = match self {
            Function::Sqrt => {
                in_domain(argument.low >= 0.0)?;
                argument.mapped(f64::sqrt)
            }
            Function::Abs => argument.abs(),
            Function::Exp => argument.mapped(f64::exp),
            Function::Log => {
                in_domain(argument.low > 0.0)?;
                argument.mapped(f64::ln)
            }
            Function::Log10 => {
                in_domain(argument.low > 0.0)?;
                argument.mapped(f64::log10)
            }
            Function::Sin => wave(argument, f64::sin, FRAC_PI_2),
            Function::Cos => wave(argument, f64::cos, 0.0),
            Function::Tan => tangent(argument)?,
            Function::Asin => arc_argument(argument)?.mapped(f64::asin),
            Function::Acos => arc_argument(argument)?.mapped_falling(f64::acos),
            Function::Atan => argument.mapped(f64::atan),
            Function::Sinh => argument.mapped(f64::sinh),
            Function::Cosh => argument.mapped_even(f64::cosh),
            Function::Tanh => argument.mapped(f64::tanh),
        };
        values.checked()
    }
}

/// Sine or cosine, which has its maximum 1 at `crest` and its minimum half a turn on.
fn wave(argument: &Range, function: fn(f64) -> f64, crest: f64) -> Range {
    let (first, last) = (function(argument.low), function(argument.high));
    let low = if reaches(argument, crest + PI, TAU) {
        -1.0
    } else {
        first.min(last)
    };
    let high = if reaches(argument, crest, TAU) {
        1.0
    } else {
        first.max(last)
    };
    Range {
        low,
        nominal: function(argument.nominal),
        high,
    }
}

fn tangent(argument: &Range) -> Result<Range, RangeError> {
    // At the doubles around a pole the cosine is rounding error and no more.
    let at_pole = |angle: f64| angle.cos().abs() <= 4.0 * f64::EPSILON * angle.abs().max(1.0);
    let ends_at_pole = at_pole(argument.low) || at_pole(argument.high);
    if ends_at_pole || reaches(argument, FRAC_PI_2, PI) {
        return Err(RangeError::DividesByZero);
    }
    Ok(argument.mapped(f64::tan))
}

/// Whether `phase + k * period` lies in the range for some whole `k`.
fn reaches(argument: &Range, phase: f64, period: f64) -> bool {
    let first = ((argument.low - phase) / period).ceil();
    phase + first * period <= argument.high
}

/// The argument of an arc sine or cosine, between -1 and 1.
fn arc_argument(argument: &Range) -> Result<Range, RangeError> {
    let bound = 1.0 + ROUNDING;
    if argument.low < -bound || argument.high > bound {
        return Err(RangeError::OutOfDomain);
    }
    Ok(argument.mapped(|value| value.clamp(-1.0, 1.0)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn range(low: f64, nominal: f64, high: f64) -> Range {
        Range::new(low, nominal, high).unwrap()
    }

    #[test]
    fn waves_reach_their_extrema_inside_the_range() {
        let up = Function::Sin.over(&range(1.0, 1.2, 2.0)).unwrap();
        assert_eq!(up, range(1f64.sin(), 1.2f64.sin(), 1.0));
        let both = Function::Sin.over(&range(0.0, 1.0, 7.0)).unwrap();
        assert_eq!((both.low, both.high), (-1.0, 1.0));
        let falling = Function::Cos.over(&range(0.5, 1.0, 1.5)).unwrap();
        assert_eq!((falling.low, falling.high), (1.5f64.cos(), 0.5f64.cos()));
        let across = Function::Cos.over(&range(-0.5, 0.1, 1.0)).unwrap();
        assert_eq!((across.low, across.high), (1f64.cos(), 1.0));
        let below = Function::Cos.over(&range(-4.0, -3.0, -2.0)).unwrap();
        assert_eq!((below.low, below.high), (-1.0, 2f64.cos()));
    }

    #[test]
    fn the_tangent_has_poles() {
        let right_angle = Range::exact(FRAC_PI_2);
        assert_eq!(
            Function::Tan.over(&right_angle),
            Err(RangeError::DividesByZero)
        );
        let three = Range::exact(1.5 * PI);
        assert_eq!(Function::Tan.over(&three), Err(RangeError::DividesByZero));
        let across = range(1.0, 1.1, 2.0);
        assert_eq!(Function::Tan.over(&across), Err(RangeError::DividesByZero));
        let between = range(-1.0, 0.0, 1.0);
        assert_eq!(
            Function::Tan.over(&between),
            Ok(range(-(1f64.tan()), 0.0, 1f64.tan()))
        );
    }

    #[test]
    fn places_outside_the_domain_are_errors() {
        for (function, argument) in [
            (Function::Sqrt, range(-1.0, 1.0, 2.0)),
            (Function::Log, range(0.0, 1.0, 2.0)),
            (Function::Log10, Range::exact(-1.0)),
            (Function::Asin, range(0.0, 1.0, 1.1)),
            (Function::Acos, range(-1.1, 0.0, 1.0)),
        ] {
            assert_eq!(function.over(&argument), Err(RangeError::OutOfDomain));
        }
        let rounded = Range::exact(1.0 + f64::EPSILON);
        assert_eq!(Function::Acos.over(&rounded), Ok(Range::exact(0.0)));
        let much = Range::exact(1000.0);
        assert_eq!(Function::Exp.over(&much), Err(RangeError::TooLarge));
    }

    #[test]
    fn falling_and_even_functions_turn_the_ends() {
        let acos = Function::Acos.over(&range(-0.5, 0.0, 1.0)).unwrap();
        assert_eq!((acos.low, acos.high), (0.0, (-0.5f64).acos()));
        let cosh = Function::Cosh.over(&range(-2.0, 1.0, 1.0)).unwrap();
        assert_eq!((cosh.low, cosh.high), (1.0, 2f64.cosh()));
    }

    proptest! {
        #[test]
        fn results_hold_the_values_at_all_points(
            low in -20.0..20.0, width in 0.0..8.0, nominal in 0.0..=1.0, inside in 0.0..=1.0,
        ) {
            let argument = range(low, low + width * nominal, low + width);
            for function in Function::ALL {
                let Ok(values) = function.over(&argument) else {
                    continue;
                };
                let point = Range::exact(low + width * inside);
                let value = function.over(&point).unwrap().nominal;
                let slack = 1e-12 * value.abs().max(1.0);
                let is_held = values.low - slack <= value && value <= values.high + slack;
                prop_assert!(is_held, "{} of {:?}", function.name(), argument);
            }
        }
    }

    #[test]
    fn every_function_is_found_by_its_name() {
        for function in Function::ALL {
            assert_eq!(Function::named(function.name()), Some(function));
        }
        assert_eq!(Function::named("sine"), None);
    }
}
