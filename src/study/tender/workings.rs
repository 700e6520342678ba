//! The figures of a tender opened: factors, what each bid costs, the map, what would change the winner, the awards.

use super::award::{BidderPackage, Package};
use super::{Case, Judged, LotResult, TenderResult, margin, working};
use crate::engine::Refusal;
use crate::engine::columns::Lot;
use crate::engine::decision::tender::changes;
use crate::engine::decision::tender::map::{self, WinnerMap};
use crate::engine::decision::tender::packages::{above, together};
use crate::engine::working::{Recorder as _, Step, Working};
use crate::study::StudyError;
use crate::study::explain::{Explained, nth, numbers};

/// Numbers that name a line or were stated as they are.
const LABELS: &[&str] = &["rank", "quantity"];

impl Explained for Case {
    fn called(&self) -> String {
        format!("tender {}", self.sheet.tender.tender)
    }

    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError> {
        Ok(numbers(&self.evaluate(None)?, &[], LABELS))
    }

    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError> {
        match place {
            ["lots", n, place @ ..] => {
                let (lot, n) = nth(&self.sheet.lots, n)?;
                self.lot(w, lot, n, place)
            }
            ["awards", "by_lot", place @ ..] => {
                let result = self.evaluate(None)?;
                self.package(w, &result, &result.awards.by_lot, place)
            }
            ["awards", "packages", n, place @ ..] => {
                let result = self.evaluate(None)?;
                let (BidderPackage { package, .. }, _) = nth(&result.awards.packages, n)?;
                self.package(w, &result, package, place)
            }
            _ => Ok(()),
        }
    }
}

/// The steps that give a symbol.
fn giving(steps: Vec<Step>, symbol: &str) -> impl Iterator<Item = Step> + '_ {
    steps.into_iter().filter(move |step| step.formula.symbol == symbol)
}

impl Case {
    /// A figure of a lot.
    fn lot(&self, w: &mut Working, lot: &Lot, n: usize, place: &[&str]) -> Result<(), StudyError> {
        let basis = self.basis();
        let basis = basis.as_ref();
        let result = || -> Result<LotResult, StudyError> {
            let mut result = self.evaluate(Some(&lot.lot))?;
            Ok(result.lots.swap_remove(0))
        };
        let judged = || Judged::new(&self.sheet, basis, lot);
        match place {
            [factor] if factor.starts_with("factor_") => {
                let (_, steps) = super::factors(&self.sheet, basis, &lot.lot)?;
                let symbol = match *factor {
                    "factor_a_per_kw" => "A",
                    "factor_b_per_kw" => "B",
                    _ => "A_aux",
                };
                w.append(giving(steps, symbol));
            }
            ["margin_pct"] => {
                let margin = margin(&self.sheet, basis, &lot.lot)?;
                w.append(margin.map(|(_, steps)| steps).unwrap_or_default());
            }
            ["bids", m, quantity] => {
                let result = result()?;
                let (bid, _) = nth(&result.bids, m)?;
                self.bid(w, lot, &bid.bid, quantity)?;
            }
            ["map", axis @ ("a_max" | "b_max")] => {
                let factors = judged()?.terms.factors;
                let a = *axis == "a_max";
                map::side(w, if a { factors.factor_a_per_kw } else { factors.factor_b_per_kw });
            }
            ["map", "bids", m, place @ ..] => {
                let judged = judged()?;
                let map = WinnerMap::new(&judged.contest.planes, &judged.terms.factors);
                let (bid, _) = nth(&judged.ranking.order, m)?;
                let cell = judged.contest.bids.iter().position(|own| own == bid);
                let Some(cell) = cell.map(|j| &map.cells[j]) else { return Ok(()) };
                match place {
                    ["polygon", k, axis] => {
                        let (k, axis) =
                            (k.parse().unwrap_or(usize::MAX), usize::from(*axis == "1"));
                        cell.corner(w, k, axis, [map.a_max, map.b_max][axis]);
                    }
                    _ => {
                        cell.share(w);
                    }
                }
            }
            ["changes", quantity, up] => {
                let judged = judged()?;
                let mut all = Working::default();
                let contest = &judged.contest;
                contest.changes(&mut all, &judged.bids, &judged.terms, basis, |_| String::new())?;
                let of = format!("{quantity} {}", changes::side(*up == "1"));
                w.append(all.into_steps().into_iter().filter(|step| step.of == of));
            }
            ["nearest_border", place @ ..] => {
                let mut all = Working::default();
                judged()?.contest.nearest_border(&mut all, |_| String::new());
                match place {
                    ["at", "0"] => w.append(all.only(&["A_there"])),
                    ["at", _] => w.append(all.only(&["B_there"])),
                    _ => w.append(all.into_steps()),
                }
            }
            _ => {
                let why = format!("is no figure of lot {n}");
                return Err(Refusal::new("figure", place.join("."), why).into());
            }
        }
        Ok(())
    }

    /// A figure of a bid.
    fn bid(&self, w: &mut Working, lot: &Lot, bid: &str, quantity: &str) -> Result<(), StudyError> {
        let opened = working(&self.sheet, self.basis().as_ref(), &lot.lot, bid)?;
        let part = |steps: Vec<Step>| steps.into_iter().flat_map(|step| step.steps);
        let named = |steps: Vec<Step>, of: &'static str| {
            steps.into_iter().filter(move |step| step.of.starts_with(of))
        };
        match quantity {
            "price" => w.append(named(opened.on_terms, "price")),
            "added_cost" => w.append(named(opened.on_terms, "freight")),
            _ => {
                w.append(opened.on_terms);
                match quantity {
                    "no_load_cost" => w.append(giving(part(opened.owning_cost).collect(), "iron")),
                    "load_cost" => w.append(giving(part(opened.owning_cost).collect(), "copper")),
                    "auxiliary_cost" => {
                        w.append(giving(part(opened.owning_cost).collect(), "aux"));
                    }
                    "owning_cost" => w.append(opened.owning_cost),
                    "owning_cost_at_tolerance" => w.append(opened.owning_cost_at_tolerance),
                    _ => w.append(opened.lot_cost),
                }
            }
        }
        Ok(())
    }

    /// A figure of bids for several lots.
    fn package(
        &self,
        w: &mut Working,
        result: &TenderResult,
        package: &Package,
        place: &[&str],
    ) -> Result<(), StudyError> {
        let find = |lot: &str| super::find_lot(&self.sheet, lot);
        match place {
            ["bids", k, quantity] => {
                let (bid, _) = nth(&package.bids, k)?;
                self.bid(w, find(&bid.lot)?, &bid.bid, quantity)?;
            }
            ["lot_cost"] => {
                for bid in &package.bids {
                    self.bid(w, find(&bid.lot)?, &bid.bid, "lot_cost")?;
                }
                package.cost(w);
            }
            _ => {
                let cost = package.cost(w);
                w.about(&|| "the package".to_owned());
                let winners = together(w, package.winners(&result.awards.by_lot));
                w.about(&|| "the winners of the same lots".to_owned());
                above(w, cost, winners);
            }
        }
        Ok(())
    }
}
