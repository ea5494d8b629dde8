//! What bodies a programme builds.

use super::body::Composition;
use super::classes::BodyClass;
use super::division::division_index_of_classes;
use super::fitness::{Centre, Model, Norm};
use super::quadrature::for_each_combination;
use super::reaction_norm::{Programme, sigmoid};

/// The bodies of a programme, on average.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Outcome {
    /// Expected division index of a body.
    pub division_index: f64,
    /// Expected share of soma cells.
    pub soma_fraction: f64,
    /// The commonest class of body; of equally common ones the least differentiated. A kind of
    /// which a body has less than half a cell counts as absent (counts are whole but at the nodes
    /// of a quadrature).
    pub class: BodyClass,
}

impl Model {
    /// What bodies a programme builds, averaged over compositions and random fates.
    #[must_use]
    pub fn outcome(&self, programme: &Programme) -> Outcome {
        let norm = Norm::from(programme);
        let mut tally = Tally::default();
        for (weight, body) in self.bodies() {
            self.tally_body(&norm, body, *weight, &mut tally);
        }
        if let Some(placed) = &self.placed {
            placed.for_each_mature_body(&norm, |cells, probability| {
                tally.add(self.classify(cells, false), cells, probability);
            });
        }
        let likelihood = |class: &BodyClass| tally.classes[*class as usize];
        let commonest = BodyClass::ALL.into_iter().rev();
        let commonest = commonest.max_by(|a, b| likelihood(a).total_cmp(&likelihood(b)));
        Outcome {
            division_index: tally.division_index,
            soma_fraction: tally.soma_fraction,
            class: commonest.unwrap_or(BodyClass::Alike),
        }
    }

    fn tally_body(&self, norm: &Norm<f64>, body: &Composition, weight: f64, tally: &mut Tally) {
        let centre = Centre::of(body);
        let counts: Vec<f64> = body.classes().iter().map(|(_, count)| *count).collect();
        let [up, down] = norm.noise_steps();
        let shares: Vec<[f64; 2]> = body
            .classes()
            .iter()
            .map(|(kind, _)| norm.steady_logit(*kind, &centre))
            .map(|logit| [sigmoid(logit + up), sigmoid(logit + down)])
            .collect();
        let mut cells = vec![(0.0, 0.0); 2 * counts.len()];
        let mut count_body = |plus: &[f64], probability: f64| {
            for (class, [high, low]) in shares.iter().enumerate() {
                cells[2 * class] = (*high, plus[class]);
                cells[2 * class + 1] = (*low, counts[class] - plus[class]);
            }
            tally.add(self.classify(&cells, body.is_endless()), &cells, probability * weight);
        };
        let p = norm.noise_probability;
        if norm.is_deterministic() || body.is_endless() {
            count_body(&counts.iter().map(|count| count * p).collect::<Vec<_>>(), 1.0);
        } else {
            for_each_combination(&self.noise_rules(&counts, p), count_body);
        }
    }

    /// Class of a body, and its share of soma cells.
    fn classify(&self, cells: &[(f64, f64)], endless: bool) -> (BodyClass, f64) {
        let count = |is: &dyn Fn(f64) -> bool| -> f64 {
            cells.iter().filter(|(z, _)| is(*z)).map(|(_, count)| count).sum()
        };
        let germ = count(&|z| z < self.germ_below);
        let soma = count(&|z| z > self.soma_above);
        let all = count(&|_| true);
        let present = |kind: f64| if endless || kind >= 0.5 { kind } else { 0.0 };
        let class = BodyClass::of(present(germ), present(soma), present(all - germ - soma));
        (class, soma / all)
    }
}

#[derive(Default)]
struct Tally {
    division_index: f64,
    soma_fraction: f64,
    classes: [f64; BodyClass::ALL.len()],
}

impl Tally {
    fn add(&mut self, (class, soma): (BodyClass, f64), cells: &[(f64, f64)], probability: f64) {
        self.division_index += probability * division_index_of_classes(cells);
        self.soma_fraction += probability * soma;
        self.classes[class as usize] += probability;
    }
}
