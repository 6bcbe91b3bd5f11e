//! Writes the demo soundings into `demo-soundings/` (or the folder given).

use std::path::PathBuf;

fn main() -> std::io::Result<()> {
    let folder = std::env::args_os().nth(1).map_or_else(
        || PathBuf::from(concat!(env!("CARGO_MANIFEST_DIR"), "/../demo-soundings")),
        PathBuf::from,
    );
    std::fs::create_dir_all(&folder)?;
    for file in dewbound_tests::demo::stories::files() {
        std::fs::write(folder.join(file.name), &file.text)?;
        println!("{} ({} bytes)", file.name, file.text.len());
    }
    Ok(())
}
