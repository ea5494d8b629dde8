//! What `check` derives where bodies are worked out in space, against closed forms and handbook
//! numbers, and its warnings there, each on its side of its limit.

use approx::assert_relative_eq;
use serde_json::Value;

use crate::command_check::{check, warnings};
use crate::command_fixture::{Desk, keys};

const NUTRIENT: &str = "nutrient.exchange=1";

fn number(document: &Value, place: &str) -> f64 {
    document.pointer(place).and_then(Value::as_f64).unwrap_or_else(|| panic!("{place}"))
}

/// Volume of a site of the fcc lattice, `d^3 / sqrt 2` (Conway & Sloane 1999), um^3.
fn site_um3(diameter_um: f64) -> f64 {
    diameter_um.powi(3) / std::f64::consts::SQRT_2
}

#[test]
fn exactly_the_fields_of_the_contract() {
    let document = check(&[NUTRIENT, "support.leak=0", "body.adult_cells=16"]);
    let fields = [
        "critical_diameter_um",
        "depth_um",
        "income_lost_share",
        "largest_fed_cells",
        "thiele_modulus",
    ];
    assert_eq!(keys(&document["transport"]), fields);
    assert_eq!(keys(&document["support"]), ["range_over_radius"]);
    // Without nutrient there is no modulus and no critical size; without upkeep no cell starves.
    let waste = check(&["waste.exchange=1", "body.adult_cells=16"]);
    for null in ["thiele_modulus", "critical_diameter_um", "largest_fed_cells"] {
        assert_eq!(waste["transport"][null], Value::Null, "{null}");
    }
    assert!(number(&waste, "/transport/income_lost_share") > 0.0);
}

/// Oxygen in air-saturated fresh water at 25 C: C0 = 0.258 mol/m^3 (8.26 mg/L, the table of
/// EN 25814) and D = 2.10e-9 m^2/s (Cussler, Diffusion). Uptake q in mol/(m^3 s) and the diameter in
/// mm, `2 sqrt(6 D C0 / q)` (Hill 1928, Proc. R. Soc. B 104:39), worked out in double precision by a
/// program of its own. Handbook values of D span 2.00 to 2.42e-9 m^2/s, 20 %, hence 10 % of a
/// diameter: "about 1 mm" is a choice of inputs.
const CRITICAL_MM: [(f64, f64); 5] = [
    (0.002, 2.549_824),
    (0.005, 1.612_650),
    (0.010, 1.140_316),
    (0.013, 1.000_123),
    (0.020, 0.806_325),
];

#[test]
fn the_critical_diameter_of_the_handbook() {
    for (diameter_um, size) in [(10.0, "10"), (100.0, "100")] {
        for (q, millimetres) in CRITICAL_MM {
            // 1 mol/(m^3 s) is 1 mM/s, 1e-3 fmol/(um^3 s).
            let uptake = q * 1e-3 * 3600.0 * site_um3(diameter_um);
            let uptake = format!("nutrient.uptake_fmol_per_h={uptake}");
            let document = check(&[
                "nutrient.bath_mM=0.258",
                "nutrient.diffusivity_um2_per_s=2100",
                &uptake,
                &format!("body.cell_diameter_um={size}"),
                "body.adult_cells=2",
            ]);
            let found = number(&document, "/transport/critical_diameter_um") / 1e3;
            // The table's seven digits.
            assert_relative_eq!(found, millimetres, max_relative = 1e-6);
        }
    }
}

#[test]
fn the_critical_diameter_is_told_in_words() {
    let uptake = 0.013 * 1e-3 * 3600.0 * site_um3(10.0);
    let text = format!(
        "title = \"Oxygen\"\n[body]\nadult_cells = 64\n[nutrient]\nbath_mM = 0.258\n\
         diffusivity_um2_per_s = 2100\nuptake_fmol_per_h = {uptake}"
    );
    let ran = Desk::with(text).run(&["check", "pond.toml"]);
    assert_eq!(ran.code, 0, "{}", ran.err);
    let line = ran.out.lines().find(|line| line.starts_with("critical diameter"));
    assert_eq!(
        line,
        Some(
            "critical diameter          1000 um: in a ball beyond it the centre is empty if uptake \
             never slackens"
        )
    );
}

/// `phi = R sqrt(k / D)`, `k = q_max / (K V)` (Thiele 1939, Ind. Eng. Chem. 31:916): with 20 fmol/h,
/// K = 0.02 mM = 2e-5 fmol/um^3 and D = 500 um^2/s.
#[test]
fn the_thiele_modulus_of_each_plan() {
    let rate_per_s = 20.0 / (2e-5 * site_um3(10.0)) / 3600.0;
    // The ball of 64 sites; half a cell where every cell touches the water.
    let ball_um = (3.0 * 64.0 * site_um3(10.0) / (4.0 * std::f64::consts::PI)).cbrt();
    for (plan, depth_um) in [("clump", ball_um), ("tree", ball_um), ("chain", 5.0), ("shell", 5.0)]
    {
        let plan = format!("body.plan={plan}");
        let document = check(&[NUTRIENT, &plan, "body.adult_cells=64", "body.cell_diameter_um=10"]);
        assert_relative_eq!(
            number(&document, "/transport/thiele_modulus"),
            depth_um * (rate_per_s / 500.0).sqrt(),
            max_relative = 1e-12
        );
        assert_relative_eq!(
            number(&document, "/transport/depth_um"),
            depth_um,
            max_relative = 1e-12
        );
    }
}

/// One cell: `12 G (c - c_bath) + q_max c / (K + c) = 0` with `G = D d / (2 sqrt 2)`, a quadratic.
#[test]
fn income_lost_of_a_single_cell_by_hand() {
    let document = check(&[
        "nutrient.uptake_fmol_per_h=2000",
        "body.adult_cells=1",
        "body.cell_diameter_um=10",
    ]);
    let conductance = 500.0 * 3600.0 * 10.0 / 8.0_f64.sqrt() * 1e-3;
    let (bath, half, pull) = (0.05, 0.02, 2000.0 / (12.0 * conductance));
    // c^2 + (K - c_bath + pull) c - K c_bath = 0.
    let b = half - bath + pull;
    let c = f64::midpoint(-b, (b * b + 4.0 * half * bath).sqrt());
    let income = c / (half + c) * (half + bath) / bath;
    let lost = number(&document, "/transport/income_lost_share");
    assert_relative_eq!(lost, 1.0 - income, max_relative = 1e-6);
    assert!(lost > 0.01);
}

#[test]
fn reach_over_radius() {
    // Two diameters over the radius of the ball of 64 sites, 2.2106 diameters; over half a chain.
    let clump = check(&["support.range_diameters=2", "body.adult_cells=64"]);
    let radius = (3.0 * 64.0 * site_um3(1.0) / (4.0 * std::f64::consts::PI)).cbrt();
    let found = number(&clump, "/support/range_over_radius");
    assert_relative_eq!(found, 2.0 / radius, max_relative = 1e-12);
    let chain = check(&["support.range_diameters=2", "body.adult_cells=64", "body.plan=chain"]);
    assert_relative_eq!(number(&chain, "/support/range_over_radius"), 2.0 / 32.0);
}

/// A hungry pond: upkeep takes half of the income, and cells take up fifty times the default.
const HUNGRY: [&str; 3] =
    ["nutrient.uptake_fmol_per_h=1000", "budget.upkeep_eu_per_h=0.5", "body.cell_diameter_um=10"];

#[test]
fn bodies_starve_beyond_the_largest_fed_one() {
    let sized = |cells: usize| {
        let size = format!("body.adult_cells={cells}");
        let settings = [&HUNGRY[..], &[size.as_str()]].concat();
        (check(&settings)["transport"]["largest_fed_cells"].clone(), warnings(&settings))
    };
    let (largest, _) = sized(16);
    let largest = usize::try_from(largest.as_u64().expect("some body starves")).expect("a size");
    assert!((13..1000).contains(&largest), "{largest}");
    let starves = |found: &[String]| found.iter().any(|name| name == "body-starves");
    let (same, at_the_limit) = sized(largest);
    assert_eq!(same, largest, "the largest fed body does not depend on the adult's size");
    assert!(!starves(&at_the_limit), "{at_the_limit:?}");
    let (_, beyond) = sized(largest + 1);
    assert!(starves(&beyond), "{beyond:?}");
}

/// Each warning is given on its side of its limit, and not on the other.
#[test]
fn each_warning_of_space_at_its_limit() {
    let exposure = "traits.cues=[\"exposure\"]";
    let income = "traits.cues=[\"income\"]";
    let noise = "traits.cues=[\"noise\"]";
    let lineage = "traits.cues=[\"lineage\"]";
    let small = "body.adult_cells=64";
    let torus = "habitat.layout=torus";
    let hungry = |setting: &'static str| [&HUNGRY[..], &[small, setting]].concat();
    let cases: Vec<(&str, Vec<&str>, Vec<&str>)> = vec![
        (
            "no-interior-cell",
            vec!["body.plan=chain", small, exposure],
            vec!["body.plan=clump", small, exposure],
        ),
        (
            "no-interior-cell",
            vec!["body.plan=shell", small, exposure],
            vec!["body.plan=tree", small, exposure],
        ),
        (
            "no-interior-cell",
            vec!["body.plan=chain", small, exposure],
            vec!["body.plan=chain", small, noise],
        ),
        (
            "cue-cannot-vary",
            vec!["body.plan=shell", small, exposure],
            vec!["body.plan=tree", small, exposure],
        ),
        ("cue-cannot-vary", vec![small, income], vec![small, income, NUTRIENT]),
        // Two cells lie alike; in a chain of three the middle one has fewer open sites.
        (
            "cue-cannot-vary",
            vec!["body.plan=chain", "body.adult_cells=2", income, NUTRIENT],
            vec!["body.plan=chain", "body.adult_cells=3", income, NUTRIENT],
        ),
        ("cue-cannot-vary", vec!["body.adult_cells=1", noise], vec!["body.adult_cells=2", noise]),
        (
            "cue-cannot-vary",
            vec![small, "life.propagule_cells=64", lineage],
            vec![small, "life.propagule_cells=64", lineage, "budget.turnover_per_h=0.001"],
        ),
        ("never-matures", hungry("nutrient.exchange=0.1"), hungry("nutrient.exchange=1")),
        // Radius of 64 sites: 2.2106 diameters, a quarter of it 0.5527.
        (
            "help-falls-short",
            vec![small, "support.range_diameters=0.552"],
            vec![small, "support.range_diameters=0.553"],
        ),
        (
            "help-falls-short",
            vec!["body.adult_cells=2", "support.range_diameters=0"],
            vec!["body.adult_cells=1", "support.range_diameters=0"],
        ),
        // 256 sites are 16 by 16: half the width is 8. At 0.309 site widths four fifths land at home:
        // erf(0.5 / (0.309 sqrt 2))^2 = 0.8.
        (
            "torus-kernel",
            vec![torus, small, "habitat.dispersal_sites=8"],
            vec![torus, small, "habitat.dispersal_sites=7.99"],
        ),
        (
            "torus-kernel",
            vec![torus, small, "habitat.dispersal_sites=0.308"],
            vec![torus, small, "habitat.dispersal_sites=0.310"],
        ),
        // Replacements cost 8 tau per cell and hour; a cell at soma share 1/2 keeps half an eu.
        (
            "turnover-too-costly",
            vec!["traits.baseline=0", small, "budget.turnover_per_h=0.0626"],
            vec!["traits.baseline=0", small, "budget.turnover_per_h=0.0624"],
        ),
    ];
    for (name, given, not_given) in cases {
        let named = |settings: &[&str]| warnings(settings).iter().any(|found| found == name);
        assert!(named(&given), "{name} is not given with {given:?}: {:?}", warnings(&given));
        assert!(!named(&not_given), "{name} is given with {not_given:?}");
    }
}

/// What a warning says, if it is given.
fn told(name: &str, settings: &[&str]) -> Option<String> {
    let document = check(settings);
    let given = document["warnings"].as_array().expect("a list").iter();
    let text = |warning: &Value| warning["text"].as_str().expect("a text").to_owned();
    given.filter(|warning| warning["name"] == name).map(text).next()
}

/// Sizes at which single bodies stop differ where divisions are not in step; a shell of 64 cells is fed,
/// but the compact body as which it grows is not.
#[test]
fn bodies_that_starve_only_now_and_then_are_told_of() {
    let small = "body.adult_cells=64";
    let with = |settings: &[&'static str]| {
        [&HUNGRY[..], &[small, "nutrient.uptake_fmol_per_h=600"], settings].concat()
    };
    let uneven = |exchange| told("never-matures", &with(&["budget.division_cv=0.2", exchange]));
    let some = uneven("nutrient.exchange=0.2").expect("a warning");
    assert!(some.contains(" of 8 bodies stopped growing at about "), "{some}");
    assert_eq!(uneven("nutrient.exchange=0.3"), None);
    let all = uneven("nutrient.exchange=0.1").expect("a warning");
    assert!(all.starts_with("none of 8 bodies reached 64 cells"), "{all}");

    let shell = |exchange| told("body-starves", &with(&["body.plan=shell", exchange]));
    let growing = shell("nutrient.exchange=0.3").expect("a warning");
    assert!(growing.starts_with("an adult body is fed, but "), "{growing}");
    assert!(growing.contains(" of 8 lost cells to hunger on the way"), "{growing}");
    assert!(growing.contains("a shell grows as a compact body"), "{growing}");
    assert_eq!(shell("nutrient.exchange=1"), None);
    let adult = shell("nutrient.exchange=0.2").expect("a warning");
    assert!(adult.starts_with("bodies of 64 cells are asked for"), "{adult}");
}

/// Replacements cost 8 tau per cell and hour, of half an eu.
#[test]
fn ruinous_turnover_is_told_in_readable_numbers() {
    let turnover = |rate| {
        let settings = ["traits.baseline=0", "body.adult_cells=64", rate];
        told("turnover-too-costly", &settings).expect("a warning")
    };
    let dear = turnover("budget.turnover_per_h=6.2");
    assert!(dear.starts_with("replacing dead cells costs 99.20 times what"), "{dear}");
    let dearest = turnover("budget.turnover_per_h=10");
    assert!(
        dearest.starts_with("replacing dead cells costs more than 100 times what"),
        "{dearest}"
    );
}

#[test]
fn nothing_is_said_where_space_does_no_harm() {
    // Returns that diminish, cells of 100 um that eat little, help that reaches 0.36 of the body's radius, a few
    // replacements in a life, and kin nearby: there is nothing to warn of.
    let calm = [
        NUTRIENT,
        "waste.exchange=1",
        "support.range_diameters=2",
        "budget.turnover_per_h=0.0001",
        "habitat.layout=torus",
        "traits.cues=[\"noise\"]",
        "returns.viability.exponent=0.8",
        "returns.fecundity.exponent=0.8",
    ];
    assert_eq!(warnings(&calm), [""; 0]);
}
