//! What is doubtful about the test report of a unit: that it cannot be read, or that it is not the nameplate's.

use super::{Doubts, Kind};
use crate::engine::transformer::losses::quoted;
use crate::engine::transformer::plausibility;
use crate::engine::working::Silent;
use crate::study::test_report::TestedUnit;

impl Doubts {
    pub(super) fn tested(&mut self, of: (&'static str, &str), tested: &TestedUnit, share: f64) {
        let said = match tested.read(&mut Silent, share) {
            Ok(said) => said,
            Err(why) => {
                let kind = if why.value.is_empty() { Kind::Missing } else { Kind::Contradictory };
                return self.add(of, why.quantity, kind, format!("test report: {why}"));
            }
        };
        let unit = &tested.unit;
        let (p0, pk, total) = (unit.no_load_loss_w, unit.load_loss_w, unit.total_loss_w);
        let plate =
            quoted(&mut Silent, unit.rated_kva, unit.loss_base_kva, p0, pk, total, None).ok();
        let iron = plate.map(|losses| losses.no_load_loss_w).or(p0);
        let copper = plate.map(|losses| losses.load_loss_w);
        let short = said.short.as_ref();
        for odd in plausibility::against_test([
            ("no_load_loss_w", iron, said.open.map(|open| open.no_load_loss_w)),
            ("load_loss_w", copper, short.map(|short| short.corrected.load_loss_w)),
            ("impedance_pct", unit.impedance_pct, short.map(|short| short.impedance_pct)),
        ]) {
            self.add(of, odd.quantity, Kind::Contradictory, format!("{} {}", odd.value, odd.why));
        }
    }
}
