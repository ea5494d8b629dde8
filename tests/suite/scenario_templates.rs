//! Templates and the nine scenarios of `configs`: complete, commented, without faults.

use somadawn::scenario::Settings;
use somadawn::scenario::registry::{entries, tables};
use somadawn::scenario::template::{TEMPLATES, Template};

fn read(name: &str, text: &str) -> Settings {
    Settings::from_toml_str(name, text, &[]).unwrap_or_else(|error| panic!("{name}: {error:?}"))
}

#[test]
fn every_template_reads_back_to_its_settings() {
    for template in TEMPLATES {
        let text = template.text().expect("templates have no faults");
        let settings = template.settings().expect("templates have no faults");
        assert_eq!(read(template.name, &text), settings, "{}", template.name);
    }
}

#[test]
fn the_full_template_names_every_key_with_meaning_and_unit() {
    let text = Template::named("full").and_then(|full| full.text().ok()).expect("it is there");
    for entry in entries() {
        let line = text.lines().find(|line| {
            line.trim_start_matches("# ").starts_with(&format!("{} = ", entry.name()))
        });
        assert!(line.is_some(), "{}", entry.path());
        let words: Vec<_> = text.split_whitespace().filter(|word| *word != "#").collect();
        let words = words.join(" ");
        assert!(words.contains(entry.meaning()), "{}", entry.meaning());
    }
}

#[test]
fn the_full_template_holds_the_defaults() {
    let full = Template::named("full").and_then(|full| full.text().ok()).expect("it is there");
    let mut settings = read("full", &full);
    settings.title = "x".to_owned();
    assert_eq!(settings, read("bare", "title = \"x\""));
    assert_eq!(settings, Settings::example("x"));
}

#[test]
fn later_work_stands_in_no_template() {
    for template in TEMPLATES {
        let text = template.text().expect("templates have no faults");
        assert!(!text.contains("[scan") && !text.contains("\"neighbours\""), "{}", template.name);
    }
}

/// Tables that a template does not have stand there as comments, with what their absence means.
#[test]
fn optional_tables_stand_as_comments() {
    let full = Template::named("full").and_then(|full| full.text().ok()).expect("it is there");
    let words: Vec<_> = full.split_whitespace().filter(|word| *word != "#").collect();
    let words = words.join(" ");
    for table in tables() {
        let Some(absent) = table.absent else { continue };
        assert!(full.contains(&format!("\n# [{}]\n", table.path)), "{}", table.path);
        assert!(words.contains(&format!("without this table, {absent}.")), "{absent}");
    }
}

#[test]
fn each_config_states_its_hypothesis() {
    let mut count = 0;
    for file in std::fs::read_dir("configs").expect("configs is there").map(Result::unwrap) {
        let path = file.path();
        if path.extension().is_none_or(|extension| extension != "toml") {
            continue;
        }
        let text = std::fs::read_to_string(&path).expect("it is text");
        assert!(text.starts_with("# Hypothesis"), "{}", path.display());
        let settings = read(&path.display().to_string(), &text);
        assert!(settings.title.contains("Ostrel ponds"), "{}", settings.title);
        let stem = path.file_stem().and_then(|stem| stem.to_str()).expect("a name");
        assert!(Template::named(stem).is_some(), "{stem} is no template");
        count += 1;
    }
    assert_eq!(count + 1, TEMPLATES.len());
}
