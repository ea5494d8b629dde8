//! Fields of a body in the units that the solver wants: conductances of a bond between touching cells
//! are 1, concentrations are relative.
//!
//! On the lattice `D lap c = D / (2 d^2) sum_12 (c_j - c_i)`, so that a cell, whose site has the volume
//! `d^3 / sqrt(2)`, exchanges `G (c_j - c_i)` with each neighbour, `G = D d / (2 sqrt(2))`. An empty
//! neighbour site stands for the bath with conductance `exchange * G`.

use std::f64::consts::SQRT_2;

/// Amount per volume in 1 mM, fmol/um^3.
const FMOL_PER_UM3_IN_MM: f64 = 1e-3;
/// Seconds in an hour.
const SECONDS_PER_H: f64 = 3600.0;

/// Conductance of the bond between two touching cells, fmol/h per mM of difference:
/// `G = D d / (2 sqrt(2))`, D in um^2/s, d in um.
#[must_use]
pub const fn bond_conductance(diffusivity_um2_per_s: f64, diameter_um: f64) -> f64 {
    diffusivity_um2_per_s * SECONDS_PER_H * diameter_um / (2.0 * SQRT_2) * FMOL_PER_UM3_IN_MM
}

/// Nutrient that cells take up by Michaelis-Menten kinetics; concentration u relative to the bath's.
///
/// Steady state: `sum_j (u_i - u_j) + exchange * open_i (u_i - 1) + demand u_i / (kappa + u_i) = 0`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Nutrient {
    /// Uptake of a cell at saturation over what a bond conducts at a difference of the bath's
    /// concentration, `q_max / (G c_bath)`.
    pub demand: f64,
    /// Half-saturation concentration over the bath's, `K / c_bath`.
    pub kappa: f64,
    /// Conductance to an empty neighbour site that the bath reaches, relative to a bond's.
    pub exchange: f64,
}

impl Nutrient {
    /// Income of a cell at relative concentration `u`, relative to one bathed directly:
    /// `(u / (kappa + u)) (1 + kappa)`.
    #[must_use]
    pub fn income(&self, u: f64) -> f64 {
        u / (self.kappa + u) * (1.0 + self.kappa)
    }
}

/// Waste that cells release in proportion to their income; concentration w relative to the toxic one.
///
/// Steady state: `sum_j (w_i - w_j) + exchange * open_i w_i - release e_i = 0` with the income
/// `e_i = f_i / (1 + w_i)`, where `f_i` is what the cell would earn without waste, relative to e0.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Waste {
    /// Release at full income over what a bond conducts at a difference of the toxic concentration.
    pub release: f64,
    /// Conductance to an empty neighbour site that the bath reaches, relative to a bond's.
    pub exchange: f64,
}

/// Support shared by local transport of the viability task's product.
///
/// Steady state of `lambda^2 lap S - S + v = 0`: with `a = lambda^2 / 2` (lambda in cell diameters),
/// `a sum_j (S_i - S_j) + a leak open_i S_i + S_i = v_i`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sharing {
    /// Range lambda, cell diameters; 0: no sharing.
    pub range_diameters: f64,
    /// Share of the exchange at empty neighbour sites that is lost; 0: a sealed body.
    pub leak: f64,
}

/// What decides the incomes of a body's cells; without either, every cell is fully fed.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Fields {
    /// What cells take up.
    pub nutrient: Option<Nutrient>,
    /// What they release.
    pub waste: Option<Waste>,
}

impl Fields {
    /// Whether incomes can differ between cells.
    #[must_use]
    pub const fn act(&self) -> bool {
        self.nutrient.is_some() || self.waste.is_some()
    }
}
