//! Units against their published definitions, and the rules by which they are written.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::Pow;
use proptest::prelude::*;
use scalewright::number::{Exponent, Number};
use scalewright::units::{self, Dimension, Expected, Unit, UnitError, parse_unit};
use serde_json::Value;

fn data() -> Value {
    serde_json::from_str(include_str!("units.json")).unwrap()
}

fn rational(text: &str) -> BigRational {
    text.parse().unwrap()
}

fn unit(text: &str) -> Unit {
    parse_unit(text).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

/// The factor of a unit that is a plain rational number.
fn factor(text: &str) -> BigRational {
    unit(text).factor.as_rational().unwrap().clone()
}

fn error(text: &str) -> UnitError {
    parse_unit(text).unwrap_err()
}

fn assert_same(left: &str, right: &str) {
    assert_eq!(unit(left), unit(right), "{left} and {right}");
}

#[test]
fn every_unit_has_its_exact_factor() {
    let data = data();
    let rows = data["units"].as_array().unwrap();
    assert_eq!(rows.len(), 128);
    for row in rows {
        let text = row["unit"].as_str().unwrap();
        let pi = Exponent::whole(row["pi"].as_i64().unwrap()).unwrap();
        let factor = Number::rational(rational(row["factor"].as_str().unwrap()))
            .times(&Number::pi().power(pi).unwrap())
            .unwrap();
        let found = unit(text);
        assert_eq!(found.factor, factor, "{text}");
        assert_eq!(
            found.dimension.unit_text(),
            row["si"].as_str().unwrap(),
            "{text}"
        );
        assert_eq!(found.offset, row["offset"].as_str().map(rational), "{text}");
    }
}

#[test]
fn rounded_factors_of_another_table_agree_to_their_digits() {
    use uom::Conversion;
    macro_rules! rounded {
        ($($text:literal: $quantity:ident::$unit:ident;)+) => {
            [$(($text, <uom::si::$quantity::$unit as Conversion<f64>>::coefficient())),+]
        };
    }
    let rounded = rounded! {
        "lb": mass::pound;
        "slug": mass::slug;
        "oz_t": mass::ounce_troy;
        "kt": velocity::knot;
        "lbf": force::pound_force;
        "pdl": force::poundal;
        "psi": pressure::psi;
        "inHg": pressure::inch_of_mercury;
        "inH2O": pressure::inch_of_water;
        "mmHg": pressure::millimeter_of_mercury;
        "Btu": energy::btu_it;
        "Btu_th": energy::btu;
        "ft_lbf": energy::foot_pound;
        "hp": power::horsepower;
        "PS": power::horsepower_metric;
        "galUS": volume::gallon;
        "bbl": volume::barrel;
        "flozUS": volume::fluid_ounce;
        "ftUS": length::foot_survey;
        "ly": length::light_year;
        "pc": length::parsec;
        "pt": length::point_computer;
        "deg": angle::degree;
        "arcsec": angle::second;
        "rpm": angular_velocity::revolution_per_minute;
        "degR": thermodynamic_temperature::degree_rankine;
    };
    for (text, expected) in rounded {
        let ratio = unit(text).factor.to_f64() / expected;
        assert!((ratio - 1.0).abs() < 1e-6, "{text}: {ratio}");
    }
}

#[test]
fn a_prefix_is_its_power_of_ten_before_units_that_take_one() {
    let data = data();
    let prefixes = data["prefixes"].as_array().unwrap();
    assert_eq!(prefixes.len(), 24);
    let ten = BigRational::from_integer(BigInt::from(10));
    for prefix in prefixes {
        let symbol = prefix["symbol"].as_str().unwrap();
        let power = i32::try_from(prefix["power"].as_i64().unwrap()).unwrap();
        for base in ["m", "Pa", "W", "g", "Hz", "J", "eV", "bar"] {
            let multiple = format!("{symbol}{base}");
            let expected = factor(base) * Pow::pow(&ten, power);
            assert_eq!(factor(&multiple), expected, "{multiple}");
        }
    }
}

#[test]
fn units_without_prefixes_refuse_them() {
    for text in [
        "kmin", "mh", "kd", "mha", "kkt", "mdegC", "kdeg", "kft", "mkg", "kinch", "kyd", "m%",
        "kday", "kinHg", "hnmi", "kkm",
    ] {
        assert!(matches!(error(text), UnitError::Unknown { .. }), "{text}");
    }
}

#[test]
fn a_plain_symbol_beats_a_prefix_and_a_symbol() {
    for (text, expected) in [
        ("Pa", "N/m^2"),
        ("ha", "hm^2"),
        ("kt", "nmi/h"),
        ("cd", "lm/sr"),
    ] {
        assert_same(text, expected);
    }
    assert_eq!(factor("min"), rational("60"));
    assert_eq!(factor("ft"), rational("381/1250"));
    assert_eq!(factor("yd"), rational("1143/1250"));
    assert_eq!(factor("nmi"), rational("1852"));
}

#[test]
fn the_trade_has_its_symbols_where_the_si_claims_them_too() {
    assert_eq!(unit("Sv"), unit("sverdrup"));
    assert_eq!(unit("Sv").dimension.unit_text(), "m^3/s");
    assert_eq!(factor("kyr"), rational("31557600000"));
}

#[test]
fn no_reserved_word_is_a_unit() {
    for word in ["in", "as", "to"] {
        assert!(matches!(error(word), UnitError::Unknown { .. }), "{word}");
    }
    assert_eq!(factor("inch"), rational("127/5000"));
}

#[test]
fn unicode_spellings_have_ascii_twins() {
    for (text, twin) in [
        ("µm", "um"),
        ("μm", "um"),
        ("Ω", "ohm"),
        ("\u{2126}", "ohm"),
        ("kΩ", "kohm"),
        ("°", "deg"),
        ("°C", "degC"),
        ("°F", "degF"),
        ("Å", "angstrom"),
        ("\u{212b}", "angstrom"),
        ("‰", "permil"),
        ("m²", "m^2"),
        ("m·s⁻²", "m.s^-2"),
        ("s⁻¹⁰", "s^-10"),
    ] {
        assert_same(text, twin);
    }
}

#[test]
fn products_quotients_and_powers_mean_what_they_say() {
    for (text, twin) in [
        ("kg/(m.s^2)", "Pa"),
        ("kg.m^-1.s^-2", "Pa"),
        ("J/(kg.K)", "m^2.s^-2.K^-1"),
        ("1/s", "Hz"),
        ("1/(m.s)", "m^-1.s^-1"),
        ("m/s^2", "m.s^-2"),
        ("(m.s^-1)^2", "m^2.s^-2"),
        ("m^+2", "m^2"),
        ("m^(2)", "m^2"),
        ("m^(4/6)", "m^(2/3)"),
        ("(m^3)^(2/3)", "m^2"),
        ("((m))", "m"),
        ("km/h", "km.h^-1"),
        ("m/m", "1"),
        ("m^0", "1"),
    ] {
        assert_same(text, twin);
    }
    assert_eq!(unit("m^(2/3)").dimension.unit_text(), "m^(2/3)");
    assert_eq!(factor("km^2"), rational("1000000"));
    assert_eq!(factor("km/h"), rational("5/18"));
    assert_eq!(factor("ft/min"), rational("127/25000"));
    assert_eq!(factor("cm^-3"), rational("1000000"));
    assert_eq!(unit("km^(1/2)").factor.to_string(), "10*2^(1/2)*5^(1/2)");
}

#[test]
fn one_is_a_unit() {
    assert_eq!(unit("1"), Unit::one());
    assert!(unit("1").dimension.is_one());
}

#[test]
fn a_second_solidus_is_an_error_with_its_mend() {
    for (text, at, mend) in [
        ("J/kg/K", 4..5, "J/(kg.K)"),
        ("m/s/s", 3..4, "m/s^2"),
        ("1/m/s", 3..4, "1/(m.s)"),
        ("W/m^2/K", 5..6, "W/(m^2.K)"),
        ("J/kg/K/s", 4..5, "J/(kg.K.s)"),
        ("J/kg.K/s", 6..7, "J/(kg.K.s)"),
    ] {
        let expected = UnitError::TwoSolidi {
            range: at,
            mend: mend.to_owned(),
        };
        assert_eq!(error(text), expected, "{text}");
        unit(mend);
    }
}

#[test]
fn a_product_behind_a_solidus_wants_brackets() {
    let expected = UnitError::ProductBehindSolidus {
        range: 4..5,
        mend: "J/(kg.K.s)".to_owned(),
    };
    assert_eq!(error("J/kg.K.s"), expected);
}

#[test]
fn a_solidus_stands_outside_brackets() {
    for (text, at, mend) in [("(m/s)^2", 2..3, "m^2/s^2"), ("W/(m^2/s)", 6..7, "W.s/m^2")] {
        let expected = UnitError::SolidusInBrackets {
            range: at,
            mend: mend.to_owned(),
        };
        assert_eq!(error(text), expected, "{text}");
    }
}

#[test]
fn an_unknown_symbol_is_named_with_its_place_and_the_nearest() {
    for (text, symbol, range, nearest) in [
        ("m/sec", "sec", 2..5, Some("s")),
        ("mps", "mps", 0..3, Some("m/s")),
        ("kg/meter^3", "meter", 3..8, Some("m")),
        ("knots", "knots", 0..5, Some("kt")),
        ("m2", "m2", 0..2, Some("m^2")),
        ("hpa", "hpa", 0..3, Some("hPa")),
        ("m/U", "U", 2..3, None),
        ("Omega", "Omega", 0..5, None),
        ("µU/s", "µU", 0..3, None),
    ] {
        let expected = UnitError::Unknown {
            symbol: symbol.to_owned(),
            range,
            nearest: nearest.map(str::to_owned),
        };
        assert_eq!(error(text), expected, "{text}");
    }
}

#[test]
fn what_is_no_unit_is_malformed_at_its_place() {
    for (text, range, expected) in [
        ("", 0..0, Expected::Symbol),
        ("m/", 2..2, Expected::Symbol),
        ("m.", 2..2, Expected::Symbol),
        ("/s", 0..1, Expected::Symbol),
        ("m..s", 2..3, Expected::Symbol),
        ("m s", 1..2, Expected::SignOrEnd),
        ("s-1", 1..2, Expected::SignOrEnd),
        ("m*s", 1..2, Expected::SignOrEnd),
        ("2m", 0..1, Expected::Symbol),
        ("1m", 1..2, Expected::SignOrEnd),
        ("m^", 2..2, Expected::WholeNumber),
        ("m^2.5", 4..5, Expected::Symbol),
        ("m^x", 2..3, Expected::WholeNumber),
        ("m^(2/3", 6..6, Expected::ClosingBracket),
        ("m^(1/0)", 1..7, Expected::DenominatorNotZero),
        ("(m.s", 4..4, Expected::ClosingBracket),
        ("m)", 1..2, Expected::SignOrEnd),
        ("m²⁻", 1..6, Expected::WholeNumber),
        ("m⁻", 1..4, Expected::WholeNumber),
    ] {
        assert_eq!(
            error(text),
            UnitError::Malformed { range, expected },
            "{text}"
        );
    }
}

#[test]
fn a_reading_with_an_offset_stands_alone() {
    assert_eq!(
        unit("degC").to_si(&rational("15")),
        Ok(Number::rational(rational("5763/20")))
    );
    assert_eq!(
        unit("degF").to_si(&rational("32")),
        Ok(Number::rational(rational("5463/20")))
    );
    assert!((unit("degC").from_si(288.15) - 15.0).abs() < 1e-12);
    for (text, mend) in [
        ("degC/km", "K/km"),
        ("J/(kg.degC)", "J/(kg.K)"),
        ("degC^2", "K^2"),
        ("1/°C", "1/K"),
        ("degF/h", "degR/h"),
    ] {
        let UnitError::OffsetInCompound { mend: found, .. } = error(text) else {
            panic!("{text}: {:?}", error(text));
        };
        assert_eq!(found, mend, "{text}");
        unit(mend);
    }
}

#[test]
fn an_angle_is_a_number_and_a_degree_holds_pi() {
    assert!(unit("rad").dimension.is_one() && unit("rad").factor.is_one());
    assert!(unit("sr").dimension.is_one() && unit("sr").factor.is_one());
    assert_eq!(unit("deg").factor.to_string(), "1/180*pi");
    assert_same("rad/s", "1/s");
}

#[test]
fn limits_are_errors() {
    for text in [
        "m^99999999999999999999".to_owned(),
        "m^2000000".to_owned(),
        "(m^1000)^1001".to_owned(),
        "m^1000000.m".to_owned(),
        "km^10000".to_owned(),
        format!("{}m{}", "(".repeat(300), ")".repeat(300)),
        "(".repeat(100_000),
        "x".repeat(1_000_000),
    ] {
        let short: String = text.chars().take(30).collect();
        assert!(
            matches!(error(&text), UnitError::TooLarge { .. }),
            "{short}"
        );
    }
}

#[test]
fn every_symbol_reads_as_a_unit_and_has_a_name() {
    let mut count = 0;
    for symbol in units::symbols() {
        assert!(parse_unit(&symbol).is_ok(), "{symbol}");
        assert!(units::display_name(&symbol).is_some(), "{symbol}");
        count += 1;
    }
    assert!(count > 1_000, "{count}");
}

fn dimensions() -> impl Strategy<Value = Dimension> {
    proptest::collection::vec((-30_i64..=30, 1_i64..=6), 7).prop_map(|exponents| {
        let bases = [
            Dimension::mass(),
            Dimension::length(),
            Dimension::time(),
            Dimension::current(),
            Dimension::temperature(),
            Dimension::amount(),
            Dimension::luminosity(),
        ];
        let powers = bases.iter().zip(exponents);
        powers.fold(Dimension::one(), |product, (base, (numer, denom))| {
            let exponent = Exponent::from_rational(&BigRational::new(numer.into(), denom.into()));
            product
                .times(&base.power(exponent.unwrap()).unwrap())
                .unwrap()
        })
    })
}

proptest! {
    #[test]
    fn the_text_of_a_dimension_reads_back(dimension in dimensions()) {
        let read = parse_unit(&dimension.unit_text()).unwrap();
        prop_assert_eq!(read.dimension, dimension);
        prop_assert!(read.factor.is_one());
    }

    #[test]
    fn dimensions_are_a_group(a in dimensions(), b in dimensions()) {
        let product = a.times(&b).unwrap();
        prop_assert_eq!(product, b.times(&a).unwrap());
        prop_assert_eq!(product.over(&b).unwrap(), a);
        prop_assert_eq!(a.over(&a).unwrap(), Dimension::one());
        prop_assert_eq!(a == b, a.over(&b).unwrap().is_one());
    }

    #[test]
    fn a_power_undoes_its_root(a in dimensions(), n in 1_i64..=7) {
        let root = Exponent::from_rational(&BigRational::new(1.into(), n.into())).unwrap();
        let whole = Exponent::whole(n).unwrap();
        prop_assert_eq!(a.power(root).unwrap().power(whole).unwrap(), a);
    }

    #[test]
    fn any_text_is_a_unit_or_an_error_inside_it(text in "[a-zA-Z0-9µ°Ω%./^()·²⁻ -]{0,20}|\\PC{0,12}") {
        if let Err(error) = parse_unit(&text) {
            let range = error.range();
            prop_assert!(range.start <= range.end && range.end <= text.len());
            prop_assert!(text.is_char_boundary(range.start) && text.is_char_boundary(range.end));
        }
    }

    #[test]
    fn a_factor_of_a_compound_is_the_product(
        names in proptest::collection::vec(0_usize..units::units().len(), 1..4),
        power in -3_i64..=3,
    ) {
        let parts: Vec<_> = names
            .iter()
            .map(|&name| &units::units()[name])
            .filter(|unit| unit.offset.is_none())
            .collect();
        prop_assume!(!parts.is_empty());
        let text = parts.iter().map(|unit| format!("{}^{power}", unit.symbols[0]));
        let found = unit(&text.collect::<Vec<String>>().join("."));
        let power = Exponent::whole(power).unwrap();
        let expected = parts.iter().fold(Number::one(), |product, unit| {
            product.times(&unit.factor.power(power).unwrap()).unwrap()
        });
        prop_assert_eq!(found.factor, expected);
    }
}
