//! Units of our own: those that `uom` lacks or rounds, each by its exact definition in
//! terms of units above it, and the source of that definition.

use num_rational::BigRational;

use super::dimension::Dimension;
use super::table::UnitInfo;
use crate::number::{Exponent, Number};

const BROCHURE: &str = "SI Brochure, 9th ed. (2019)";
const NIST: &str = "NIST SP 811 (2008), appendix B";
const YARD: &str = "international yard and pound agreement (1959), as in NIST SP 811";
const MONACO: &str = "International Hydrographic Conference, Monaco (1929), as in NIST SP 811";
const IAU: &str = "IAU 2012 resolution B2, IAU 2015 resolution B2";
const IAU_STYLE: &str = "IAU Style Manual (1989)";
const PRACTICE: &str = "common practice, no source";
const DARCY: &str = "from its definition: 1 cP, 1 cm/s, 1 atm/cm";

/// A unit by its definition: `numer/denom * π^pi` of the unit `of`.
pub(super) struct Definition {
    /// Its symbols, blanks between; the first is the one shown.
    symbols: &'static str,
    name: &'static str,
    plural: &'static str,
    numer: i64,
    denom: i64,
    pi: i64,
    /// Another unit, in unit syntax, that stands above it in the tables.
    pub(super) of: &'static str,
    /// What is added to a reading after the factor, in K.
    offset: Option<(i64, i64)>,
    takes_prefixes: bool,
    source: &'static str,
}

impl Definition {
    const fn with_pi(mut self, power: i64) -> Definition {
        self.pi = power;
        self
    }

    const fn with_offset(mut self, numer: i64, denom: i64) -> Definition {
        self.offset = Some((numer, denom));
        self
    }

    const fn with_prefixes(mut self) -> Definition {
        self.takes_prefixes = true;
        self
    }

    /// The unit, given what `of` comes out as.
    pub(super) fn unit_info(&self, dimension: Dimension, factor: &Number) -> UnitInfo {
        let own = BigRational::new(self.numer.into(), self.denom.into());
        let pi = Exponent::whole(self.pi).and_then(|power| Number::pi().power(power));
        let factor = pi
            .and_then(|pi| Number::rational(own).times(&pi))
            .and_then(|own| own.times(factor))
            .expect("the factors of this table are far below the limits");
        UnitInfo {
            symbols: self.symbols.split(' ').collect(),
            name: self.name.to_owned(),
            plural: self.plural.to_owned(),
            dimension,
            factor,
            offset: self
                .offset
                .map(|(numer, denom)| BigRational::new(numer.into(), denom.into())),
            takes_prefixes: self.takes_prefixes,
            source: self.source,
        }
    }
}

const fn unit(
    symbols: &'static str,
    (name, plural): (&'static str, &'static str),
    (numer, denom): (i64, i64),
    of: &'static str,
    source: &'static str,
) -> Definition {
    Definition {
        symbols,
        name,
        plural,
        numer,
        denom,
        pi: 0,
        of,
        offset: None,
        takes_prefixes: false,
        source,
    }
}

/// The definitions; each uses only units of `uom_units` and units above itself.
#[rustfmt::skip]
pub(super) const DEFINITIONS: &[Definition] = &[
    // The SI and what it accepts.
    unit("lm", ("lumen", "lumens"), (1, 1), "cd.sr", BROCHURE).with_prefixes(),
    unit("Gy", ("gray", "grays"), (1, 1), "J/kg", BROCHURE).with_prefixes(),
    unit("deg °", ("degree of angle", "degrees"), (1, 180), "1", BROCHURE).with_pi(1),
    unit("arcmin", ("minute of angle", "minutes of angle"), (1, 60), "deg", BROCHURE),
    unit("arcsec", ("second of angle", "seconds of angle"), (1, 60), "arcmin", BROCHURE),
    unit("gon", ("gon", "gons"), (1, 200), "1", NIST).with_pi(1),
    unit("rev", ("revolution", "revolutions"), (2, 1), "1", NIST).with_pi(1),
    unit("rpm", ("revolution per minute", "revolutions per minute"), (1, 1), "rev/min", NIST),

    // Time.
    unit("week", ("week", "weeks"), (7, 1), "d", PRACTICE),
    unit("yr", ("Julian year", "years"), (36_525, 100), "d", IAU_STYLE),
    unit("kyr", ("thousand years", "thousand years"), (1_000, 1), "yr", PRACTICE),
    unit("Myr", ("million years", "million years"), (1_000_000, 1), "yr", PRACTICE),
    unit("Gyr", ("billion years", "billion years"), (1_000_000_000, 1), "yr", PRACTICE),

    // Length and area.
    unit("ly", ("light year", "light years"), (299_792_458, 1), "m.yr/s", IAU),
    unit("pc", ("parsec", "parsecs"), (648_000, 1), "au", IAU).with_pi(-1).with_prefixes(),
    unit("fathom", ("fathom", "fathoms"), (6, 1), "ft", YARD),
    unit("chain", ("chain", "chains"), (66, 1), "ft", YARD),
    unit("furlong", ("furlong", "furlongs"), (660, 1), "ft", YARD),
    unit("pt", ("point", "points"), (1, 72), "inch", PRACTICE),
    unit("ftUS", ("US survey foot", "US survey feet"), (1_200, 3_937), "m", NIST),
    unit("miUS", ("US survey mile", "US survey miles"), (5_280, 1), "ftUS", NIST),
    unit("acre", ("acre", "acres"), (43_560, 1), "ft^2", YARD),
    unit("darcy", ("darcy", "darcys"), (1, 1), "cP.cm^2/(atm.s)", DARCY).with_prefixes(),

    // Volume.
    unit("galUS", ("US gallon", "US gallons"), (231, 1), "inch^3", NIST),
    unit("qtUS", ("US liquid quart", "US liquid quarts"), (1, 4), "galUS", NIST),
    unit("flozUS", ("US fluid ounce", "US fluid ounces"), (1, 128), "galUS", NIST),
    unit("flozUK", ("imperial fluid ounce", "imperial fluid ounces"), (1, 160), "galUK", NIST),
    unit("bbl", ("barrel of oil", "barrels of oil"), (42, 1), "galUS", NIST),
    unit("acre_ft", ("acre-foot", "acre-feet"), (1, 1), "acre.ft", YARD),

    // Mass.
    unit("lb", ("pound", "pounds"), (45_359_237, 100_000_000), "kg", YARD),
    unit("oz", ("ounce", "ounces"), (1, 16), "lb", YARD),
    unit("oz_t", ("troy ounce", "troy ounces"), (480, 1), "gr", NIST),
    unit("st", ("stone", "stone"), (14, 1), "lb", YARD),
    unit("ton_short", ("short ton", "short tons"), (2_000, 1), "lb", NIST),
    unit("ton_long", ("long ton", "long tons"), (2_240, 1), "lb", NIST),
    unit("slug", ("slug", "slugs"), (1, 1), "lb.g_n.s^2/ft", NIST),

    // Speed and flow. `Sv` is the trade's sverdrup; the sievert has no symbol.
    unit("kt kn", ("knot", "knots"), (1, 1), "nmi/h", MONACO),
    unit("Sv sverdrup", ("sverdrup", "sverdrups"), (1_000_000, 1), "m^3/s", PRACTICE).with_prefixes(),
    unit("cfs", ("cubic foot per second", "cubic feet per second"), (1, 1), "ft^3/s", NIST),
    unit("gpm", ("US gallon per minute", "US gallons per minute"), (1, 1), "galUS/min", NIST),

    // Force and pressure. Columns of mercury and water are the conventional ones,
    // of 13595.1 kg/m^3 and 1000 kg/m^3 under standard gravity.
    unit("lbf", ("pound-force", "pounds-force"), (1, 1), "lb.g_n", NIST),
    unit("pdl", ("poundal", "poundals"), (1, 1), "lb.ft/s^2", NIST),
    unit("Torr", ("torr", "torr"), (1, 760), "atm", NIST).with_prefixes(),
    unit("mmHg", ("millimetre of mercury", "millimetres of mercury"), (135_951, 10), "kg.g_n.mm/m^3", NIST),
    unit("inHg", ("inch of mercury", "inches of mercury"), (135_951, 10), "kg.g_n.inch/m^3", NIST),
    unit("inH2O", ("inch of water", "inches of water"), (1_000, 1), "kg.g_n.inch/m^3", NIST),
    unit("psi", ("pound-force per square inch", "pounds-force per square inch"), (1, 1), "lbf/inch^2", NIST),
    unit("psf", ("pound-force per square foot", "pounds-force per square foot"), (1, 1), "lbf/ft^2", NIST),

    // Energy and power.
    unit("Btu", ("British thermal unit (IT)", "British thermal units (IT)"), (5_000, 9), "cal_IT.lb/kg", NIST),
    unit("Btu_th", ("British thermal unit (thermochemical)", "British thermal units (thermochemical)"), (5_000, 9), "cal.lb/kg", NIST),
    unit("ft_lbf", ("foot pound-force", "foot pounds-force"), (1, 1), "ft.lbf", NIST),
    unit("hp", ("horsepower", "horsepower"), (550, 1), "ft.lbf/s", NIST),
    unit("PS", ("metric horsepower", "metric horsepower"), (75, 1), "kgf.m/s", NIST),
    unit("langley", ("langley", "langleys"), (1, 1), "cal/cm^2", NIST),

    // Radiation.
    unit("rem", ("rem", "rem"), (1, 100), "J/kg", NIST),
    unit("R", ("roentgen", "roentgens"), (258, 1_000_000), "C/kg", NIST),

    // Temperature; `degF` is a reading, `degR` the size of its degree too.
    unit("degR", ("degree Rankine", "degrees Rankine"), (5, 9), "K", NIST),
    unit("degF °F", ("degree Fahrenheit", "degrees Fahrenheit"), (5, 9), "K", NIST).with_offset(45_967, 180),

    // The trade's own.
    unit("PVU", ("potential vorticity unit", "potential vorticity units"), (1, 1_000_000), "K.m^2/(kg.s)", PRACTICE),
];
