//! The US Standard Atmosphere 1976, from 5 km below sea level to 86 km.
//!
//! Heights are geometric. Up to 80 km the mean molar mass is that of the ground, so that
//! the temperature is the one of the layers. Above, oxygen begins to part: the layers give
//! the molecular-scale temperature, T M_0/M, and the ratio M/M_0 comes from the table of
//! the standard; pressure and density follow from the molecular-scale one. Source: NOAA, NASA, USAF: US Standard
//! Atmosphere 1976, from memory; checked against values of a package in `tests`.

use uom::si::acceleration::meter_per_second_squared;
use uom::si::f64::{
    Acceleration, Length, MassDensity, MolarHeatCapacity, MolarMass, Pressure,
    SpecificHeatCapacity, TemperatureGradient, TemperatureInterval, ThermodynamicTemperature,
};
use uom::si::length::meter;
use uom::si::mass_density::kilogram_per_cubic_meter;
use uom::si::molar_heat_capacity::joule_per_kelvin_mole;
use uom::si::molar_mass::gram_per_mole;
use uom::si::pressure::pascal;
use uom::si::ratio::ratio;
use uom::si::temperature_gradient::kelvin_per_meter;
use uom::si::temperature_interval::kelvin as kelvin_interval;
use uom::si::thermodynamic_temperature::kelvin;

use super::range::Range;

/// The lowest height covered, in m.
const LOWEST: f64 = -5_000.0;
/// The highest height covered, in m.
const HIGHEST: f64 = 86_000.0;

/// Lower ends of the layers in geopotential m, and dT/dH there in K/m.
const LAYERS: [(f64, f64); 7] = [
    (0.0, -0.0065),
    (11_000.0, 0.0),
    (20_000.0, 0.001),
    (32_000.0, 0.0028),
    (47_000.0, 0.0),
    (51_000.0, -0.0028),
    (71_000.0, -0.002),
];

/// The mean molar mass above 80 km, over that of the ground: steps of 500 m of geometric
/// height from 80 km to 86 km (from memory; its last entry gives the 186.8673 K that the
/// standard states for 86 km).
const MOLAR_MASS_RATIOS: [f64; 13] = [
    1.000_000, 0.999_996, 0.999_989, 0.999_971, 0.999_941, 0.999_909, 0.999_870, 0.999_829,
    0.999_786, 0.999_741, 0.999_694, 0.999_641, 0.999_579,
];

/// A quantity of the standard atmosphere.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum StandardAtmosphere {
    /// `standard_temperature`, in K.
    Temperature,
    /// `standard_pressure`, in Pa.
    Pressure,
    /// `standard_density`, in kg/m^3.
    Density,
}

impl StandardAtmosphere {
    /// All three.
    pub const ALL: [StandardAtmosphere; 3] = [
        StandardAtmosphere::Temperature,
        StandardAtmosphere::Pressure,
        StandardAtmosphere::Density,
    ];

    /// Its name as a function in the language.
    pub fn name(self) -> &'static str {
        match self {
            StandardAtmosphere::Temperature => "standard_temperature",
            StandardAtmosphere::Pressure => "standard_pressure",
            StandardAtmosphere::Density => "standard_density",
        }
    }

    /// The quantity of this name.
    pub fn named(name: &str) -> Option<StandardAtmosphere> {
        StandardAtmosphere::ALL
            .into_iter()
            .find(|quantity| quantity.name() == name)
    }

    /// Its SI value at a geometric height in m; `None` outside the heights covered.
    pub fn at(self, height: f64) -> Option<f64> {
        if !(LOWEST..=HIGHEST).contains(&height) {
            return None;
        }
        let air = air_at(Length::new::<meter>(height));
        Some(match self {
            StandardAtmosphere::Temperature => {
                air.temperature.get::<kelvin>() * molar_mass_ratio(height)
            }
            StandardAtmosphere::Pressure => air.pressure.get::<pascal>(),
            StandardAtmosphere::Density => air.density.get::<kilogram_per_cubic_meter>(),
        })
    }

    /// Its SI values over a range of heights; `None` if that leaves the heights covered.
    pub fn over(self, height: &Range) -> Option<Range> {
        // Each is monotonic between the ends of the layers.
        let turns = LAYERS
            .iter()
            .map(|(base, _)| geometric(*base))
            .filter(|turn| height.contains(*turn));
        let mut values = Range::exact(self.at(height.nominal)?);
        for place in [height.low, height.high].into_iter().chain(turns) {
            let value = self.at(place)?;
            values.low = values.low.min(value);
            values.high = values.high.max(value);
        }
        Some(values)
    }
}

/// The state of the air at one height; the temperature is the molecular-scale one.
#[derive(Clone, Copy)]
struct Air {
    temperature: ThermodynamicTemperature,
    pressure: Pressure,
    density: MassDensity,
}

/// The mean molar mass at a geometric height in m, over that of the ground: the table, with
/// straight lines between its entries.
fn molar_mass_ratio(height: f64) -> f64 {
    let steps = ((height - 80_000.0) / 500.0).max(0.0);
    let below = steps.floor();
    let at = |step: f64| {
        let last = MOLAR_MASS_RATIOS.len() - 1;
        MOLAR_MASS_RATIOS[(step as usize).min(last)]
    };
    at(below) + (steps - below) * (at(below + 1.0) - at(below))
}

fn air_at(height: Length) -> Air {
    let height = geopotential(height);
    let mut temperature = ThermodynamicTemperature::new::<kelvin>(288.15);
    let mut pressure = Pressure::new::<pascal>(101_325.0);
    for (layer, &(base, lapse)) in LAYERS.iter().enumerate() {
        let base = Length::new::<meter>(base);
        let lapse = TemperatureGradient::new::<kelvin_per_meter>(lapse);
        let above = LAYERS.get(layer + 1);
        let top = above.map(|&(top, _)| Length::new::<meter>(top));
        let end = top.filter(|top| *top < height).unwrap_or(height);
        (temperature, pressure) = risen(temperature, pressure, lapse, end - base);
        if end == height {
            break;
        }
    }
    Air {
        temperature,
        pressure,
        density: density(temperature, pressure),
    }
}

/// Temperature and pressure after a rise within one layer, in hydrostatic balance.
fn risen(
    temperature: ThermodynamicTemperature,
    pressure: Pressure,
    lapse: TemperatureGradient,
    rise: Length,
) -> (ThermodynamicTemperature, Pressure) {
    let change = lapse * rise;
    let above = temperature + change;
    // g0 M0 / R, the lapse of an atmosphere of constant density.
    let autoconvective: TemperatureGradient = gravity() / gas_constant();
    let falls = if change.get::<kelvin_interval>() == 0.0 {
        let scale_heights = autoconvective * rise / interval(temperature);
        (-scale_heights.get::<ratio>()).exp()
    } else {
        let exponent = (autoconvective / lapse).get::<ratio>();
        let warmer = interval(temperature) / interval(above);
        warmer.get::<ratio>().powf(exponent)
    };
    (above, pressure * falls)
}

fn density(temperature: ThermodynamicTemperature, pressure: Pressure) -> MassDensity {
    pressure / (gas_constant() * interval(temperature))
}

/// The gas constant of dry air, from the universal one of 1976 and the molar mass.
fn gas_constant() -> SpecificHeatCapacity {
    let universal = MolarHeatCapacity::new::<joule_per_kelvin_mole>(8.314_32);
    let molar_mass = MolarMass::new::<gram_per_mole>(28.964_4);
    universal / molar_mass
}

fn gravity() -> Acceleration {
    Acceleration::new::<meter_per_second_squared>(9.806_65)
}

/// An absolute temperature as the interval above 0 K, which may be multiplied.
fn interval(temperature: ThermodynamicTemperature) -> TemperatureInterval {
    TemperatureInterval::new::<kelvin_interval>(temperature.get::<kelvin>())
}

fn earth_radius() -> Length {
    Length::new::<meter>(6_356_766.0)
}

fn geopotential(height: Length) -> Length {
    let radius = earth_radius();
    height * (radius / (radius + height)).get::<ratio>()
}

/// The geometric height of a geopotential one, in m.
fn geometric(geopotential: f64) -> f64 {
    let radius = earth_radius().get::<meter>();
    radius * geopotential / (radius - geopotential)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn outside_its_heights_there_is_no_standard() {
        for quantity in StandardAtmosphere::ALL {
            assert_eq!(quantity.at(86_001.0), None);
            assert_eq!(quantity.at(-5_001.0), None);
            assert_eq!(quantity.at(f64::NAN), None);
            assert!(quantity.at(86_000.0).is_some());
            let beyond = Range::new(0.0, 1.0, 90_000.0).unwrap();
            assert_eq!(quantity.over(&beyond), None);
        }
    }

    #[test]
    fn a_range_of_heights_holds_the_coldest_layer() {
        let heights = Range::new(5_000.0, 10_000.0, 30_000.0).unwrap();
        let found = StandardAtmosphere::Temperature.over(&heights).unwrap();
        assert!((found.low - 216.65).abs() < 1e-9, "{found:?}");
        let at = |height| StandardAtmosphere::Temperature.at(height).unwrap();
        assert_eq!((found.nominal, found.high), (at(10_000.0), at(5_000.0)));
    }

    #[test]
    fn pressure_is_continuous_across_layers_and_falls() {
        let pressure = |height: i32| StandardAtmosphere::Pressure.at(f64::from(height)).unwrap();
        for height in (-4_990..=86_000).step_by(10) {
            let falls = pressure(height) / pressure(height - 10);
            assert!((0.998..1.0).contains(&falls), "{height}: {falls}");
        }
    }
}
