//! A basis made ready to compute with: defaults filled in, percents as fractions, contradictions refused.

use super::discounting::payment;
use super::failure::Weibull;
use crate::engine::Refusal;
use crate::engine::columns::{Basis, CapitalRecovery, CashFlow, FactorMethod, Value, VoltageModel};
use crate::engine::loading::duty::growth;

/// Where the energy price comes from.
#[derive(Clone, Debug, PartialEq)]
pub enum EnergyPrice {
    /// One price all year.
    Flat(f64),
    /// A named price series of the book.
    Series(String),
}

/// The resolved assumptions of a basis. Fractions, not percents.
#[derive(Clone, Debug, PartialEq)]
pub struct Assumptions {
    /// Name of the basis.
    pub name: String,
    /// Currency of all money.
    pub currency: String,
    /// Calendar year of year 1.
    pub first_year: i64,
    /// Horizon, N.
    pub years: usize,
    /// Discount rate, i.
    pub rate: f64,
    /// When running costs are paid.
    pub cash_flow: CashFlow,
    /// Energy price of year 1.
    pub energy_price: EnergyPrice,
    /// Escalation of the energy price, e.
    pub energy_escalation: f64,
    /// Price of a kW at the system peak, per year, D.
    pub demand_charge_per_kw_year: f64,
    /// Escalation of the demand charge.
    pub demand_escalation: f64,
    /// Growth of the load where a unit names none, g.
    pub load_growth: f64,
    /// Years over which it grows, Y.
    pub load_growth_years: usize,
    /// Hours under voltage where a unit names none.
    pub energised_hours: f64,
    /// Hours of fans and pumps where a unit names none.
    pub auxiliary_hours: Option<f64>,
    /// w of the loss factor.
    pub loss_factor_weight_pu: f64,
    /// PRF where nothing better is known.
    pub responsibility_pu: Option<f64>,
    /// Stray part of the load loss where the split is unknown.
    pub stray_share_pu: f64,
    /// How voltage enters the losses.
    pub voltage_model: VoltageModel,
    /// High-voltage side voltage of the drop model.
    pub operating_voltage_pu: f64,
    /// How capital is charged.
    pub capital_recovery: CapitalRecovery,
    /// Life of a purchase where the offer names none, L.
    pub life_years: Option<f64>,
    /// Escalation of equipment prices, e_q.
    pub equipment_escalation: f64,
    /// Longest delay, min(T, N−1).
    pub latest: usize,
    /// Sizes looked at below and above the unit's; none = all.
    pub offer_sizes: Option<(usize, usize)>,
    /// Highest peak over rating of a new unit.
    pub loading_limit_pu: Option<f64>,
    /// Age at failure; none = no failures.
    pub failure: Option<Weibull>,
    /// Cost of a failure besides the replacement.
    pub failure_cost: f64,
    /// The same for each customer.
    pub failure_cost_per_customer: f64,
    /// Surcharge on a forced purchase.
    pub emergency_premium: f64,
    /// Cost of taking a unit away.
    pub removal_cost: f64,
    /// What its scrap brings.
    pub scrap_value: f64,
    /// Upkeep of a unit of age 0.
    pub upkeep_per_year: f64,
    /// Its rise with each year of age.
    pub upkeep_age: f64,
    /// Price of a tonne of CO2 in year 1.
    pub carbon_price_per_t: f64,
    /// CO2 of a kWh where the price series has none.
    pub carbon_kg_per_kwh: f64,
    /// Escalation of the carbon price.
    pub carbon_escalation: f64,
    /// Method of the loss factors.
    pub factor_method: FactorMethod,
    /// Fixed charge rate, FCR.
    pub fixed_charge_rate: Option<f64>,
    /// Increase factor, IF.
    pub increase_factor: f64,
    /// Transmission efficiency, ET.
    pub transmission_efficiency_pu: f64,
    /// Levelised system investment, LIC.
    pub investment_per_kw_year: f64,
    /// Near-tie band of tenders.
    pub near_tie_pct: f64,
    /// Minimum-efficiency law that offers must meet.
    pub law: Option<String>,
    /// Whether missing losses are estimated.
    pub estimate_missing: bool,
}

/// A rate in percent as a fraction; at or below −100 % nothing is left to discount.
fn rate(quantity: &'static str, pct: f64) -> Result<f64, Refusal> {
    if pct > -100.0 && pct.is_finite() {
        return Ok(pct / 100.0);
    }
    Err(Refusal::new(quantity, pct, "a rate must be above −100 %; write 6 for six percent a year"))
}

/// A whole number of the basis, within the range that its column has.
fn whole(quantity: &'static str, value: i64) -> Result<usize, Refusal> {
    let column = Basis::COLUMNS.iter().find(|column| column.name == quantity);
    let read = column.map_or(Ok(Value::Blank), |column| column.read(&value.to_string()));
    read.map_err(|why| Refusal::new(quantity, value, why))?;
    usize::try_from(value).map_err(|_| Refusal::new(quantity, value, "cannot be negative"))
}

impl Assumptions {
    /// Resolves a basis.
    ///
    /// # Errors
    /// A rate at or below −100 %, a horizon of no year, both or neither of the energy prices, an annuity
    /// without a life is refused later, where an offer names none either.
    pub fn resolve(basis: &Basis) -> Result<Self, Refusal> {
        let pct = |quantity, value: Option<f64>| rate(quantity, value.unwrap_or(0.0));
        let horizon = whole("horizon_years", basis.horizon_years)?;
        let energy_price = match (basis.energy_price_per_kwh, &basis.price_series) {
            (Some(_), Some(series)) => {
                let why = "stands beside energy_price_per_kwh; keep one of the two";
                return Err(Refusal::new("price_series", series, why));
            }
            (Some(price), None) => EnergyPrice::Flat(price),
            (None, Some(series)) => EnergyPrice::Series(series.clone()),
            (None, None) => {
                let why = "no energy price: give energy_price_per_kwh or price_series in the basis";
                return Err(Refusal::new("energy_price_per_kwh", "", why));
            }
        };
        let latest = match basis.latest_replacement_years {
            Some(latest) => whole("latest_replacement_years", latest)?.min(horizon - 1),
            None => horizon - 1,
        };
        let growth_years = match basis.load_growth_years {
            Some(value) => whole("load_growth_years", value)?,
            None => horizon,
        };
        let offer_sizes = match (basis.offer_sizes_down, basis.offer_sizes_up) {
            (None, None) => None,
            (down, up) => Some((
                whole("offer_sizes_down", down.unwrap_or(0))?,
                whole("offer_sizes_up", up.unwrap_or(0))?,
            )),
        };
        let failure = match (basis.failure_shape, basis.failure_scale_years) {
            (_, None) => None,
            (Some(shape), Some(scale_years)) => Some(Weibull { shape, scale_years }),
            (None, Some(scale)) => {
                let why = "needs failure_shape beside it (a Weibull has both)";
                return Err(Refusal::new("failure_scale_years", scale, why));
            }
        };
        let method = basis.factor_method.unwrap_or(FactorMethod::PresentValue);
        if method == FactorMethod::Levelized && basis.fixed_charge_rate_pct.is_none() {
            let why = "is required by factor_method \"levelized\"";
            return Err(Refusal::new("fixed_charge_rate_pct", "", why));
        }
        let resolved = Self {
            name: basis.name.clone(),
            currency: basis.currency.clone(),
            first_year: basis.first_year,
            years: horizon,
            rate: rate("discount_rate_pct", basis.discount_rate_pct)?,
            cash_flow: basis.cash_flow.unwrap_or(CashFlow::YearEnd),
            energy_price,
            energy_escalation: pct("energy_escalation_pct", basis.energy_escalation_pct)?,
            demand_charge_per_kw_year: basis.demand_charge_per_kw_year.unwrap_or(0.0),
            demand_escalation: pct("demand_escalation_pct", basis.demand_escalation_pct)?,
            load_growth: pct("load_growth_pct", basis.load_growth_pct)?,
            load_growth_years: growth_years,
            energised_hours: basis.energised_hours.unwrap_or(8760.0),
            auxiliary_hours: basis.auxiliary_hours,
            loss_factor_weight_pu: basis.loss_factor_weight_pu.unwrap_or(0.15),
            responsibility_pu: basis.responsibility_pu,
            stray_share_pu: basis.stray_share_pu.unwrap_or(0.0),
            voltage_model: basis.voltage_model.unwrap_or(VoltageModel::Rated),
            operating_voltage_pu: basis.operating_voltage_pu.unwrap_or(1.0),
            capital_recovery: basis.capital_recovery.unwrap_or(CapitalRecovery::Annuity),
            life_years: basis.life_years,
            equipment_escalation: pct("equipment_escalation_pct", basis.equipment_escalation_pct)?,
            latest,
            offer_sizes,
            loading_limit_pu: basis.loading_limit_pu,
            failure,
            failure_cost: basis.failure_cost.unwrap_or(0.0),
            failure_cost_per_customer: basis.failure_cost_per_customer.unwrap_or(0.0),
            emergency_premium: basis.emergency_premium_pct.unwrap_or(0.0) / 100.0,
            removal_cost: basis.removal_cost.unwrap_or(0.0),
            scrap_value: basis.scrap_value.unwrap_or(0.0),
            upkeep_per_year: basis.upkeep_per_year.unwrap_or(0.0),
            upkeep_age: pct("upkeep_age_pct", basis.upkeep_age_pct)?,
            carbon_price_per_t: basis.carbon_price_per_t.unwrap_or(0.0),
            carbon_kg_per_kwh: basis.carbon_kg_per_kwh.unwrap_or(0.0),
            carbon_escalation: pct("carbon_escalation_pct", basis.carbon_escalation_pct)?,
            factor_method: method,
            fixed_charge_rate: basis.fixed_charge_rate_pct.map(|pct| pct / 100.0),
            increase_factor: basis.increase_factor.unwrap_or(1.0),
            transmission_efficiency_pu: basis.transmission_efficiency_pu.unwrap_or(1.0),
            investment_per_kw_year: basis.investment_per_kw_year.unwrap_or(0.0),
            near_tie_pct: basis.near_tie_pct.unwrap_or(0.0),
            law: basis.law.clone(),
            estimate_missing: basis.estimate_missing.unwrap_or(false),
        };
        resolved.check_range()?;
        Ok(resolved)
    }

    /// Holds that no discount factor, index or growth of the horizon leaves the range in which money can be told.
    fn check_range(&self) -> Result<(), Refusal> {
        let n = self.years;
        let factors = [
            ("discount_rate_pct", payment(self.rate, n)),
            ("energy_escalation_pct", Self::index(self.energy_escalation, n)),
            ("demand_escalation_pct", Self::index(self.demand_escalation, n)),
            ("carbon_escalation_pct", Self::index(self.carbon_escalation, n)),
            ("equipment_escalation_pct", Self::index(self.equipment_escalation, n)),
            ("upkeep_age_pct", Self::index(self.upkeep_age, n + 200)),
            ("load_growth_pct", growth(self.load_growth, n, self.load_growth_years).powi(2)),
        ];
        for (quantity, factor) in factors {
            if factor.is_nan() || factor > 1e60 {
                let why = format!(
                    "over {n} years it multiplies by {factor:.1e}; lower the rate or shorten horizon_years"
                );
                return Err(Refusal::new(quantity, "", why));
            }
        }
        Ok(())
    }

    /// The price index (1+e)^(k−1) of year `k`.
    pub fn index(escalation: f64, k: usize) -> f64 {
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_possible_wrap,
            reason = "at most 200 years"
        )]
        (1.0 + escalation).powi(k as i32 - 1)
    }
}
