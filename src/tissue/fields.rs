//! Fields of a body in the units that the solver wants: conductances of a bond between touching cells
//! are 1, concentrations are relative.
//!
//! On the lattice `D lap c = D / (2 d^2) sum_12 (c_j - c_i)`, so that a cell, whose site has the volume
//! `d^3 / sqrt(2)`, exchanges `G (c_j - c_i)` with each neighbour, `G = D d / (2 sqrt(2))`. An empty
//! neighbour site stands for the bath with conductance `exchange * G`.
//!
//! # Where a body's surface lies, and what film it has
//!
//! A compact body of n cells is the ball of radius R that has the volume of its n sites
//! ([`compact_radius_um`](super::compact_radius_um)). Bonds point in all directions alike; those that a
//! surface cuts are cut in proportion to the cosine x of their angle with its normal, so that per cut
//! bond the mean extent along the normal is `d <x^2> / <x> = (2/3) d` (x uniform in [0, 1]) and, the
//! cut being anywhere along the bond, the cell at its inner end lies `d/3` below the surface. Per area
//! there are so many cut bonds N that their conductance makes up for that extent, `G N (2/3) d = D`.
//! With `u_R` the field extrapolated to R and u' its slope there, the flux through the cut bonds is
//! `exchange G N (1 - u_R + u' d/3) = D u'`, hence
//!
//! `1 - u_R = u' (d/3) (2 - exchange) / exchange`:
//!
//! a film of Biot number `Bi = k_m R / D = 3 (R/d) exchange / (2 - exchange)`
//! ([`biot_number`]). Even a well stirred bath (exchange 1) is met a third of a cell diameter beyond R,
//! because the empty site that stands for it does not lie in the surface; this vanishes as `d/R`.
//! [`exchange_of`] gives the exchange that a film asks for; the largest, 2, puts the bath at R itself.

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

/// Biot number `k_m R / D = 3 (R/d) exchange / (2 - exchange)` of a compact body of radius R in cell
/// diameters (see the [module](self)); infinite at exchange 2, 0 at exchange 0.
#[must_use]
pub const fn biot_number(exchange: f64, radius_in_diameters: f64) -> f64 {
    3.0 * radius_in_diameters * exchange / (2.0 - exchange)
}

/// The exchange at which a compact body of radius R in cell diameters has that Biot number,
/// `2 / (1 + 3 (R/d) / Bi)`, in [0, 2].
#[must_use]
pub const fn exchange_of(biot_number: f64, radius_in_diameters: f64) -> f64 {
    2.0 / (1.0 + 3.0 * radius_in_diameters / biot_number)
}

/// Viability of a body whose cells receive that support: `V = n / sum_i (1 / S_i)`, the harmonic mean;
/// 0 if any `S_i` is 0, NaN if any is NaN or there is no cell.
#[must_use]
pub fn viability(support: &[f64]) -> f64 {
    support.len() as f64 / support.iter().map(|support| support.recip()).sum::<f64>()
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

    /// Thiele modulus of first-order uptake in a compact body of radius R in cell diameters,
    /// `phi = R sqrt(k / D)` with `k = q_max / (K V_cell)` (Thiele 1939).
    ///
    /// On the lattice `sum_12 (c_j - c_i) = 2 d^2 lap c`, so `k d^2 / D = demand / (2 kappa)`.
    #[must_use]
    pub fn thiele_modulus(&self, radius_in_diameters: f64) -> f64 {
        radius_in_diameters * (self.demand / (2.0 * self.kappa)).sqrt()
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
