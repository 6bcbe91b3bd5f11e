//! The demo soundings kept in the repository are what the generator makes.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use std::path::Path;

/// Numbers may differ by one in their last digit between machines, whose logarithms differ in the last bit.
fn same_but_for_rounding(kept: &str, made: &str) -> bool {
    let words =
        |text: &str| -> Vec<String> { text.split([' ', ',', '\n']).map(str::to_owned).collect() };
    let (kept, made) = (words(kept), words(made));
    kept.len() == made.len()
        && kept.iter().zip(&made).all(|(a, b)| {
            let digits = |word: &str| word.replace('.', "").parse::<i64>().ok();
            a == b || matches!((digits(a), digits(b)), (Some(a), Some(b)) if (a - b).abs() <= 1)
        })
}

#[test]
fn demo_soundings_are_what_the_generator_makes() {
    let folder = Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/../demo-soundings"));
    let files = dewbound_tests::demo::stories::files();
    for file in &files {
        let kept = std::fs::read_to_string(folder.join(file.name)).expect(file.name);
        assert!(
            same_but_for_rounding(&kept, &file.text),
            "{} differs: run `cargo run -p dewbound-tests --bin make-demo-soundings`",
            file.name
        );
    }
    let kept = std::fs::read_dir(folder).unwrap().count();
    assert_eq!(
        kept,
        files.len(),
        "no file in the folder that the generator doesn't make"
    );
}
