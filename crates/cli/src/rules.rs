//! `rules`: the rules that look at every sounding.

use crate::output::Output;
use anyhow::Result;
use dewbound_session::trust::{RULES, Thresholds};
use serde_json::json;

/// Lists them.
pub fn run(as_json: bool, output: &mut Output) -> Result<()> {
    let thresholds = Thresholds::default();
    for rule in RULES {
        if as_json {
            let values: serde_json::Map<String, serde_json::Value> = rule
                .thresholds()
                .iter()
                .map(|name| ((*name).to_owned(), json!(thresholds.get(name))))
                .collect();
            let line = json!({
                "rule": rule.id(),
                "title": rule.title(),
                "about": rule.about(),
                "source": rule.source(),
                "thresholds": values,
            });
            output.write(&format!("{line}\n"))?;
        } else {
            output.write(&format!(
                "{}\n  {}\n  {}\n  source: {}\n",
                rule.id(),
                rule.title(),
                rule.about(),
                rule.source()
            ))?;
            for name in rule.thresholds() {
                output.write(&format!("  {name} = {}\n", thresholds.get(name)))?;
            }
        }
    }
    Ok(())
}
