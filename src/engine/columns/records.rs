//! The records of a book: units, test reports, offers, bases, tenders, lots, bids, measured units.
//! Names, order, ranges and blanks only; what is computed from them lives in the trade modules.

use super::{Column as C, Money, choice, record};

choice! {
    /// What insulates the windings.
    Insulation { Liquid = "liquid", Dry = "dry" }
}
choice! {
    /// How the unit stands.
    Mounting { Pole = "pole", Pad = "pad", Indoor = "indoor", Substation = "substation" }
}
choice! {
    /// How taps are changed.
    TapChanger { None = "none", OffLoad = "off-load", OnLoad = "on-load" }
}
choice! {
    /// Winding metal; `mixed` is one winding of each.
    WindingMetal { Copper = "copper", Aluminium = "aluminium", Mixed = "mixed" }
}
choice! {
    /// A plain yes or no.
    YesNo { Yes = "yes", No = "no" }
}
choice! {
    /// The winding at which a test was made.
    Side { Hv = "hv", Lv = "lv" }
}
choice! {
    /// When a running cost of a year is paid.
    CashFlow { YearEnd = "year-end", MidYear = "mid-year" }
}
choice! {
    /// How voltage enters the losses at a load.
    VoltageModel {
        /// At rated voltage: iron constant, copper with the square of the apparent power.
        Rated = "rated",
        /// At the operating voltage and with the voltage drop inside the unit.
        Drop = "drop",
    }
}
choice! {
    /// How the capital of a purchase is charged inside the horizon.
    CapitalRecovery {
        /// Per year of service.
        Annuity = "annuity",
        /// Whole at purchase.
        Full = "full",
    }
}
choice! {
    /// The method of the capitalised loss factors.
    FactorMethod { PresentValue = "present-value", Levelized = "levelized" }
}
choice! {
    /// The rule that allows losses above the guarantee.
    Tolerance { Iec = "iec", Ieee = "ieee", None = "none" }
}
choice! {
    /// Whether a penalty is settled per unit or on the mean of the lot.
    Settlement { Unit = "unit", LotMean = "lot-mean" }
}
choice! {
    /// The shape of an uncertain input.
    Distribution { Triangular = "triangular", Uniform = "uniform", Normal = "normal", Lognormal = "lognormal" }
}

const KVA: C = C::real(0.1, 2_000_000.0);
const KV: C = C::real(0.001, 1_200.0);
const LOSS_W: C = C::real(0.0, 1e8);
const IMPEDANCE_PCT: C = C::real(0.01, 60.0);
const TEMPERATURE_C: C = C::real(0.0, 250.0);
const HOURS: C = C::real(0.0, 8_784.0);
const SHARE_PU: C = C::real(0.0, 1.0);
const GROWTH_PCT: C = C::above(-100.0, 100.0);
const YEAR: C = C::integer(1950, 2200);
const COST: C = C::money();

/// Files of series begin with the time of a step; then one column per profile.
pub const STEP: C = C {
    name: "timestamp",
    meaning: "start of the step, ISO 8601 (or interval: its number); then one column per profile",
    ..C::text().required()
};
/// The columns of a price file behind the time of a step.
pub const PRICES: &[C] = &[
    C {
        name: "price_per_kwh",
        meaning: "price of the step (prices file)",
        ..C::real(-1e6, 1e6).required()
    },
    C {
        name: "co2_kg_per_kwh",
        meaning: "CO2 of a kWh in the step (prices file)",
        ..C::real(0.0, 1e3)
    },
    C {
        name: "system_load",
        meaning: "load of the system in the step, any scale (prices file)",
        ..C::real(-1e12, 1e12)
    },
];

/// First and last year of manufacture that a book holds.
pub const YEARS_MADE: (i64, i64) = (1880, 2100);

record! {
    /// A transformer of the fleet.
    Unit {
        unit: String, C::id().required(), "identifier";
        site: Option<String>, C::text(), "town, substation or street where it stands";
        feeder: Option<String>, C::text(), "feeder that supplies it";
        phases: Option<i64>, C::integer_of(&[1, 3]), "number of phases";
        rated_kva: f64, KVA.required(), "rated power";
        loss_base_kva: Option<f64>, KVA.blank("rated_kva"), "rating at which the load loss is quoted (natural-cooling stage, for instance)";
        hv_kv: Option<f64>, KV, "rated voltage of the high-voltage winding";
        lv_kv: Option<f64>, KV, "rated voltage of the low-voltage winding";
        hv_um_kv: Option<f64>, KV, "highest voltage for equipment Um of the high-voltage winding";
        frequency_hz: Option<f64>, C::real(10.0, 400.0), "rated frequency";
        vector_group: Option<String>, C::text(), "vector group with its clock number, like Dyn11";
        cooling: Option<String>, C::text(), "cooling code, like ONAN";
        insulation: Option<Insulation>, C::choice(Insulation::WORDS), "what insulates the windings";
        mounting: Option<Mounting>, C::choice(Mounting::WORDS), "how it stands";
        tap_changer: Option<TapChanger>, C::choice(TapChanger::WORDS), "how taps are changed";
        winding_metal: Option<WindingMetal>, C::choice(WindingMetal::WORDS).blank("copper"), "winding metal";
        impedance_pct: Option<f64>, IMPEDANCE_PCT, "short-circuit impedance";
        no_load_loss_w: Option<f64>, LOSS_W, "no-load (iron) loss at rated voltage";
        load_loss_w: Option<f64>, LOSS_W, "load (copper) loss at loss_base_kva and reference temperature";
        total_loss_w: Option<f64>, LOSS_W, "no-load plus load loss, often quoted as full-load loss";
        reference_temp_c: Option<f64>, TEMPERATURE_C, "reference temperature of the load loss";
        auxiliary_loss_w: Option<f64>, LOSS_W.blank("0"), "fans and pumps";
        auxiliary_hours: Option<f64>, HOURS.blank("basis, else the energised hours"), "hours a year that fans and pumps run";
        no_load_current_pct: Option<f64>, C::real(0.0, 100.0), "no-load current";
        year_made: Option<i64>, C::integer(YEARS_MADE.0, YEARS_MADE.1), "year of manufacture";
        in_service: Option<YesNo>, C::choice(YesNo::WORDS).blank("yes"), "whether it is energised";
        peak_kva: Option<f64>, C::real(0.0, 1e7), "highest load of year 1";
        load_factor_pu: Option<f64>, SHARE_PU, "mean load over peak load";
        loss_factor_pu: Option<f64>, SHARE_PU, "mean of the squared load over the squared peak";
        profile: Option<String>, C::id(), "load profile of the year";
        load_growth_pct: Option<f64>, GROWTH_PCT.blank("basis, else 0"), "growth of the load a year";
        power_factor: Option<f64>, C::real(0.01, 1.0).blank("1 (0.9 for regulation)"), "power factor of the load";
        responsibility_pu: Option<f64>, SHARE_PU.blank("profile at the system peak, else basis, else 1"), "load at the system peak over own peak load";
        energised_hours: Option<f64>, HOURS.blank("basis, else 8760"), "hours a year under voltage";
        condition_pct: Option<f64>, C::real(0.0, 100.0), "condition, 100 = as new; shown, not computed with";
        pcb_ppm: Option<f64>, C::real(0.0, 1e6), "PCB content of the liquid";
        failure_cost: Option<Money>, COST.blank("basis, else 0"), "what its failure in service costs besides the replacement";
        removal_cost: Option<Money>, COST.blank("basis, else 0"), "cost of taking it away";
        scrap_value: Option<Money>, COST.blank("basis, else 0"), "what the scrap brings";
        replace_by_year: Option<i64>, YEAR, "year by which it must be replaced: kept for the replacement programme; the ranking goes by cost alone";
        customers: Option<i64>, C::integer(0, 100_000_000).blank("0"), "customers that its failure cuts off";
        note: Option<String>, C::text(), "remark";
    }
}

record! {
    /// A factory or site test report of a unit (methods, section 1).
    TestReport {
        unit: String, C::id().required(), "identifier of the unit";
        open_circuit_voltage_v: Option<f64>, C::real(1e-6, 1.2e6), "voltage of the open-circuit test";
        open_circuit_current_a: Option<f64>, C::real(1e-6, 1e6), "current of the open-circuit test";
        open_circuit_power_w: Option<f64>, C::real(1e-6, 1e8), "power of the open-circuit test";
        short_circuit_voltage_v: Option<f64>, C::real(1e-6, 1.2e6), "voltage of the short-circuit test";
        short_circuit_current_a: Option<f64>, C::real(1e-6, 1e6), "current of the short-circuit test";
        short_circuit_power_w: Option<f64>, C::real(1e-6, 1e8), "power of the short-circuit test";
        hv_resistance_ohm: Option<f64>, C::real(1e-9, 1e6), "resistance of the high-voltage winding (mean between lines if three-phase)";
        lv_resistance_ohm: Option<f64>, C::real(1e-9, 1e6), "resistance of the low-voltage winding (mean between lines if three-phase)";
        resistance_temp_c: Option<f64>, C::real(-50.0, 250.0), "winding temperature of the resistance measurement";
        test_temp_c: Option<f64>, C::real(-50.0, 250.0).blank("already corrected"), "winding temperature of the short-circuit test";
        open_circuit_side: Option<Side>, C::choice(Side::WORDS).blank("lv"), "winding fed in the open-circuit test";
        short_circuit_side: Option<Side>, C::choice(Side::WORDS).blank("hv"), "winding fed in the short-circuit test";
        tested_on: Option<String>, C::date(), "date of the test";
    }
}

record! {
    /// A transformer that can be bought (catalogue or frame contract); money in the basis currency.
    Offer {
        offer: String, C::id().required(), "identifier";
        maker: Option<String>, C::text(), "who makes it";
        rated_kva: f64, KVA.required(), "rated power";
        loss_base_kva: Option<f64>, KVA.blank("rated_kva"), "rating at which the load loss is quoted";
        phases: Option<i64>, C::integer_of(&[1, 3]).blank("fits every unit"), "number of phases";
        hv_kv: Option<f64>, KV.blank("fits every unit"), "rated voltage of the high-voltage winding";
        lv_kv: Option<f64>, KV.blank("fits every unit"), "rated voltage of the low-voltage winding";
        vector_group: Option<String>, C::text().blank("fits every unit"), "vector group with its clock number";
        cooling: Option<String>, C::text(), "cooling code";
        insulation: Option<Insulation>, C::choice(Insulation::WORDS), "what insulates the windings";
        winding_metal: Option<WindingMetal>, C::choice(WindingMetal::WORDS).blank("copper"), "winding metal";
        impedance_pct: Option<f64>, IMPEDANCE_PCT, "short-circuit impedance";
        no_load_loss_w: f64, LOSS_W.required(), "guaranteed no-load (iron) loss";
        load_loss_w: f64, LOSS_W.required(), "guaranteed load (copper) loss";
        reference_temp_c: Option<f64>, TEMPERATURE_C, "reference temperature of the load loss";
        auxiliary_loss_w: Option<f64>, LOSS_W.blank("0"), "fans and pumps";
        price: Money, COST.required(), "price of one unit";
        install_cost: Option<Money>, COST.blank("0"), "cost of putting it in";
        life_years: Option<f64>, C::real(0.1, 200.0).blank("basis"), "years of service that the price buys";
        lead_time_years: Option<f64>, C::real(0.0, 100.0).blank("0"), "years from order to delivery";
    }
}

record! {
    /// A named set of economic assumptions, as typed. Resolved into `economics::Assumptions`.
    Basis {
        name: String, C::id().required(), "name of the basis";
        currency: String, C::id().required(), "currency of all money (ISO 4217 code)";
        first_year: i64, YEAR.required(), "calendar year of year 1";
        horizon_years: i64, C::integer(1, 200).required(), "years looked at, N";
        discount_rate_pct: f64, C::real(-50.0, 1000.0).required(), "nominal discount rate, i";
        cash_flow: Option<CashFlow>, C::choice(CashFlow::WORDS).blank("year-end"), "when running costs of a year are paid";
        energy_price_per_kwh: Option<f64>, C::real(0.0, 1e6), "flat energy price of year 1";
        price_series: Option<String>, C::id(), "price series of year 1, instead of the flat price";
        energy_escalation_pct: Option<f64>, GROWTH_PCT.blank("0"), "yearly rise of the energy price";
        demand_charge_per_kw_year: Option<f64>, C::real(0.0, 1e9).blank("0"), "price of a kW at the system peak, per year";
        demand_escalation_pct: Option<f64>, GROWTH_PCT.blank("0"), "yearly rise of the demand charge";
        load_growth_pct: Option<f64>, GROWTH_PCT.blank("0"), "yearly growth of the load where a unit names none";
        load_growth_years: Option<i64>, C::integer(1, 200).blank("horizon_years"), "years over which the load grows, Y";
        energised_hours: Option<f64>, HOURS.blank("8760"), "hours a year under voltage where a unit names none";
        auxiliary_hours: Option<f64>, HOURS.blank("the energised hours"), "hours of fans and pumps where a unit names none";
        loss_factor_weight_pu: Option<f64>, SHARE_PU.blank("0.15"), "w of the loss factor w·LF + (1−w)·LF²";
        responsibility_pu: Option<f64>, SHARE_PU.blank("1"), "load at the system peak over own peak where nothing better is known";
        stray_share_pu: Option<f64>, SHARE_PU.blank("0"), "stray part of the load loss at reference temperature where the split is unknown";
        voltage_model: Option<VoltageModel>, C::choice(VoltageModel::WORDS).blank("rated"), "how voltage enters the losses";
        operating_voltage_pu: Option<f64>, C::real(0.5, 1.5).blank("1"), "high-voltage side voltage of the drop model";
        capital_recovery: Option<CapitalRecovery>, C::choice(CapitalRecovery::WORDS).blank("annuity"), "how capital is charged inside the horizon";
        life_years: Option<f64>, C::real(0.1, 200.0), "years of service that a price buys where the offer names none";
        equipment_escalation_pct: Option<f64>, GROWTH_PCT.blank("0"), "yearly rise of equipment prices";
        latest_replacement_years: Option<i64>, C::integer(0, 200).blank("horizon_years − 1"), "longest delay looked at, T";
        offer_sizes_down: Option<i64>, C::integer(0, 100), "sizes below the unit's that are looked at";
        offer_sizes_up: Option<i64>, C::integer(0, 100), "sizes above the unit's that are looked at";
        loading_limit_pu: Option<f64>, C::real(0.01, 10.0).blank("no limit"), "highest peak load over rating of a new unit";
        failure_shape: Option<f64>, C::real(0.01, 100.0), "Weibull shape of the age at failure, b";
        failure_scale_years: Option<f64>, C::real(0.1, 1000.0).blank("no failures"), "Weibull scale of the age at failure, η";
        failure_cost: Option<f64>, C::real(0.0, 1e12).blank("0"), "cost of a failure besides the replacement";
        failure_cost_per_customer: Option<f64>, C::real(0.0, 1e9).blank("0"), "the same, for each customer cut off";
        emergency_premium_pct: Option<f64>, C::real(0.0, 1000.0).blank("0"), "surcharge on a forced purchase";
        removal_cost: Option<f64>, C::real(0.0, 1e12).blank("0"), "cost of taking a unit away";
        scrap_value: Option<f64>, C::real(0.0, 1e12).blank("0"), "what its scrap brings";
        upkeep_per_year: Option<f64>, C::real(0.0, 1e12).blank("0"), "upkeep of a unit of age 0, per year";
        upkeep_age_pct: Option<f64>, GROWTH_PCT.blank("0"), "rise of the upkeep with each year of age";
        carbon_price_per_t: Option<f64>, C::real(0.0, 1e9).blank("0"), "price of a tonne of CO2 in year 1";
        carbon_kg_per_kwh: Option<f64>, C::real(0.0, 1e3).blank("0"), "CO2 of a kWh, where the price series has none";
        carbon_escalation_pct: Option<f64>, GROWTH_PCT.blank("0"), "yearly rise of the carbon price";
        factor_method: Option<FactorMethod>, C::choice(FactorMethod::WORDS).blank("present-value"), "method of the loss factors A and B";
        fixed_charge_rate_pct: Option<f64>, C::real(0.01, 1000.0), "fixed charge rate of the levelized method, FCR";
        increase_factor: Option<f64>, C::real(0.01, 100.0).blank("1"), "increase factor of the levelized method, IF";
        transmission_efficiency_pu: Option<f64>, C::real(0.01, 1.0).blank("1"), "transmission efficiency of the levelized method, ET";
        investment_per_kw_year: Option<f64>, C::real(0.0, 1e9).blank("0"), "levelised system investment of the levelized method, LIC, per kW and year";
        near_tie_pct: Option<f64>, C::real(0.0, 100.0).blank("0"), "bids within this of the least owning cost count as near-tied";
        law: Option<String>, C::id(), "minimum-efficiency law that offers must meet: eu-548-2014, us-10cfr431 or ca-sor-2016-311";
        estimate_missing: Option<bool>, C::flag().blank("false"), "estimate missing losses from the fleet's own known units";
        units_per_year: Option<i64>, C::integer(0, 10_000_000), "most replacements a year: kept for the replacement programme; the ranking goes by cost alone";
        units_per_site_year: Option<i64>, C::integer(0, 10_000_000), "most replacements a year at one site: as units_per_year";
        carry_over: Option<bool>, C::flag().blank("false"), "whether unspent budget passes to the next year: as units_per_year";
    }
}

record! {
    /// How far an input of a basis may lie from its base value.
    BasisRange {
        quantity: String, C::id().required(), "the input, by its name in the basis";
        distribution: Option<Distribution>, C::choice(Distribution::WORDS).blank("triangular"), "shape";
        low: Option<f64>, C::real(-1e12, 1e12), "lowest value";
        base: Option<f64>, C::real(-1e12, 1e12).blank("the value in the basis"), "most likely value";
        high: Option<f64>, C::real(-1e12, 1e12), "highest value";
        mean: Option<f64>, C::real(-1e12, 1e12), "mean (normal) or median (lognormal)";
        deviation: Option<f64>, C::real(0.0, 1e12), "standard deviation (of the logarithm for lognormal)";
    }
}

record! {
    /// Money that may be spent on replacements in a year.
    BasisBudget {
        year: i64, YEAR.required(), "calendar year";
        budget: f64, C::real(0.0, 1e15).required(), "capital that may be spent";
    }
}

record! {
    /// A tender.
    Tender {
        tender: String, C::id().required(), "identifier";
        currency: String, C::id().required(), "currency in which bids are compared (ISO 4217 code)";
        dated: Option<String>, C::date(), "date of the tender and of its rates";
    }
}

record! {
    /// The value of one unit of a currency in the tender currency.
    TenderRate {
        currency: String, C::id().required(), "currency (ISO 4217 code)";
        rate: f64, C::real(1e-9, 1e9).required(), "value of one unit in the tender currency";
    }
}

record! {
    /// One lot of a tender: what is to be bought and how it is judged.
    Lot {
        lot: String, C::id().required(), "identifier";
        quantity: Option<i64>, C::integer(1, 10_000_000).blank("1"), "number of units";
        rated_kva: f64, KVA.required(), "rated power";
        hv_kv: Option<f64>, KV, "rated voltage of the high-voltage winding";
        lv_kv: Option<f64>, KV, "rated voltage of the low-voltage winding";
        vector_group: Option<String>, C::text(), "vector group with its clock number";
        reference_temp_c: Option<f64>, TEMPERATURE_C.blank("losses are compared as quoted"), "temperature at which load losses are compared";
        factor_a_per_kw: Option<f64>, C::real(0.0, 1e9).blank("from the basis"), "value of a kW of no-load loss, once";
        factor_b_per_kw: Option<f64>, C::real(0.0, 1e9).blank("from the basis"), "value of a kW of load loss at rated load, once";
        factor_aux_per_kw: Option<f64>, C::real(0.0, 1e9).blank("from the basis"), "value of a kW of auxiliary loss, once";
        peak_pu: Option<f64>, C::real(0.0, 100.0), "peak load of year 1 over the rating";
        loss_factor_pu: Option<f64>, SHARE_PU, "loss factor of the load";
        load_growth_pct: Option<f64>, GROWTH_PCT.blank("basis, else 0"), "yearly growth of the load";
        max_no_load_loss_w: Option<f64>, LOSS_W, "highest no-load loss";
        max_load_loss_w: Option<f64>, LOSS_W, "highest load loss";
        impedance_pct: Option<f64>, IMPEDANCE_PCT, "wanted short-circuit impedance";
        impedance_tolerance_pct: Option<f64>, C::real(0.0, 100.0), "allowed difference in percent of the wanted impedance";
        max_sound_db: Option<f64>, C::real(0.0, 200.0), "highest sound level";
        max_mass_kg: Option<f64>, C::real(0.1, 1e7), "highest mass";
        max_delivery_weeks: Option<f64>, C::real(0.0, 1000.0), "latest delivery";
        law: Option<String>, C::id(), "minimum-efficiency law that bids must meet: eu-548-2014, us-10cfr431 or ca-sor-2016-311";
        near_tie_pct: Option<f64>, C::real(0.0, 100.0).blank("basis, else 0"), "bids within this of the least owning cost count as near-tied";
        tolerance: Option<Tolerance>, C::choice(Tolerance::WORDS).blank("iec"), "rule for losses above the guarantee";
        settlement: Option<Settlement>, C::choice(Settlement::WORDS).blank("unit"), "penalty per unit or on the mean of the lot";
    }
}

record! {
    /// A bid for a lot; money per unit in the bid's currency.
    Bid {
        tender: String, C::id().required(), "the tender";
        lot: String, C::id().required(), "the lot";
        bid: String, C::id().required(), "identifier of the bid within the lot";
        bidder: Option<String>, C::text(), "who bids";
        price: Money, COST.required(), "price of one unit";
        currency: Option<String>, C::id().blank("the tender's"), "currency of the bid (ISO 4217 code)";
        quantity: Option<i64>, C::integer(1, 10_000_000).blank("the lot's"), "number of units offered";
        rated_kva: Option<f64>, KVA.blank("the lot's"), "rated power";
        loss_base_kva: Option<f64>, KVA.blank("rated_kva"), "rating at which the load loss is quoted";
        no_load_loss_w: f64, LOSS_W.required(), "guaranteed no-load (iron) loss";
        load_loss_w: Option<f64>, LOSS_W.blank("from total_loss_w"), "guaranteed load (copper) loss";
        total_loss_w: Option<f64>, LOSS_W, "no-load plus load loss";
        reference_temp_c: Option<f64>, TEMPERATURE_C, "reference temperature of the load loss";
        auxiliary_loss_w: Option<f64>, LOSS_W.blank("0"), "fans and pumps";
        impedance_pct: Option<f64>, IMPEDANCE_PCT, "short-circuit impedance";
        vector_group: Option<String>, C::text(), "vector group with its clock number";
        insulation: Option<Insulation>, C::choice(Insulation::WORDS), "what insulates the windings";
        winding_metal: Option<WindingMetal>, C::choice(WindingMetal::WORDS).blank("copper"), "winding metal";
        freight_cost: Option<Money>, COST.blank("0"), "freight of one unit";
        install_cost: Option<Money>, COST.blank("0"), "putting one unit in";
        adder_cost: Option<Money>, C::signed_money().blank("0"), "other adders of one unit";
        sound_db: Option<f64>, C::real(0.0, 200.0), "sound level";
        mass_kg: Option<f64>, C::real(0.1, 1e7), "mass of one unit";
        delivery_weeks: Option<f64>, C::real(0.0, 1000.0), "weeks to delivery";
        warranty_years: Option<f64>, C::real(0.0, 100.0), "years of warranty";
        note: Option<String>, C::text(), "remark";
    }
}

record! {
    /// Measured losses of a delivered unit.
    Measured {
        tender: String, C::id().required(), "the tender";
        lot: String, C::id().required(), "the lot";
        bid: String, C::id().required(), "the bid";
        serial: String, C::id().required(), "serial number";
        no_load_loss_w: f64, LOSS_W.required(), "measured no-load loss";
        load_loss_w: f64, LOSS_W.required(), "measured load loss at rated current";
        auxiliary_loss_w: Option<f64>, LOSS_W.blank("not measured: no excess"), "measured auxiliary loss";
        test_temp_c: Option<f64>, C::real(-50.0, 250.0).blank("loss is at the lot's reference temperature"), "winding temperature at which the load loss was read; not that of the quotation";
        tested_on: Option<String>, C::date(), "date of the test";
    }
}

record! {
    /// The award of a lot: the bid, and the terms under which it was chosen and is settled.
    Award {
        lot: String, C::id().required(), "the lot";
        bid: String, C::id().required(), "the bid that it went to";
        factor_a_per_kw: f64, C::real(-1e12, 1e12).required(), "value of a kW of no-load loss at the award";
        factor_b_per_kw: f64, C::real(-1e12, 1e12).required(), "value of a kW of load loss at the lot's rating at the award";
        factor_aux_per_kw: f64, C::real(-1e12, 1e12).required(), "value of a kW of auxiliary loss at the award";
        stray_share_pu: f64, SHARE_PU.required(), "stray part of a load loss whose split is not known, at the award";
        owning_cost: f64, C::real(-1e15, 1e15).required(), "owning cost of one unit at the award";
        recommended: Option<String>, C::id(), "the bid that was recommended at the award";
        basis: Option<String>, C::id(), "the basis of the comparison";
        program: String, C::id().required(), "version of the program that compared";
        awarded_at: String, C::id().required(), "when (UTC)";
        awarded_by: String, C::id().required(), "who";
        why: Option<String>, C::text(), "why, in their own words";
    }
}

record! {
    /// A measured unit that entered the fleet.
    Delivery {
        tender: String, C::id().required(), "the tender";
        lot: String, C::id().required(), "the lot";
        bid: String, C::id().required(), "the bid";
        serial: String, C::id().required(), "serial number";
        unit: String, C::id().required(), "the unit of the fleet";
    }
}

/// A basis with its ranges and budgets: what one basis file holds.
#[derive(Clone, Debug, PartialEq)]
pub struct BasisSheet {
    /// The assumptions.
    pub basis: Basis,
    /// Ranges of uncertain inputs, in file order.
    pub ranges: Vec<BasisRange>,
    /// Budgets by year.
    pub budgets: Vec<BasisBudget>,
}

/// A tender with all that came in for it.
#[derive(Clone, Debug, PartialEq)]
pub struct TenderSheet {
    /// The tender.
    pub tender: Tender,
    /// Rates of other currencies.
    pub rates: Vec<TenderRate>,
    /// Its lots, in order of entry.
    pub lots: Vec<Lot>,
    /// Bids for all lots, in order of entry.
    pub bids: Vec<Bid>,
    /// Measured losses of delivered units, in order of entry.
    pub measured: Vec<Measured>,
    /// Awards of its lots, in order of entry.
    pub awards: Vec<Award>,
}
