//! Placed bodies against brute force: R0 over all fates, derivatives by differences, drawn fates within
//! their own error.

use approx::assert_relative_eq;
use somadawn::theory::reaction_norm::sigmoid;
use somadawn::theory::{
    CellKind, Cue, CueSet, LifeHistory, Model, PlacedBodies, PlacedCell, Programme, ReturnCurve,
    Spread, TaskReturn,
};

use crate::theory_models::only;
use crate::theory_space_models::{Table, adult, bare_life_of, earning, of_body};

/// A body with all that space can do to it.
struct Case {
    cells: Vec<PlacedCell>,
    table: Table,
    life: LifeHistory,
    returns: [TaskReturn; 2],
    turnover_per_h: f64,
}

impl Case {
    /// `cells` cells in a leaky ring, unequally fed, taxed, under all hazards.
    fn ring(cells: usize, range: f64, turnover_per_h: f64) -> Self {
        let bonds: Vec<_> = (0..cells).map(|cell| (cell, (cell + 1) % cells)).collect();
        let leaks: Vec<f64> = (0..cells).map(|cell| 0.3 * (cell % 3) as f64).collect();
        let cell = |i: usize| PlacedCell {
            kind: CellKind { label: [-1, 1, 1][i % 3], exposed: !i.is_multiple_of(3) },
            income: 1.0 / (1.0 + 0.2 * i as f64),
        };
        let curve = ReturnCurve::sigmoid(0.5, 1.8).expect("legal");
        let viability = TaskReturn { curve, surface_effect: 1.2, interior_effect: 0.7 };
        let curve = ReturnCurve::power(1.4).expect("legal");
        let fecundity = TaskReturn { curve, surface_effect: 0.8, interior_effect: 1.1 };
        let life = LifeHistory {
            extrinsic_hazard_per_h: 0.3,
            division_cost_eu: 4.0,
            income_eu_per_h: 1.3,
            propagule_cost_eu: 2.0,
            cost_per_unit: 0.02,
            ..bare_life_of(cells)
        };
        Self {
            cells: (0..cells).map(cell).collect(),
            table: Table::of_bonds(&bonds, &leaks, range),
            life,
            returns: [viability, fecundity],
            turnover_per_h,
        }
    }

    fn model(&self) -> Model {
        let body = adult(self.cells.clone(), Some(self.table.clone()));
        let bodies = PlacedBodies::new([(1.0, body)], self.turnover_per_h);
        let cues: CueSet = Cue::ALL.into_iter().collect();
        Model::of_placed(self.life.clone(), self.returns.clone(), cues, bodies)
    }

    /// R0 from its definition: the mean over all 2^n draws of noise.
    fn by_every_fate(&self, programme: &Programme) -> f64 {
        let (n, luck) = (self.cells.len(), sigmoid(programme.noise_bias));
        (0..1_u32 << n).fold(0.0, |expected, fate| {
            let plus: Vec<bool> = (0..n).map(|cell| fate >> cell & 1 == 1).collect();
            let chance = plus.iter().map(|plus| if *plus { luck } else { 1.0 - luck });
            expected + chance.product::<f64>() * self.of_fate(programme, &plus)
        })
    }

    fn of_fate(&self, programme: &Programme, plus: &[bool]) -> f64 {
        let n = self.cells.len() as f64;
        let mean = |of: &dyn Fn(&PlacedCell) -> f64| self.cells.iter().map(of).sum::<f64>() / n;
        let [label, exposed, income] = [
            mean(&|cell| f64::from(cell.kind.label)),
            mean(&|cell| f64::from(u8::from(cell.kind.exposed))),
            mean(&|cell| cell.income),
        ];
        let luck = sigmoid(programme.noise_bias);
        let tax = 1.0 - self.life.cost_per_unit * programme.total_responsiveness();
        let share = |(cell, plus): (&PlacedCell, &bool)| {
            let noise = if *plus { 1.0 } else { -1.0 } - (2.0 * luck - 1.0);
            programme.soma_share(&[
                noise,
                f64::from(cell.kind.label) - label,
                f64::from(u8::from(cell.kind.exposed)) - exposed,
                cell.income / income - 1.0,
            ])
        };
        let shares: Vec<f64> = self.cells.iter().zip(plus).map(share).collect();
        let cells = || self.cells.iter().zip(&shares);
        let germ: f64 = cells().map(|(cell, z)| tax * cell.income * (1.0 - z)).sum();
        let spent =
            self.turnover_per_h * n * self.life.division_cost_eu / self.life.income_eu_per_h;
        let left = (1.0 - spent / germ).max(0.0);
        let [viability, fecundity] = &self.returns;
        let output: Vec<f64> =
            cells().map(|(c, z)| viability.value(tax * c.income * z, c.kind.exposed)).collect();
        let births = cells()
            .map(|(c, z)| fecundity.value(left * tax * c.income * (1.0 - z), c.kind.exposed));
        let births: f64 = births.sum();
        let mut support = vec![0.0; output.len()];
        self.table.spread(&output, &mut support);
        let v = n / support.iter().map(|s| 1.0 / s).sum::<f64>();
        let hazard = self.life.extrinsic_hazard_per_h + self.life.adult_hazard_per_h / v;
        births * self.life.income_eu_per_h / (self.life.propagule_cost_eu * hazard)
    }
}

fn cases() -> [Case; 3] {
    [Case::ring(6, 1.4, 0.0), Case::ring(7, 0.6, 0.02), Case::ring(8, 5.0, 0.05)]
}

#[test]
fn r0_is_the_mean_over_all_fates() {
    for case in cases() {
        let model = case.model();
        for (noise, noise_bias) in [(0.0, 0.0), (0.8, 0.0), (2.5, -0.7), (6.0, 1.5)] {
            let responsiveness = [noise, -0.8, 1.1, 0.6];
            let programme = Programme { baseline: 0.3, responsiveness, noise_bias };
            let found = model.expected_propagules(&programme);
            assert_relative_eq!(found, case.by_every_fate(&programme), max_relative = 1e-12);
        }
    }
}

/// Gradient and curvature of every cue against central differences of brute force, on the side to
/// which the derivative belongs (the tax puts a kink at 0); Richardson-extrapolated, steps 4e-3.
#[test]
fn derivatives_are_those_of_brute_force() {
    for case in cases() {
        // Without the tax there is no kink, and differences may straddle 0.
        let untaxed = LifeHistory { cost_per_unit: 0.0, ..case.life.clone() };
        let case = Case { life: untaxed, ..case };
        let model = case.model();
        let generalist = model.generalist();
        for selection in model.selection_at(&generalist) {
            let fitness = |g: f64| {
                let mut programme = generalist.programme();
                programme.responsiveness[selection.cue.index()] = g;
                case.by_every_fate(&programme).ln()
            };
            let (h, middle) = (4e-3, fitness(0.0));
            let [near, far] = [h, 2.0 * h].map(|h| (fitness(h), fitness(-h)));
            let first = (8.0 * (near.0 - near.1) - (far.0 - far.1)) / (12.0 * h);
            let second =
                (16.0 * (near.0 + near.1) - (far.0 + far.1) - 30.0 * middle) / (12.0 * h * h);
            assert!((first - selection.gradient).abs() < 1e-8, "{first} {selection:?}");
            assert!((second - selection.curvature).abs() < 1e-7, "{second} {selection:?}");
        }
        assert!(model.selection_at(&generalist)[3].gradient.abs() > 1e-6);
    }
}

/// With a tax the gradient of noise is the tax's alone, and the curvature holds the tax's own.
#[test]
fn a_taxed_cue_has_the_derivatives_of_its_better_side() {
    for case in cases() {
        let model = case.model();
        let generalist = model.generalist();
        let noise = model.selection_at(&generalist)[0];
        let fitness = |g: f64| {
            let mut programme = generalist.programme();
            programme.responsiveness[0] = g;
            case.by_every_fate(&programme).ln()
        };
        // One-sided differences of fourth order.
        let h = 4e-3;
        let [f0, f1, f2, f3, f4, f5] = [0.0, 1.0, 2.0, 3.0, 4.0, 5.0].map(|k| fitness(k * h));
        let first = (-25.0 * f0 + 48.0 * f1 - 36.0 * f2 + 16.0 * f3 - 3.0 * f4) / (12.0 * h);
        let second = (45.0 * f0 - 154.0 * f1 + 214.0 * f2 - 156.0 * f3 + 61.0 * f4 - 10.0 * f5)
            / (12.0 * h * h);
        assert!((first - noise.gradient).abs() < 1e-7, "{first} {noise:?}");
        assert!((second - noise.curvature).abs() < 1e-4, "{second} {noise:?}");
    }
}

/// 12 cells are beyond summing in the program; all 4,096 fates are summed here. The last word on the
/// best programme is drawn (fixed seed; 2 x 256 fates): it lies within 4.9 of its own standard errors (false
/// alarm about 1e-6 each).
#[test]
fn drawn_fates_are_as_good_as_their_standard_error() {
    for range in [1.0, 3.0] {
        let case = Case::ring(12, range, 0.0);
        let untaxed = LifeHistory { cost_per_unit: 0.0, ..case.life.clone() };
        let returns = [case.returns[0].clone(), case.returns[0].clone()];
        let case = Case { life: untaxed, returns, ..case };
        let model = case.model();
        let generalist = model.generalist();
        let best = model.best_programme(&generalist);
        let exact = case.by_every_fate(&best.programme);
        let error = best.gain.standard_error * best.r0;
        assert!((best.r0 - exact).abs() <= 4.9 * error + 1e-9 * exact, "{best:?} {exact}");
        let gain = (best.r0 / generalist.r0).ln();
        assert_relative_eq!(best.gain.ln_r0, gain, max_relative = 1e-9, epsilon = 1e-12);
    }
}

/// Just below the global threshold of huddled cells nothing differentiated is better, and no luck of the
/// draw makes it seem so: 12 cells with wide reach, exponents alike. Pooled, full specialists come
/// even at `1 - log2(1 - 1/12)/2 = 1.0628`; with less than endless reach later.
#[test]
fn chance_is_not_taken_for_a_gain() {
    for range in [1.0, 3.0, 30.0] {
        let body = adult(earning(&[1.0; 12]), Some(Table::of_huddle(12, range)));
        let model = of_body([1.05, 1.05], only(Cue::Noise), body);
        let generalist = model.generalist();
        let best = model.best_programme(&generalist);
        assert!(!best.outdoes(1e-6), "{best:?}");
        assert!(best.r0 <= generalist.r0 * (1.0 + 1e-9), "{best:?}");
        // Either nothing looked better, or fates were drawn to see.
        assert_eq!(best.gain.is_undecided(), best.gain.draws_fates, "{best:?}");
    }
    // Well above it, what is found better is so.
    let body = adult(earning(&[1.0; 12]), Some(Table::of_huddle(12, 30.0)));
    let model = of_body([1.2, 1.2], only(Cue::Noise), body);
    assert!(model.best_programme(&model.generalist()).outdoes(1e-6));
}
