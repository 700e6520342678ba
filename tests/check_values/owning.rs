//! Check values T1 and T7: owning cost, capitalised factors, penalty.

use ironhum::engine::economics::payback::repeated_energy;
use ironhum::engine::work::Datum;
use ironhum::engine::working::Silent;

use crate::harness::{Answers, Arg, Figures, In, Outcome, work, worked};

pub(crate) fn owning_cost(id: &str, i: &In) -> Outcome {
    match id {
        "T1-RUS1724E301-bidcompare" => {
            let bid = |price, p0, pk, aux| {
                work!(
                    "owning-cost",
                    price = i.n(price),
                    no_load_loss_w = 1000.0 * i.n(p0),
                    load_loss_w = 1000.0 * i.n(pk),
                    auxiliary_loss_w = 1000.0 * i.n(aux),
                    factor_a_per_kw = i.n("A_USD_per_kW"),
                    factor_b_per_kw = i.n("B_USD_per_kW"),
                    factor_aux_per_kw = i.n("C_aux_USD_per_kW"),
                )
            };
            let a = bid("bidA_USD", "P0A_kW", "PkA_kW", "PauxA_kW");
            let b = bid("bidB_USD", "P0B_kW", "PkB_kW", "PauxB_kW");
            let winner = if a.n("owning_cost") < b.n("owning_cost") { "A" } else { "B" };
            Figures::of("noload_cost_A_USD", a.n("no_load_cost"))
                .and("load_cost_A_USD", a.n("load_cost"))
                .and("aux_cost_A_USD", a.n("auxiliary_cost"))
                .and("TOC_A_USD", a.n("owning_cost"))
                .and("noload_cost_B_USD", b.n("no_load_cost"))
                .and("load_cost_B_USD", b.n("load_cost"))
                .and("aux_cost_B_USD", b.n("auxiliary_cost"))
                .and("TOC_B_USD", b.n("owning_cost"))
                .word("winner", winner)
                .into()
        }
        "T1-REA65-2-factors" => Outcome::Published("factors without their derivation"),
        "T1-Theraja-50.72" => {
            let cost = |p0, pk| {
                let unit = work!(
                    "loss-cost",
                    rated_kva = i.n("rating_kVA"),
                    no_load_loss_w = 1000.0 * i.n(p0),
                    load_loss_w = 1000.0 * i.n(pk),
                    load_kva = i.list("load_kVA"),
                    hours = i.list("hours"),
                    days = i.n("days"),
                    energy_price_per_kwh = i.n("energy_price_per_kWh"),
                );
                unit.n("loss_cost_per_year")
            };
            let (one, two) = (cost("P0_I_kW", "Pk_I_kW"), cost("P0_II_kW", "Pk_II_kW"));
            let even = work!(
                "break-even-price",
                yearly_saving = two - one,
                fixed_charge_rate_pct = 100.0 * i.n("fixed_charge_rate"),
                price_difference = i.n("price_I_minus_II"),
            );
            let dearer = even.get("choice") == Some(&Datum::Word("dearer".to_owned()));
            Figures::of("loss_cost_I_per_yr", one)
                .and("loss_cost_II_per_yr", two)
                .and("breakeven_price_difference", even.n("break_even_price_difference"))
                .word("choice", if dearer { "I" } else { "II" })
                .into()
        }
        "T1-Theraja-50.80" => {
            let yearly = |p0, pk| {
                let daily = i.n(p0) + i.n(pk);
                repeated_energy(&mut Silent, daily, i.n("days"), i.n("energy_price_per_kWh"))
            };
            let even = work!(
                "break-even-price",
                yearly_saving =
                    yearly("P0_B_kWh_day", "Pk_B_kWh_day") - yearly("P0_A_kWh_day", "Pk_A_kWh_day"),
                fixed_charge_rate_pct = 100.0 * i.n("fixed_charge_rate"),
            );
            Figures::of("B_should_be_cheaper_by", even.n("break_even_price_difference")).into()
        }
        "T1-handbook-units-trap" => {
            // Printed per W; the book then pays the capitalised sums every year.
            let unit = |paid: &'static str| {
                let mut inputs: Vec<(&str, Arg)> = vec![
                    ("price", i.n("price_USD").into()),
                    ("no_load_loss_w", i.n("NLL_W").into()),
                    ("load_loss_w", i.n("LL_W").into()),
                    ("factor_a_per_w", i.n("NLL_cost_USD_per_W").into()),
                    ("factor_b_per_w", i.n("LL_cost_USD_per_W").into()),
                    ("paid", paid.into()),
                ];
                if paid == "per-year" {
                    inputs.push(("evaluation_years", i.n("evaluation_years").into()));
                }
                worked("owning-cost", inputs).n("owning_cost")
            };
            assert_eq!(unit("once"), 33_125.0, "the conventional reading, in the note");
            Figures::of("TCO_USD", unit("per-year")).into()
        }
        "T1-simple-AB-annuity" => {
            let f = work!(
                "factors",
                years = i.n("years"),
                discount_rate_pct = 100.0 * i.n("discount_rate"),
                energy_price_per_kwh = i.n("energy_price_per_kWh"),
                energised_hours = i.n("hours"),
                peak_pu = i.n("rms_load_pu"),
                loss_factor_pu = 1.0,
            );
            let a = work!(
                "annuity",
                discount_rate_pct = 100.0 * i.n("discount_rate"),
                years = i.n("years")
            );
            Figures::of("annuity", a.n("annuity_years"))
                .and("A_per_kW", f.n("factor_a_per_kw"))
                .and("B_per_kW", f.n("factor_b_per_kw"))
                .into()
        }
        "T1-IEEE-levelised-AB" => {
            let f = work!(
                "factors",
                method = "levelized",
                years = 30.0,
                discount_rate_pct = 7.0,
                energy_price_per_kwh = i.n("EC_USD_per_kWh"),
                investment_per_kw_year = i.n("SC_USD_per_kW_yr"),
                fixed_charge_rate_pct = 100.0 * i.n("FCR_per_yr"),
                responsibility_on_losses_pu = i.n("RF_on_losses"),
                loss_factor_pu = i.n("loss_factor"),
                peak_pu = i.n("equiv_peak_pu"),
            );
            Figures::of("A_USD_per_kW", f.n("factor_a_per_kw"))
                .and("B_USD_per_kW", f.n("factor_b_per_kw"))
                .into()
        }
        "T1-C57.120-IF-ET" => {
            let f = work!(
                "factors",
                method = "levelized",
                years = 30.0,
                discount_rate_pct = 7.0,
                energised_hours = 8760.0 * i.n("availability"),
                energy_price_per_kwh = i.n("EC_USD_per_kWh"),
                investment_per_kw_year = i.n("LIC_USD_per_kW_yr"),
                transmission_efficiency_pu = i.n("ET"),
                fixed_charge_rate_pct = 100.0 * i.n("FCR"),
                increase_factor = i.n("IF"),
                responsibility_pu = i.n("PRF_load"),
                loss_factor_pu = i.n("TLF"),
                peak_pu = i.n("PUL"),
            );
            Figures::of("A_USD_per_kW", f.n("factor_a_per_kw")).into()
        }
        "T7-Colton-penalty" => {
            let p = work!(
                "penalty",
                factor_a_per_kw = 1000.0 * i.n("A_USD_per_W"),
                factor_b_per_kw = 1000.0 * i.n("B_USD_per_W"),
                no_load_excess_w = i.n("excess_P0_W"),
                load_excess_w = i.n("excess_Pk_W"),
            );
            Figures::of("penalty_USD", p.n("penalty")).into()
        }
        _ => panic!("{id} has no handler: add one"),
    }
}
