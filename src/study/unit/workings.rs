//! The figures of a dossier opened: each by its place in the dossier, from the functions that gave it.

use super::{LOADS, Question, decision, fitting_offers};
use crate::engine::Refusal;
use crate::engine::decision::keep_or_replace::{
    Decision, Valuation, YearChoice, age, equal_yearly_cost,
};
use crate::engine::decision::place::power_factor;
use crate::engine::decision::{LeftOut, Place};
use crate::engine::economics::assumptions::EnergyPrice;
use crate::engine::economics::running_cost;
use crate::engine::transformer::circuit::{PowerFactor, core_resistance, resistance_pu};
use crate::engine::transformer::losses::{annual_efficiency_pct, annual_energy, auxiliary_energy};
use crate::engine::transformer::{efficiency, regulation};
use crate::engine::working::{Step, Working};
use crate::study::StudyError;
use crate::study::explain::{Explained, numbers};
use crate::study::law;

/// Parts of a dossier that are not opened: what the record says, the regression behind an estimate (it tells its
/// interval and the units it rests on by itself), and workings.
const NO_FIGURES: &[&str] = &["nameplate", "working"];
/// Numbers that name a line instead of being computed.
const LABELS: &[&str] = &[
    "known_units",
    "units_set_aside",
    "load_pu",
    "offset",
    "year",
    "hottest_interval",
    "hottest_hour",
    "hours",
    "loading_limit_pu",
    "fault_limit_mva",
    "ambient_c",
    "hot_spot_limit_c",
    "top_oil_limit_c",
    "reference_temp_c",
];

/// How the losses at the rating come about.
const OF_LOSSES: &[&str] = &["P0", "Pk_base", "Pk"];
/// How energy comes about: the losses, and what the drop voltage model adds.
const OF_ENERGY: &[&str] = &["P0", "Pk_base", "Pk", "v_hv", "cosφ", "Z", "X"];
/// What a present value is told: load, prices, and what failure and removal cost.
const OF_VALUE: &[&str] = &[
    "P0",
    "Pk_base",
    "Pk",
    "v_hv",
    "cosφ",
    "Z",
    "X",
    "S_r",
    "S_1",
    "LsF",
    "g",
    "h",
    "h_aux",
    "PRF",
    "c0",
    "ck",
    "κ0",
    "κk",
    "F_own",
    "F",
    "removal",
    "scrap",
    "removal_less_scrap",
];

impl Explained for Question<'_> {
    fn called(&self) -> String {
        format!("the dossier of unit {}", self.unit.unit)
    }

    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError> {
        Ok(numbers(&self.dossier()?, NO_FIGURES, LABELS))
    }

    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError> {
        match place {
            ["power_factor"] => {
                power_factor(w, &self.facts());
            }
            ["tests", quantity] => self.of_test(w, quantity)?,
            ["loading", quantity] => self.loading(w, quantity)?,
            ["losses", quantity] => self.year_1(w, quantity)?,
            ["law", "limits", n, side] => {
                if let Some((verdict, _)) = self.verdict()? {
                    law::state(w, verdict, n, side);
                }
            }
            ["fit", place @ ..] => {
                if let Some(fit) = self.fitted() {
                    fit.state(w, place)?;
                }
            }
            ["estimated", loss, quantity] => self.estimated(w, loss, quantity)?,
            ["thermal", "own", quantity] => {
                let place = self.told(w, OF_LOSSES)?;
                self.thermal_figure(w, &place, None, quantity)?;
            }
            ["thermal", "replacement", quantity] => {
                let (place, decision) = self.decided()?;
                self.thermal_figure(w, &place, Self::heat_choice(&decision), quantity)?;
            }
            ["keep_or_replace", "years", n, "pv"] => {
                let (place, decision) = self.decided()?;
                let n = n.parse().ok().and_then(|n: usize| decision.years.get(n).copied());
                self.policy(w, &place, n)?;
            }
            ["keep_or_replace", quantity] => self.value(w, quantity)?,
            _ => self.nameplate(w, place)?,
        }
        Ok(())
    }
}

impl Question<'_> {
    fn refused(&self, why: LeftOut) -> Refusal {
        Refusal::new("unit", &self.unit.unit, why.why())
    }

    /// The place, with those steps of what it is told of which the symbol is asked for.
    fn told(&self, w: &mut Working, symbols: &[&str]) -> Result<Place, Refusal> {
        let mut all = Working::default();
        let place = self.place(&mut all).map_err(|why| self.refused(why))?;
        w.append(all.only(symbols));
        Ok(place)
    }

    /// A figure of the test report: the steps up to the one that gives it.
    fn of_test(&self, w: &mut Working, quantity: &str) -> Result<(), Refusal> {
        let Some(tested) = self.tested() else { return Ok(()) };
        let mut all = Working::default();
        tested.read(&mut all, self.desk.stray_share_pu())?;
        let (gives, told): (&[&str], &[&str]) = match quantity {
            "no_load_loss_w" => (&["P0"], &[]),
            "no_load_current_pct" => (&["I0_pct"], &["I_r"]),
            "load_loss_w" => (&["Pk"], &[]),
            "resistive_loss_w" => (&["P_I2R", "P_I2R_ref"], &[]),
            "stray_loss_w" => (&["P_stray", "P_stray_ref"], &["Pk", "P_I2R"]),
            "r_pu" => (&["R"], &["Pk"]),
            "x_pu" => (&["X"], &["Pk", "V_z", "Z", "R"]),
            _ => (&["Z_pct"], &["Pk", "V_z", "Z", "R", "X"]),
        };
        let steps = all.into_steps();
        let end = steps.iter().rposition(|step| gives.contains(&step.formula.symbol));
        let upto = steps.into_iter().take(end.map_or(0, |n| n + 1));
        let asked = |symbol| gives.contains(&symbol) || told.contains(&symbol);
        w.append(upto.filter(|step| asked(step.formula.symbol)));
        Ok(())
    }

    /// What is estimated of a loss that the nameplate leaves blank.
    fn estimated(&self, w: &mut Working, loss: &str, quantity: &str) -> Result<(), Refusal> {
        let mut all = Working::default();
        if let Some(estimate) = &self.context.estimate {
            estimate.missing(&mut all, &self.facts()).map_err(|why| self.refused(why))?;
        }
        w.append(all.only(match (loss, quantity) {
            ("no_load_loss_w", "low_w") => &["P0", "P0_low"],
            ("no_load_loss_w", "high_w") => &["P0", "P0_high"],
            ("no_load_loss_w", _) => &["P0"],
            (_, "low_w") => &["Pk", "Pk_low"],
            (_, "high_w") => &["Pk", "Pk_high"],
            _ => &["Pk"],
        }));
        Ok(())
    }

    /// Circuit, efficiency and regulation.
    fn nameplate(&self, w: &mut Working, path: &[&str]) -> Result<(), Refusal> {
        let losses = self.losses(w).map_err(|why| self.refused(why))?;
        let (rated_kva, p0, pk) = (losses.rated_kva, losses.no_load_loss_w, losses.load_loss_w);
        let load = |n: &str| n.parse().ok().and_then(|n: usize| LOADS.get(n)).copied();
        match path {
            ["circuit", "r_pu"] => {
                resistance_pu(w, rated_kva, pk);
            }
            ["circuit", "core_resistance_pu"] => {
                core_resistance(w, rated_kva, p0)?;
            }
            ["circuit", "magnetising_reactance_pu"] => {
                self.magnetising(w, &losses);
            }
            ["circuit", quantity] => {
                let circuit = self.circuit(w, &losses);
                if let Some(circuit) = circuit.filter(|_| *quantity == "z_pu") {
                    circuit.magnitude(w);
                }
            }
            ["best_load_pu"] => {
                efficiency::best_load(w, &losses)?;
            }
            ["load_points", n, quantity] => {
                let power_factor = power_factor(w, &self.facts());
                let Some(load_pu) = load(n) else { return Ok(()) };
                if *quantity == "efficiency_pct" {
                    efficiency::at_load_pct(w, &losses, load_pu, power_factor)?;
                } else if let Some(circuit) = self.circuit(w, &losses) {
                    let pf = PowerFactor::lagging(power_factor)?;
                    regulation::exact_pct(w, &circuit, load_pu, pf);
                }
            }
            _ => {}
        }
        Ok(())
    }

    /// What is known of the load, and what a kWh costs.
    fn loading(&self, w: &mut Working, quantity: &str) -> Result<(), Refusal> {
        let symbol = match quantity {
            "peak_kva" => "S_1",
            "load_factor_pu" => "LF",
            "loss_factor_pu" => "LsF",
            "energised_hours" => "h",
            "responsibility_pu" => "PRF",
            "no_load_price_per_kwh" => "c0",
            "load_price_per_kwh" => "ck",
            "load_growth_pct" => {
                self.told(w, &["g"])?.duty.load_growth_pct(w);
                return Ok(());
            }
            _ => {
                let place = self.told(w, &["S_r", "S_1"])?;
                place.duty.peak_pu(w, place.losses.rated_kva);
                return Ok(());
            }
        };
        // What profile and price series give, before the unit is told so.
        let mut behind = Working::default();
        self.of_series(&mut behind)?;
        w.append(behind.only(&[symbol]));
        self.told(w, &[symbol])?;
        Ok(())
    }

    /// The ratios of its profile, and what the price series says of a constant loss and of its load loss.
    fn of_series(&self, w: &mut Working) -> Result<(), Refusal> {
        let profile = self.desk.profiles.get(self.facts().profile as usize);
        if let Some(profile) = profile {
            profile.ratios(w)?;
        }
        let a = &self.context.assumptions;
        if let EnergyPrice::Series(name) = &a.energy_price
            && let Some(series) = self.desk.series.iter().find(|series| series.name == *name)
        {
            series.constant(w, a.carbon_kg_per_kwh);
            if let Some(profile) = profile {
                series.following(w, profile, a.carbon_kg_per_kwh)?;
            }
        }
        Ok(())
    }

    /// Energy and cost of the losses of year 1.
    fn year_1(&self, w: &mut Working, quantity: &str) -> Result<(), Refusal> {
        let a = &self.context.assumptions;
        let energy = |w: &mut Working, place: &Place| {
            annual_energy(w, &place.losses, &place.duty, 1, a.load_growth_years)
        };
        match quantity {
            "rated_kva" => {
                self.told(w, &["S_r"])?;
            }
            "loss_cost" => {
                let place = self.told(w, OF_VALUE)?;
                let age = age(place.year_made, a.first_year, 1);
                let mut year = Working::default();
                let cost = running_cost::of_year(&mut year, &place.losses, &place.duty, a, 1, age);
                let parts = year.into_steps().into_iter().flat_map(|step| step.steps);
                w.append(parts.filter(|step| step.formula.symbol != "upkeep"));
                running_cost::loss_cost(w, &cost);
            }
            "efficiency_pct" => {
                let place = self.told(w, &["S_1", "LF", "LsF", "h"])?;
                let energy = energy(w, &place);
                annual_efficiency_pct(w, &energy, &place.duty);
            }
            "auxiliary_energy_kwh" => {
                let place = self.told(w, &["h_aux"])?;
                auxiliary_energy(w, &place.losses, &place.duty);
            }
            "no_load_energy_kwh" | "load_energy_kwh" => {
                let symbol = if quantity == "load_energy_kwh" { "Ek" } else { "E0" };
                let mut all = Working::default();
                let place = self.told(w, OF_ENERGY)?;
                energy(&mut all, &place);
                w.append(all.only(&[symbol]));
            }
            _ => self.loading(w, quantity)?,
        }
        Ok(())
    }

    /// A figure of how hot a transformer gets.
    fn thermal_figure(
        &self,
        w: &mut Working,
        place: &Place,
        choice: Option<YearChoice>,
        quantity: &str,
    ) -> Result<(), Refusal> {
        let mut all = Working::default();
        self.state_heat(&mut all, place, choice, quantity)?;
        w.append(of_heat(all, quantity));
        Ok(())
    }

    fn decided(&self) -> Result<(Place, Decision), StudyError> {
        let decided = decision(self.desk, self.context, self.index)?;
        Ok(decided.map_err(|why| self.refused(why))?)
    }

    /// The figures of keep or replace.
    fn value(&self, w: &mut Working, quantity: &str) -> Result<(), StudyError> {
        let (place, decision) = self.decided()?;
        let chosen = self.replacement(&place, decision.best);
        let a = &self.context.assumptions;
        let Decision { best, now, later, .. } = decision;
        match (quantity, chosen) {
            ("now_pv", _) => self.policy(w, &place, now)?,
            ("best_pv", _) => self.policy(w, &place, best)?,
            ("saving_pv", _) => {
                self.outline(w, &place, [None, best])?;
                decision.saving_pv(w);
            }
            ("waiting_pv", _) => {
                self.outline(w, &place, [later, best])?;
                decision.waiting_pv(w);
            }
            ("best_year_offset" | "best_year", _) => {
                self.outline(w, &place, decision.years.iter().copied().map(Some))?;
                self.outline(w, &place, [None])?;
                decision.best_delay(w);
                if quantity == "best_year" {
                    decision.best_year(w, a.first_year);
                }
            }
            ("payback_years", Some(first)) => {
                first.payback_years(w);
            }
            ("capital", Some(first)) => {
                first.candidate.capital(w);
            }
            ("energy_saved_kwh", Some(first)) => {
                first.energy_saved_kwh(w);
            }
            ("co2_saved_kg", Some(first)) => {
                first.co2_saved_kg(w);
            }
            ("now_irr_pct", _) => {
                if let Some(now) = self.replacement(&place, now) {
                    now.irr_pct(w);
                }
            }
            ("discounted_payback_years", Some(first)) => {
                first.discounted_payback_years(w)?;
            }
            ("co2_avoided_t", Some(first)) => {
                first.co2_avoided_t(w);
            }
            ("cost_per_t_co2", Some(first)) => {
                first.cost_per_t_co2(w)?;
            }
            ("keep_euac", _) => {
                self.outline(w, &place, [None])?;
                equal_yearly_cost(w, decision.keep_pv, a);
            }
            ("best_euac", _) => {
                self.outline(w, &place, [best])?;
                equal_yearly_cost(w, decision.best_pv, a);
            }
            _ => self.policy(w, &place, None)?,
        }
        Ok(())
    }

    /// The present value of a choice, or of keeping, taken down to the years.
    fn policy(
        &self,
        w: &mut Working,
        place: &Place,
        choice: Option<YearChoice>,
    ) -> Result<(), StudyError> {
        self.told(w, OF_VALUE)?;
        self.valued(w, place, choice)
    }

    fn valued(
        &self,
        w: &mut Working,
        place: &Place,
        choice: Option<YearChoice>,
    ) -> Result<(), StudyError> {
        let fitting = fitting_offers(self.desk, self.context, self.index);
        let a = &self.context.assumptions;
        let valuation = Valuation::new(place, &self.context.candidates, &fitting, a)?;
        valuation.policy_pv(w, choice)?;
        Ok(())
    }

    /// Present values with their parts, but not down to the years.
    fn outline(
        &self,
        w: &mut Working,
        place: &Place,
        choices: impl IntoIterator<Item = Option<YearChoice>>,
    ) -> Result<(), StudyError> {
        for choice in choices {
            let mut all = Working::default();
            self.valued(&mut all, place, choice)?;
            let short = |mut step: Step| {
                for part in &mut step.steps {
                    part.steps.clear();
                }
                step
            };
            w.append(all.into_steps().into_iter().map(short));
        }
        Ok(())
    }
}

/// The steps of how hot a transformer gets that give one quantity.
pub(super) fn of_heat(all: Working, quantity: &str) -> Vec<Step> {
    match quantity {
        "hottest_hot_spot_c" => all.only(&["θh_max"]),
        "hottest_top_oil_c" => all.only(&["θo_max"]),
        "hours_above_hot_spot" => all.only(&["t_hot"]),
        "hours_above_top_oil" => all.only(&["t_oil"]),
        "life_used_hours" => all.only(&["L"]),
        "life_used_pu" => all.only(&["L", "L_pu"]),
        // The steady hot spot is stated from the top oil.
        "steady_top_oil_c" => {
            let steps = all.into_steps().into_iter().flat_map(|step| step.steps);
            steps.filter(|step| step.formula.symbol == "θo").collect()
        }
        _ => all.into_steps(),
    }
}
