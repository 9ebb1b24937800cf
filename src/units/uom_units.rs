//! What the crate `uom` knows exactly: the units whose factor, read as the decimal that
//! prints it, is the defined one. Dimension, factor, offset and name come from `uom` at
//! run time; the symbols and the leave to take prefixes are ours.
//!
//! Factors that `uom` rounds (pound, knot, inch of mercury, ...) are in `own_units`.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{Pow, Zero};
use uom::typenum::Integer;
use uom::{ConstantOp, Conversion};

use super::dimension::Dimension;
use super::table::UnitInfo;
use crate::number::Number;

/// Where these definitions stand.
const SOURCE: &str = "crate uom, after NIST SP 811 and the SI Brochure";

/// The dimension of a quantity of `uom`.
pub(super) fn dimension_of<D: uom::si::Dimension + ?Sized>() -> Dimension {
    let exponents = [
        D::M::to_i64(),
        D::L::to_i64(),
        D::T::to_i64(),
        D::I::to_i64(),
        D::Th::to_i64(),
        D::N::to_i64(),
        D::J::to_i64(),
    ];
    Dimension::from_whole(exponents).expect("the exponents of uom's quantities are small")
}

macro_rules! uom_units {
    ($($quantity:ident: $unit:ident $symbols:literal $prefixes:ident;)+) => {
        vec![$(unit_info::<
            uom::si::$quantity::Dimension,
            uom::si::$quantity::$unit,
        >($symbols, stringify!($prefixes) == "prefixes")),+]
    };
}

/// The units, each once, with its symbols.
#[rustfmt::skip]
pub(super) fn units() -> Vec<UnitInfo> {
    // quantity: unit, our symbols (the first is the one shown), whether prefixes stand before it.
    uom_units! {
        mass:                      kilogram           "kg"            plain;
        mass:                      gram               "g"             prefixes;
        length:                    meter              "m"             prefixes;
        time:                      second             "s"             prefixes;
        electric_current:          ampere             "A"             prefixes;
        thermodynamic_temperature: kelvin             "K"             prefixes;
        amount_of_substance:       mole               "mol"           prefixes;
        luminous_intensity:        candela            "cd"            prefixes;

        frequency:                 hertz              "Hz"            prefixes;
        force:                     newton             "N"             prefixes;
        pressure:                  pascal             "Pa"            prefixes;
        energy:                    joule              "J"             prefixes;
        power:                     watt               "W"             prefixes;
        electric_charge:           coulomb            "C"             prefixes;
        electric_potential:        volt               "V"             prefixes;
        capacitance:               farad              "F"             prefixes;
        electrical_resistance:     ohm                "ohm \u{3a9} \u{2126}" prefixes;
        electrical_conductance:    siemens            "S"             prefixes;
        magnetic_flux:             weber              "Wb"            prefixes;
        magnetic_flux_density:     tesla              "T"             prefixes;
        inductance:                henry              "H"             prefixes;
        illuminance:               lux                "lx"            prefixes;
        radioactivity:             becquerel          "Bq"            prefixes;
        catalytic_activity:        katal              "kat"           prefixes;
        angle:                     radian             "rad"           prefixes;
        solid_angle:               steradian          "sr"            prefixes;
        thermodynamic_temperature: degree_celsius     "degC °C"       plain;

        time:                      minute             "min"           plain;
        time:                      hour               "h"             plain;
        time:                      day                "d day"         plain;
        area:                      hectare            "ha"            plain;
        volume:                    liter              "L l"           prefixes;
        mass:                      ton                "t"             prefixes;
        length:                    astronomical_unit  "au"            plain;
        energy:                    electronvolt       "eV"            prefixes;

        length:                    angstrom           "angstrom \u{c5} \u{212b}" plain;
        length:                    micron             "micron"        plain;
        length:                    fermi              "fermi"         plain;
        length:                    inch               "inch"          plain;
        length:                    foot               "ft"            plain;
        length:                    yard               "yd"            plain;
        length:                    mile               "mi"            plain;
        length:                    mil                "mil"           plain;
        length:                    nautical_mile      "nmi"           plain;
        area:                      barn               "barn"          plain;
        volume:                    gallon_imperial    "galUK"         plain;
        mass:                      grain              "gr"            plain;
        mass:                      carat              "ct"            plain;
        velocity:                  mile_per_hour      "mph"           plain;
        acceleration:              galileo            "Gal"           prefixes;
        acceleration:              standard_gravity   "g_n"           plain;
        force:                     dyne               "dyn"           plain;
        force:                     kilogram_force     "kgf"           plain;
        pressure:                  bar                "bar"           prefixes;
        pressure:                  atmosphere         "atm"           plain;
        pressure:                  atmosphere_technical "at"          plain;
        pressure:                  millimeter_of_water "mmH2O"        plain;
        pressure:                  dyne_per_square_centimeter "Ba"    plain;
        energy:                    erg                "erg"           plain;
        energy:                    calorie            "cal"           prefixes;
        energy:                    calorie_it         "cal_IT"        plain;
        energy:                    watt_hour          "Wh"            prefixes;
        energy:                    ton_tnt            "tTNT"          plain;
        dynamic_viscosity:         poise              "P"             prefixes;
        kinematic_viscosity:       stokes             "St"            prefixes;
        magnetic_flux_density:     gauss              "gauss"         plain;
        magnetic_flux:             maxwell            "Mx"            plain;
        radioactivity:             curie              "Ci"            plain;

        ratio:                     percent            "%"             plain;
        ratio:                     per_mille          "permil ‰"      plain;
        ratio:                     part_per_million   "ppm"           plain;
        ratio:                     part_per_billion   "ppb"           plain;
    }
}

fn unit_info<D, N>(symbols: &'static str, takes_prefixes: bool) -> UnitInfo
where
    D: uom::si::Dimension + ?Sized,
    N: uom::si::Unit + Conversion<f64, T = f64>,
{
    let constant = decimal(N::constant(ConstantOp::Add));
    UnitInfo {
        symbols: symbols.split(' ').collect(),
        name: respelt(N::singular()),
        plural: respelt(N::plural()),
        dimension: dimension_of::<D>(),
        factor: Number::rational(decimal(N::coefficient())),
        // `uom` adds its constant before the factor; all that have one have the factor 1.
        offset: (!constant.is_zero()).then_some(constant),
        takes_prefixes,
        source: SOURCE,
    }
}

/// A unit's name as the SI Brochure spells it.
fn respelt(name: &str) -> String {
    match name {
        "ton" => "tonne".to_owned(),
        "tons" => "tonnes".to_owned(),
        name => name.replace("meter", "metre").replace("liter", "litre"),
    }
}

/// The shortest decimal that prints a floating-point number, as an exact rational.
fn decimal(value: f64) -> BigRational {
    let text = format!("{value:e}");
    let (mantissa, power) = text.split_once('e').unwrap_or((&text, "0"));
    let (whole, fraction) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits: BigInt = format!("{whole}{fraction}")
        .parse()
        .expect("a finite number prints as digits");
    let power: i32 = power.parse().expect("`{:e}` prints a whole exponent");
    let ten = BigRational::from_integer(10.into());
    let places = power - i32::try_from(fraction.len()).expect("a double has 17 digits");
    BigRational::from_integer(digits) * ten.pow(places)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_printed_factor_is_read_as_a_decimal() {
        for (value, numer, denom) in [
            (0.3048, 381, 1250),
            (1.0, 1, 1),
            (-0.0, 0, 1),
            (101_325.0, 101_325, 1),
            (1e-28, 1, 10_i128.pow(28)),
        ] {
            assert_eq!(decimal(value), BigRational::new(numer.into(), denom.into()));
        }
    }

    #[test]
    fn dimensions_come_over_in_our_order() {
        let pressure = dimension_of::<uom::si::pressure::Dimension>();
        assert_eq!(pressure.unit_text(), "kg/(m.s^2)");
        let molar = dimension_of::<uom::si::molar_heat_capacity::Dimension>();
        assert_eq!(molar.unit_text(), "kg.m^2/(s^2.K.mol)");
        let potential = dimension_of::<uom::si::electric_potential::Dimension>();
        assert_eq!(potential.unit_text(), "kg.m^2/(s^3.A)");
        let light = dimension_of::<uom::si::luminance::Dimension>();
        assert_eq!(light.unit_text(), "cd/m^2");
    }
}
