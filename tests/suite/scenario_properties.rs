//! Whatever the text, the reader answers with settings or with faults, and never panics; what it
//! accepts survives being spelled out.

#![expect(clippy::float_cmp, reason = "numbers must come through to the last bit")]

use proptest::prelude::*;
use somadawn::scenario::template::TEMPLATES;
use somadawn::scenario::{Override, ScenarioError, Settings};

/// Reads `text`; faults must have messages, places within the text, and remedies that do not
/// panic.
fn read(text: &str, overrides: &[Override]) -> Option<Settings> {
    match Settings::from_toml_str("pond", text, overrides) {
        Ok(settings) => Some(settings),
        Err(ScenarioError::Faulty(faults)) => {
            assert!(!faults.faults.is_empty());
            for fault in &faults.faults {
                assert!(!fault.to_string().is_empty());
                let _ = (fault.kind.remedy(), fault.place(), fault.is_drawable());
                let mut drawn = String::new();
                let handler =
                    miette::GraphicalReportHandler::new_themed(miette::GraphicalTheme::none());
                if fault.is_drawable() {
                    handler.render_report(&mut drawn, fault).expect("it can be drawn");
                }
            }
            None
        }
        Err(other) => panic!("{other}"),
    }
}

fn templates() -> impl Strategy<Value = String> {
    prop::sample::select(TEMPLATES).prop_map(|template| template.text().expect("no faults"))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(256))]

    #[test]
    fn any_text_is_answered(text in any::<String>(), key in any::<String>()) {
        read(&text, &[Override::set(key)]);
    }

    #[test]
    fn any_toml_like_text_is_answered(
        text in "(\\[{0,2}[a-z.]{0,12}\\]{0,2}\n|[a-z_.\"]{1,12} ?= ?[-0-9a-z.\"'\\[\\]{},é\r]{0,12}\n|#.{0,8}\n){0,12}",
    ) {
        read(&text, &[]);
    }

    /// A template with a few characters replaced.
    #[test]
    fn tampered_templates_are_answered(
        text in templates(),
        edits in prop::collection::vec((any::<prop::sample::Index>(), any::<char>()), 1..6),
    ) {
        let mut characters: Vec<char> = text.chars().collect();
        for (place, character) in edits {
            let place = place.index(characters.len());
            characters[place] = character;
        }
        let text: String = characters.into_iter().collect();
        if let Some(settings) = read(&text, &[]) {
            prop_assert_eq!(read(&settings.to_toml(), &[]), Some(settings));
        }
    }

    #[test]
    fn accepted_numbers_survive_being_spelled_out(
        seed in 0..=i64::MAX.unsigned_abs(),
        hazard in 1e-12..1e6_f64,
        exponent in 1e-6..20_f64,
        start in -12.0..12_f64,
        range in 0.0..1e6_f64,
        bath in 1e-6..1e5_f64,
        dispersal in 1e-3..1e6_f64,
    ) {
        let overrides = [
            Override::seed(seed),
            Override::number("--set", "life.adult_hazard_per_h", hazard),
            Override::number("--set", "returns.fecundity.exponent", exponent),
            Override::number("--set", "traits.start.noise", start),
            Override::number("--set", "support.range_diameters", range),
            Override::number("--set", "nutrient.bath_mM", bath),
            Override::set("habitat.layout=torus"),
            Override::number("--set", "habitat.dispersal_sites", dispersal),
        ];
        let settings = read("title = 'x'", &overrides).expect("all in range");
        prop_assert_eq!(settings.seed, seed);
        prop_assert_eq!(settings.life.adult_hazard_per_h, hazard);
        prop_assert_eq!(read(&settings.to_toml(), &[]), Some(settings));
    }
}
