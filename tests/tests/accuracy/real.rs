//! Real soundings, which are not part of the repository.

use crate::crossings::Comparison;
use crate::fast_path::compare;
use dewbound_tests::desk::soundings_of;
use dewbound_tests::open_data;
use dewbound_tests::residuals::Report;
use dewbound_thermo::Method;

pub fn ascents(report: &mut Report) {
    report.section(
        "Fast path: real soundings, three parcels each, against the exact path",
        &[],
    );
    let Some(folder) = open_data::folder("accuracy on real soundings") else {
        let text = format!(
            "NOT RUN: {} names no folder of real observations.",
            open_data::FOLDER
        );
        report.remark(&[&text]);
        return;
    };
    let mut comparison = Comparison::new("real:", "exact path");
    let (mut usable, mut unusable) = (0, 0);
    for path in open_data::files(&folder).unwrap() {
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        let soundings =
            soundings_of(&path).unwrap_or_else(|failure| panic!("{}", failure.line(&name)));
        for analysed in soundings {
            match analysed.profile.environment() {
                Ok(environment) => {
                    usable += 1;
                    compare(&mut comparison, &environment, Method::default());
                }
                Err(_) => unusable += 1,
            }
        }
    }
    comparison.judge(report);
    let text =
        format!("{usable} soundings; {unusable} more hold no ascent (winds only, or no humidity).");
    report.remark(&[&text]);
}
