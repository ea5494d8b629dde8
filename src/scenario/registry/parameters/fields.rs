//! The parameters of the optional tables: how far support reaches, nutrient and waste.

use super::super::Parameter;
use super::Real;

/// The keys of `[support]`.
#[derive(Debug)]
pub(crate) struct SupportParameters {
    /// How far support reaches.
    pub(crate) range: Parameter<Real>,
    /// What is lost at the surface.
    pub(crate) leak: Parameter<Real>,
}

/// The keys of `[nutrient]`.
#[derive(Debug)]
pub(crate) struct NutrientParameters {
    /// Concentration in the bath.
    pub(crate) bath: Parameter<Real>,
    /// Concentration at which uptake is half its maximum.
    pub(crate) half_saturation: Parameter<Real>,
    /// Uptake of a cell at saturation.
    pub(crate) uptake: Parameter<Real>,
    /// Diffusivity inside the body.
    pub(crate) diffusivity: Parameter<Real>,
    /// Conductance to the bath.
    pub(crate) exchange: Parameter<Real>,
}

/// The keys of `[waste]`.
#[derive(Debug)]
pub(crate) struct WasteParameters {
    /// Release of a cell at full income.
    pub(crate) release: Parameter<Real>,
    /// Diffusivity inside the body.
    pub(crate) diffusivity: Parameter<Real>,
    /// Concentration at which income is halved.
    pub(crate) toxic: Parameter<Real>,
    /// Conductance to the bath.
    pub(crate) exchange: Parameter<Real>,
}

/// Concentrations, mM: from a thousandth of a nM to pure liquids.
const CONCENTRATION: Real = Real::from_to(1e-6, 1e5);
/// Amounts per cell, fmol/h: from next to nothing to those of cells a millimetre across.
const RATE: Real = Real::from_to(1e-9, 1e9);
/// Diffusivities, um^2/s: from those of a stiff gel to those of a gas.
const DIFFUSIVITY: Real = Real::from_to(1e-3, 1e8);
/// Relative conductances: from an almost sealed body to a well stirred one.
const EXCHANGE: Real = Real::from_to(1e-6, 1e3);

const EXCHANGE_MEANING: &str = "Conductance between a cell and an empty neighbour site, relative \
                                to that between touching cells; 1: well stirred up to the body, below: an \
                                unstirred film, 2: stirred up to the cells themselves";

/// How far support reaches.
pub(crate) static SUPPORT: SupportParameters = SupportParameters {
    range: parameter!(
        "support.range_diameters",
        "cell diameters",
        "Range of sharing (lambda); 0: no sharing",
        Real::from_to(0.0, 1e6),
        2.0
    ),
    leak: parameter!(
        "support.leak",
        "none",
        "Share of the exchange at empty neighbour sites that is lost; 0: sealed body",
        Real::from_to(0.0, 1.0),
        0.0
    ),
};

/// What cells take up.
pub(crate) static NUTRIENT: NutrientParameters = NutrientParameters {
    bath: parameter!(
        "nutrient.bath_mM",
        "mM",
        "Concentration in the surrounding water",
        CONCENTRATION,
        0.05
    ),
    half_saturation: parameter!(
        "nutrient.half_saturation_mM",
        "mM",
        "Concentration at which uptake is half its maximum (K)",
        CONCENTRATION,
        0.02
    ),
    uptake: parameter!(
        "nutrient.uptake_fmol_per_h",
        "fmol/h",
        "Uptake of a cell at saturation (q_max)",
        RATE,
        20.0
    ),
    diffusivity: parameter!(
        "nutrient.diffusivity_um2_per_s",
        "um^2/s",
        "Diffusivity inside the body (D)",
        DIFFUSIVITY,
        500.0
    ),
    exchange: parameter!("nutrient.exchange", "none", EXCHANGE_MEANING, EXCHANGE, 1.0),
};

/// What cells release.
pub(crate) static WASTE: WasteParameters = WasteParameters {
    release: parameter!(
        "waste.release_fmol_per_h",
        "fmol/h",
        "Release of a cell at full income",
        RATE,
        20.0
    ),
    diffusivity: parameter!(
        "waste.diffusivity_um2_per_s",
        "um^2/s",
        "Diffusivity inside the body",
        DIFFUSIVITY,
        500.0
    ),
    toxic: parameter!(
        "waste.toxic_mM",
        "mM",
        "Concentration that halves a cell's income (w_tox)",
        CONCENTRATION,
        0.05
    ),
    exchange: parameter!("waste.exchange", "none", EXCHANGE_MEANING, EXCHANGE, 1.0),
};
