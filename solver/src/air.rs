//! Properties of dry air.

/// Air with constant properties.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Air {
    /// Density ρ₀ [kg/m³].
    pub density: f64,
    /// Dynamic viscosity μ [Pa·s].
    pub viscosity: f64,
    /// Thermal conductivity k [W/(m·K)].
    pub conductivity: f64,
    /// Specific heat at constant pressure c_p [J/(kg·K)].
    pub specific_heat: f64,
    /// Thermal expansion coefficient β [1/K].
    pub expansion: f64,
}

/// Where the air's properties come from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum AirModel {
    /// Exactly these numbers.
    Given(Air),
    /// Dry air at the film temperature of the result, at this pressure.
    Film {
        /// Absolute pressure [Pa].
        pressure: f64,
    },
}

impl Air {
    /// Dry air at a temperature T [K] and an absolute pressure p [Pa].
    ///
    /// - density p / (R·T), R = 287.05 J/(kg·K): ideal gas, 0.13 % off at most
    /// - viscosity 1.4927e-6·T^1.5 / (T + 118.15), the form of W. Sutherland (1893): 0.2 %
    /// - conductivity, a parabola in T − 300 K: 0.1 %
    /// - specific heat, a parabola in T − 300 K: 0.1 %, the pressure's share included
    /// - expansion 1/T: 0.5 %
    ///
    /// The accuracies hold from −40 to 160 °C and from 54 to 101 kPa. Outside 180 to 700 K the
    /// properties of the nearer bound are returned, so that a run that goes astray stays finite.
    ///
    /// # Source
    /// Constants fitted to Lemmon & Jacobsen (2004) for viscosity and conductivity and to
    /// Lemmon et al. (2000) for specific heat, as tabulated by CoolProp 8.0.0 at 101325 Pa.
    pub fn dry(temperature: f64, pressure: f64) -> Air {
        let t = temperature.clamp(COLDEST, HOTTEST);
        let from_300 = t - 300.0;
        Air {
            density: pressure / (GAS_CONSTANT * t),
            viscosity: 1.4927e-6 * t.powf(1.5) / (t + 118.15),
            conductivity: 2.6378e-2 + from_300 * (7.4404e-5 - 3.609e-8 * from_300),
            specific_heat: 1006.36 + from_300 * (0.03675 + 4.110e-4 * from_300),
            expansion: 1.0 / t,
        }
    }

    /// Kinematic viscosity ν = μ/ρ [m²/s].
    pub fn kinematic_viscosity(&self) -> f64 {
        self.viscosity / self.density
    }

    /// Thermal diffusivity α = k/(ρ·c_p) [m²/s].
    pub fn diffusivity(&self) -> f64 {
        self.conductivity / (self.density * self.specific_heat)
    }

    /// Prandtl number ν/α [-].
    pub fn prandtl(&self) -> f64 {
        self.viscosity * self.specific_heat / self.conductivity
    }
}

/// Specific gas constant of dry air [J/(kg·K)]: 8.31446 / 0.0289655.
const GAS_CONSTANT: f64 = 287.05;
/// Bounds of the property fits [K].
const COLDEST: f64 = 180.0;
const HOTTEST: f64 = 700.0;

/// Pressure of the standard atmosphere [Pa] at an altitude [m], −5 000 to 20 000 m (the nearer
/// bound's pressure outside).
///
/// With the geopotential altitude H = r·z/(r + z), r = 6 356 766 m: up to 11 000 m
/// 101 325·(1 − 0.0065·H/288.15)^5.255877, above it falls by a factor e every R·216.65/g = 6341.62 m.
///
/// # Source
/// ISO 2533:1975, the same as the U.S. Standard Atmosphere 1976 below 32 km.
pub fn standard_pressure(altitude: f64) -> f64 {
    /// Earth's radius of the standard [m].
    const RADIUS: f64 = 6_356_766.0;
    let z = altitude.clamp(-5_000.0, 20_000.0);
    let h = RADIUS * z / (RADIUS + z);
    let in_troposphere = |h: f64| 101_325.0 * (1.0 - 0.0065 * h / 288.15).powf(5.255_877);
    if h <= 11_000.0 {
        in_troposphere(h)
    } else {
        in_troposphere(11_000.0) * (-(h - 11_000.0) / 6_341.62).exp()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Dry air at 101325 Pa: °C, ρ, μ, k, c_p, β. CoolProp 8.0.0 (Lemmon et al. 2000; Lemmon &
    /// Jacobsen 2004).
    const TABLE: [[f64; 6]; 8] = [
        [-20.0, 1.3956, 1.6201e-5, 0.02281, 1005.5, 3.9677e-3],
        [0.0, 1.2931, 1.7218e-5, 0.02436, 1005.7, 3.6740e-3],
        [20.0, 1.2046, 1.8206e-5, 0.02587, 1006.1, 3.4210e-3],
        [25.0, 1.1843, 1.8448e-5, 0.02625, 1006.3, 3.3631e-3],
        [40.0, 1.1274, 1.9165e-5, 0.02735, 1006.9, 3.2008e-3],
        [60.0, 1.0596, 2.0099e-5, 0.02880, 1008.0, 3.0074e-3],
        [80.0, 0.9995, 2.1009e-5, 0.03023, 1009.5, 2.8361e-3],
        [100.0, 0.9459, 2.1896e-5, 0.03162, 1011.2, 2.6834e-3],
    ];

    fn near(value: f64, reference: f64, band: f64) {
        assert!((value / reference - 1.0).abs() < band, "{value} is not {reference} ± {band}");
    }

    #[test]
    fn dry_air_matches_the_equation_of_state() {
        for [celsius, density, viscosity, conductivity, specific_heat, expansion] in TABLE {
            let air = Air::dry(celsius + 273.15, 101_325.0);
            near(air.density, density, 1e-3);
            near(air.viscosity, viscosity, 1e-3);
            near(air.conductivity, conductivity, 1e-3);
            near(air.specific_heat, specific_heat, 2e-4);
            near(air.expansion, expansion, 5e-3);
        }
    }

    /// At 40 °C and the pressure of 5000 m; CoolProp 8.0.0.
    #[test]
    fn thin_air_differs_in_density_only() {
        let air = Air::dry(313.15, 54_048.0);
        near(air.density, 0.601_338, 1e-3);
        near(air.viscosity, 1.915_870e-5, 2e-3);
        near(air.conductivity, 0.027_340, 1e-3);
        near(air.specific_heat, 1_006.247, 1e-3);
    }

    #[test]
    fn prandtl_is_diffusivities_ratio() {
        let air = Air::dry(293.15, 101_325.0);
        near(air.prandtl(), air.kinematic_viscosity() / air.diffusivity(), 1e-12);
        near(air.prandtl(), 0.7080, 2e-3); // CoolProp 8.0.0
    }

    /// Pressures of the U.S. Standard Atmosphere 1976, as given by the package fluids 1.3.1;
    /// 11 019 m and 15 000 m from the standard's own table, recalled from memory.
    #[test]
    fn pressure_follows_the_standard_atmosphere() {
        for (altitude, pressure) in [
            (0.0, 101_325.0),
            (500.0, 95_461.0),
            (1_000.0, 89_876.0),
            (1_500.0, 84_560.0),
            (2_000.0, 79_501.0),
            (3_000.0, 70_121.0),
            (4_000.0, 61_660.0),
            (5_000.0, 54_048.0),
        ] {
            near(standard_pressure(altitude), pressure, 1e-5);
        }
        near(standard_pressure(15_000.0), 12_111.8, 1e-5);
    }

    #[test]
    fn astray_temperatures_stay_finite() {
        for t in [-1e6, 0.0, 1e9] {
            let air = Air::dry(t, 101_325.0);
            assert!(air.viscosity > 0.0 && air.density > 0.0 && air.conductivity > 0.0);
            assert!(air.specific_heat > 0.0 && air.expansion > 0.0);
        }
    }
}
