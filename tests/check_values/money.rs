//! Check values T6: economic life, annuities, payback, Weibull.

use crate::harness::{Answers, Arg, Figures, In, Outcome, least, work, worked};

pub(crate) fn money(id: &str, i: &In) -> Outcome {
    let life = |first: f64, running: Vec<f64>, market: Option<Vec<f64>>| {
        let mut inputs: Vec<(&str, Arg)> = vec![
            ("first_cost", first.into()),
            ("running_cost", running.into()),
            ("discount_rate_pct", (100.0 * i.n("rate")).into()),
        ];
        inputs.extend(market.map(|market| ("market_value", Arg::from(market))));
        worked("economic-life", inputs)
    };
    // "200*(t-1)" of Panneerselvam 8.1.
    let rising = |years: u32| (0..years).map(|t| 200.0 * f64::from(t)).collect::<Vec<f64>>();
    match id {
        "T6-Panneerselvam-8.1-12pct" => {
            let l = life(i.n("first_cost"), rising(10), None);
            Figures::of("economic_life_yr", l.n("economic_life_years"))
                .list("EAC", &l.l("annual_cost"))
                .tighter("economic_life_yr", 0.0)
                .into()
        }
        "T6-Panneerselvam-8.1-0pct" => {
            let l = life(i.n("first_cost"), rising(7), None);
            Figures::of("economic_life_yr", l.n("economic_life_years"))
                .list("avg_total", &l.l("annual_cost"))
                .tighter("economic_life_yr", 0.0)
                .into()
        }
        "T6-Panneerselvam-8.4" => {
            let annual = |price, salvage, running| {
                let mut market = vec![0.0; 5];
                market.push(i.n(salvage));
                let l = life(i.n(price), vec![i.n(running); 6], Some(market));
                l.l("annual_cost")[5]
            };
            let defender = annual("defender_market_value", "defender_salvage", "defender_opcost");
            let challenger = annual("challenger_price", "challenger_salvage", "challenger_opcost");
            Figures::of("AE_defender", defender)
                .and("AE_challenger", challenger)
                .word("decision", if challenger < defender { "replace" } else { "keep" })
                .into()
        }
        "T6-Panneerselvam-4.2" => {
            let worth = |bid| {
                let bid = i.list(bid);
                let a = work!(
                    "annuity",
                    discount_rate_pct = 100.0 * i.n("rate"),
                    years = i.n("years"),
                    paid_now = bid[0],
                    yearly = bid[1],
                );
                a.n("present_value")
            };
            Figures::of("PW1", worth("bid1")).and("PW2", worth("bid2")).into()
        }
        "T6-Newnan-13.2-13.4" => {
            let market = i.list("market_value");
            let running = i.list("operating").into_iter().zip(i.list("breakdown_risk"));
            let running: Vec<f64> = running.map(|(a, b)| a + b).collect();
            let l = life(market[0], running, Some(market[1..].to_vec()));
            let marginal = l.l("marginal_cost");
            Figures::of("MC_first", marginal[0])
                .and("MC_min", least(&marginal))
                .and("MC_last", marginal[6])
                .and("min_EUAC", l.n("least_annual_cost"))
                .and("min_cost_life_yr", l.n("economic_life_years"))
                .tighter("MC_first", 1e-12)
                .tighter("MC_min", 1e-12)
                .tighter("MC_last", 1e-12)
                .tighter("min_cost_life_yr", 0.0)
                .into()
        }
        "T6-Newnan-13.4-rule" => {
            // The rate is that of Ex 13-2, of which this is the continuation.
            let k = work!(
                "years-to-keep",
                marginal_cost = i.list("defender_MC"),
                challenger_annual_cost = i.n("challenger_min_EUAC"),
                discount_rate_pct = 15.0,
            );
            Figures::of("keep_years", k.n("keep_years"))
                .and("replace_in_year", k.n("replace_in_year"))
                .into()
        }
        "T6-AUC-ESL" => {
            let l = life(i.n("first_cost"), i.list("AOC"), Some(i.list("market_value")));
            let annual = l.l("annual_cost");
            assert_eq!(l.n("economic_life_years"), 3.0, "the note: ESL = 3 yr");
            assert!((annual[3] - 6556.0).abs() < 0.5 && (annual[4] - 6580.0).abs() < 0.5);
            Figures::of("AW_1", -annual[0]).and("AW_2", -annual[1]).and("AW_3", -annual[2]).into()
        }
        "T6-White-11.3" => Outcome::Published("both annual costs without the flows behind them"),
        "T6-annuity" => {
            let a = work!("annuity", discount_rate_pct = 100.0 * i.n("rate"), years = i.n("years"));
            Figures::of("PWF", a.n("annuity_years"))
                .and("CRF", a.n("capital_recovery_per_year"))
                .and("sinking", a.n("sinking_fund_per_year"))
                .and("SPPW", a.n("single_payment"))
                .into()
        }
        "T6-growing-annuity" => {
            let rates = i.list("i").into_iter().zip(i.list("g"));
            let pv = |(rate, g): (f64, f64)| {
                let a = work!(
                    "growing-annuity",
                    first = i.n("first"),
                    discount_rate_pct = 100.0 * rate,
                    growth_pct = 100.0 * g,
                    years = i.n("n"),
                );
                a.n("present_value")
            };
            Figures::default().list("PV", &rates.map(pv).collect::<Vec<_>>()).into()
        }
        "T6-real-nominal" => {
            let (nominal, f) = (100.0 * i.n("nominal"), 100.0 * i.n("inflation"));
            let real = work!("real-rate", nominal_rate_pct = nominal, inflation_pct = f);
            let pv = work!(
                "growing-annuity",
                first = i.n("first_real") * (1.0 + i.n("inflation")),
                discount_rate_pct = nominal,
                growth_pct = f,
                years = i.n("n"),
            );
            let plain = work!(
                "annuity",
                discount_rate_pct = real.n("real_rate_pct"),
                years = i.n("n"),
                yearly = i.n("first_real")
            );
            let ratio = plain.n("present_value") / pv.n("present_value");
            assert!((ratio - 1.0).abs() < 1e-12, "real and nominal agree");
            Figures::of("real_rate", real.n("real_rate_pct") / 100.0)
                .and("PV_nominal", pv.n("present_value"))
                .into()
        }
        "T6-discounted-payback" => {
            let p = work!(
                "payback",
                capital = i.n("price_premium"),
                yearly_saving = i.n("annual_saving"),
                years = i.n("years"),
                discount_rate_pct = 100.0 * i.n("rate"),
            );
            Figures::of("simple_payback_yr", p.n("simple_payback_years"))
                .and("discounted_payback_interp_yr", p.n("discounted_payback_years"))
                .and("NPV", p.n("net_present_value"))
                .and("IRR", p.n("internal_rate_pct") / 100.0)
                .into()
        }
        "T6-Weibull" => {
            let w = work!(
                "weibull",
                failure_shape = i.n("shape"),
                failure_scale_years = i.n("scale_yr"),
                age_years = i.n("age_yr"),
                years = 5.0,
            );
            Figures::of("hazard_per_yr", w.n("hazard_per_year"))
                .and("reliability", w.n("survival_pu"))
                .and("p_fail_next_yr", w.n("fails_in_year_pu"))
                .and("p_fail_next_5yr", w.n("fails_within_pu"))
                .and("mean_life_yr", w.n("mean_life_years"))
                .and("B10_yr", w.n("b10_years"))
                .into()
        }
        _ => panic!("{id} has no handler: add one"),
    }
}
