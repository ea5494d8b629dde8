//! Invented rows for the checks of records and reports.

use somadawn::record::{
    BodyRow, CensusRow, Ending, Outcome, Prediction, ReplicateRecord, ReplicateRow, RunIdentity,
    Stage, Throughput,
};
use somadawn::theory::{BodyClass, Verdict};

pub(crate) const SCENARIO: &str = "title = \"Lantern algae\"\nseed = 7\n";

pub(crate) fn identity() -> RunIdentity {
    RunIdentity::new(SCENARIO, 7)
}

pub(crate) fn another_identity() -> RunIdentity {
    RunIdentity::new(SCENARIO, 8)
}

/// A replicate that ended at generation 1,500 without onset, its cells alike.
pub(crate) fn censored(replicate: u32) -> ReplicateRow {
    ReplicateRow {
        replicate,
        seed: u64::MAX - u64::from(replicate),
        outcome: Outcome::Censored,
        onset_generation: None,
        end_generation: 1_500.0,
        division_index: Some(0.02),
        soma_fraction: Some(0.5),
        class: Some(BodyClass::Alike),
        route_noise: Some(1.0),
        route_lineage: None,
        route_exposure: None,
        route_income: None,
        mean_fitness: Some(1.25),
        adult_cells: Some(60.5),
        never_matured: 3,
    }
}

/// A replicate whose onset was at `generation` and which ended fully differentiated.
pub(crate) fn onset(replicate: u32, generation: f64) -> ReplicateRow {
    ReplicateRow {
        outcome: Outcome::Onset,
        onset_generation: Some(generation),
        division_index: Some(0.9),
        class: Some(BodyClass::Complete),
        ..censored(replicate)
    }
}

/// A replicate that died out at `generation`.
pub(crate) fn extinct(replicate: u32, generation: f64) -> ReplicateRow {
    ReplicateRow {
        outcome: Outcome::Extinct,
        end_generation: generation,
        class: Some(BodyClass::Partial),
        ..censored(replicate)
    }
}

pub(crate) fn census(replicate: u32, generation: f64, division_index: Option<f64>) -> CensusRow {
    CensusRow {
        replicate,
        generation,
        time_h: generation * 220.5,
        colonies: 256,
        adults: 200 + replicate,
        division_index,
        mutual_entropy: division_index.map(|index| index / 3.0),
        mean_soma_share: Some(0.5),
        germ_share: Some(0.25),
        generalist_share: Some(0.5),
        soma_share: Some(0.25),
        bodies_alike: 1,
        bodies_partial: 2,
        bodies_complete: 3,
        parental_age_h: None,
        founder_lines: 9,
        trait_mean: [0.1, 0.2, 0.3, 0.4, 0.5, 0.6],
        trait_variance: [1.0, 2.0, 3.0, 4.0, 5.0, 6.0],
        adult_cells: division_index.map(|_| 60.5),
        never_matured: 3,
        relatedness: [Some(0.5), Some(0.25), division_index, None],
    }
}

pub(crate) fn body(replicate: u32, cell: u32, stage: Stage) -> BodyRow {
    BodyRow {
        replicate,
        stage,
        generation: 10.5,
        site: 12,
        cell,
        x_um: 1.5,
        y_um: -2.5,
        z_um: 0.0,
        soma_share: 0.75,
        income_eu_per_h: 1.0,
        support: 0.5,
        exposed: cell.is_multiple_of(2),
        label: if cell.is_multiple_of(2) { 1 } else { -1 },
    }
}

/// A full record around `row`.
pub(crate) fn record(row: ReplicateRow) -> ReplicateRecord {
    let replicate = row.replicate;
    let censuses = (0..20u32)
        .map(|k| census(replicate, f64::from(k * 10), Some(f64::from(k) / 20.0)))
        .collect();
    let bodies = Stage::ALL
        .into_iter()
        .flat_map(|stage| (0..64).map(move |cell| body(replicate, cell, stage)))
        .collect();
    ReplicateRecord { row, census: censuses, bodies }
}

pub(crate) fn prediction() -> Prediction {
    Prediction { verdict: Verdict::FavouredByDisruption, class: BodyClass::Complete }
}

pub(crate) fn ending(replicates: u32) -> Ending {
    Ending {
        title: "Lantern algae".to_owned(),
        replicates,
        prediction: prediction(),
        throughput: Throughput::new(1_000_000, 2.0, 2),
    }
}
