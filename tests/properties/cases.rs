//! Random fleets, catalogues and bases as a book would hold them, and the desk on which they lie.

use ironhum::engine::columns::{
    Basis, BasisSheet, CapitalRecovery, CashFlow, Money, Offer, Unit, Value, VoltageModel, YesNo,
};
use ironhum::engine::decision::UnitFacts;
use ironhum::engine::decision::fit::Terminals;
use ironhum::engine::decision::fleet::{FleetColumns, NUMBERS};
use ironhum::engine::loading::Profile;
use ironhum::study::Desk;
use proptest::prelude::*;

/// A fleet with what it is held against.
#[derive(Clone, Debug)]
pub(crate) struct Case {
    pub(crate) basis: Basis,
    pub(crate) offers: Vec<Offer>,
    pub(crate) units: Vec<Unit>,
}

/// Whole currency units as money.
fn money(amount: i64) -> Money {
    Money(1000 * amount)
}

/// Two days as profiles: a peak in the evening, and the same load all day.
fn profiles() -> Vec<Profile> {
    let day = |name: &str, load: &dyn Fn(usize) -> f64| Profile {
        profile: name.to_owned(),
        step_minutes: 60,
        first_timestamp: None,
        values: (0..24).map(load).collect(),
    };
    vec![
        day("evening", &|h| if h < 17 { 0.3 + 0.01 * h as f64 } else { 1.0 }),
        day("even", &|_| 1.0),
    ]
}

impl Case {
    /// The desk on which the case lies; its units in their order.
    pub(crate) fn desk(&self) -> Desk {
        let mut fleet = FleetColumns::default();
        let profiles = profiles();
        for (row, unit) in (1..).zip(&self.units) {
            let profile = profiles.iter().position(|p| Some(&p.profile) == unit.profile.as_ref());
            let values = unit.values();
            let number = |name: &str| {
                let at = Unit::COLUMNS.iter().position(|column| column.name == name);
                match at.map(|at| &values[at]) {
                    Some(Value::Real(x)) => *x,
                    Some(Value::Integer(n)) => *n as f64,
                    Some(Value::Money(money)) => money.amount(),
                    _ => f64::NAN,
                }
            };
            let facts = UnitFacts {
                in_service: unit.in_service != Some(YesNo::No),
                phases: unit.phases,
                winding_metal: unit.winding_metal,
                insulation: unit.insulation,
                profile: profile.and_then(|at| u32::try_from(at).ok()).unwrap_or(u32::MAX),
                ..UnitFacts::of_numbers(NUMBERS.map(number))
            };
            let terminals = Terminals {
                phases: unit.phases,
                hv_kv: unit.hv_kv,
                lv_kv: unit.lv_kv,
                clock: None,
                rated_kva: unit.rated_kva,
            };
            fleet.push(&unit.unit, None, row, terminals, &facts);
        }
        let sheet =
            BasisSheet { basis: self.basis.clone(), ranges: Vec::new(), budgets: Vec::new() };
        Desk::new(fleet, self.offers.clone(), profiles, Vec::new(), sheet).expect("a sound case")
    }

    /// The same in a currency of which `factor` go to one of the old one.
    pub(crate) fn in_currency(&self, factor: i64) -> Self {
        let real = |value: &mut Option<f64>| {
            *value = value.map(|value| value * factor as f64);
        };
        let exact = |value: &mut Option<Money>| *value = value.map(|m| Money(m.0 * factor));
        let mut other = self.clone();
        let b = &mut other.basis;
        for value in [
            &mut b.energy_price_per_kwh,
            &mut b.demand_charge_per_kw_year,
            &mut b.failure_cost,
            &mut b.failure_cost_per_customer,
            &mut b.removal_cost,
            &mut b.scrap_value,
            &mut b.upkeep_per_year,
            &mut b.carbon_price_per_t,
        ] {
            real(value);
        }
        for offer in &mut other.offers {
            offer.price.0 *= factor;
            exact(&mut offer.install_cost);
        }
        for unit in &mut other.units {
            exact(&mut unit.failure_cost);
            exact(&mut unit.removal_cost);
            exact(&mut unit.scrap_value);
        }
        other
    }
}

fn some<T: Clone + std::fmt::Debug + 'static>(
    values: impl Strategy<Value = T> + 'static,
) -> impl Strategy<Value = Option<T>> {
    prop_oneof![1 => Just(None), 3 => values.prop_map(Some)]
}

prop_compose! {
    fn rates()(
        discount in -1.0..12.0_f64,
        energy in some(-2.0..5.0),
        demand in some(-2.0..5.0),
        carbon in some(-2.0..5.0),
        equipment in some(-2.0..4.0),
        load in some(-3.0..3.0),
        upkeep in some(0.0..3.0),
    ) -> Basis {
        Basis {
            name: "random".into(),
            currency: "EUR".into(),
            first_year: 2027,
            discount_rate_pct: discount,
            energy_escalation_pct: energy,
            demand_escalation_pct: demand,
            carbon_escalation_pct: carbon,
            equipment_escalation_pct: equipment,
            load_growth_pct: load,
            upkeep_age_pct: upkeep,
            estimate_missing: Some(true),
            ..Basis::blank()
        }
    }
}

prop_compose! {
    fn basis()(
        rates in rates(),
        (years, latest, growth_years) in (1_i64..25, some(0_i64..25), some(1_i64..25)),
        (mid_year, full) in (any::<bool>(), any::<bool>()),
        energy in 0.02..0.4_f64,
        demand in some(0.0..80.0),
        (failure, failure_cost, per_customer) in (some((1.0..7.0, 20.0..80.0)), some(0.0..2e4), some(0.0..50.0)),
        premium in some(0.0..60.0),
        (removal, scrap, upkeep) in (some(0.0..2e3), some(0.0..2e3), some(0.0..200.0)),
        (carbon, kg) in (some(0.0..150.0), some(0.0..0.9)),
        voltage in some(0.95..1.06),
    ) -> Basis {
        Basis {
            horizon_years: years,
            latest_replacement_years: latest,
            load_growth_years: growth_years,
            cash_flow: mid_year.then_some(CashFlow::MidYear),
            capital_recovery: full.then_some(CapitalRecovery::Full),
            life_years: Some(40.0),
            energy_price_per_kwh: Some(energy),
            demand_charge_per_kw_year: demand,
            failure_shape: failure.map(|f| f.0),
            failure_scale_years: failure.map(|f| f.1),
            failure_cost,
            failure_cost_per_customer: per_customer,
            emergency_premium_pct: premium,
            removal_cost: removal,
            scrap_value: scrap,
            upkeep_per_year: upkeep,
            carbon_price_per_t: carbon,
            carbon_kg_per_kwh: kg,
            voltage_model: voltage.map(|_| VoltageModel::Drop),
            operating_voltage_pu: voltage,
            ..rates
        }
    }
}

const RATINGS: [f64; 5] = [100.0, 160.0, 250.0, 400.0, 630.0];

prop_compose! {
    fn offer()(
        rating in prop::sample::select(&RATINGS[..]),
        iron in 0.6..1.4_f64,
        copper in 0.6..1.4_f64,
        auxiliary in some(0.0..40.0),
        (price, install) in (1_500_i64..12_000, some(0_i64..2_000)),
        lead in some(0.0..3.0),
        impedance in some(4.0..6.5),
    ) -> Offer {
        Offer {
            rated_kva: rating,
            no_load_loss_w: iron * 7.0 * rating.powf(0.7),
            load_loss_w: copper * 55.0 * rating.powf(0.75),
            auxiliary_loss_w: auxiliary,
            price: money(price),
            install_cost: install.map(money),
            lead_time_years: lead,
            impedance_pct: impedance,
            ..Offer::blank()
        }
    }
}

prop_compose! {
    fn unit()(
        rating in prop::sample::select(&RATINGS[..]),
        (iron, copper) in (some(1.0..3.0), some(0.8..1.8)),
        load in 0.1..0.95_f64,
        shape in 0_u8..4,
        growth in some(-3.0..3.0),
        (made, power_factor, responsibility) in (some(1965_i64..2027), some(0.8..1.0), some(0.2..1.0)),
        (failure, removal, scrap, customers) in (some(0_i64..9_000), some(0_i64..900), some(0_i64..900), some(0_i64..300)),
        impedance in some(4.0..6.5),
    ) -> Unit {
        Unit {
            rated_kva: rating,
            no_load_loss_w: iron.map(|iron: f64| iron * 7.0 * rating.powf(0.7)),
            load_loss_w: copper.map(|copper: f64| copper * 55.0 * rating.powf(0.75)),
            peak_kva: Some(load * rating),
            profile: match shape { 0 => Some("evening".into()), 1 => Some("even".into()), _ => None },
            loss_factor_pu: (shape == 2).then_some(0.3),
            load_factor_pu: (shape == 3).then_some(0.45),
            load_growth_pct: growth,
            year_made: made,
            power_factor,
            responsibility_pu: responsibility,
            failure_cost: failure.map(money),
            removal_cost: removal.map(money),
            scrap_value: scrap.map(money),
            customers,
            impedance_pct: impedance,
            ..Unit::blank()
        }
    }
}

prop_compose! {
    /// Cases with some losses to estimate, half of them with voltage drop.
    pub(crate) fn case()(
        basis in basis(),
        mut offers in prop::collection::vec(offer(), 1..6),
        mut units in prop::collection::vec(unit(), 1..24),
    ) -> Case {
        for (n, offer) in offers.iter_mut().enumerate() {
            offer.offer = format!("O{n}");
        }
        for (n, unit) in units.iter_mut().enumerate() {
            unit.unit = format!("U{n}");
        }
        Case { basis, offers, units }
    }
}
