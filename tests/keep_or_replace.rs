//! Keep or replace against a slow oracle written afresh from the definitions, on 10,000 random small cases.
//!
//! The oracle knows nothing of the engine's functions: it has its own discounting, yearly costs, Weibull and
//! windows, and finds the least cost by walking the tree of what can happen (buy one of the offers now, or wait
//! a year, in which the unit fails or not). It is compared with V(0), with min(min J, R(0)) and with every
//! choice. Source of the definitions: the project's methods page, section 7 (backward induction, Bellman 1957).

#![expect(
    clippy::cast_possible_wrap,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::cast_precision_loss,
    clippy::print_stderr,
    reason = "small counts and calendar years; the counts of cases are said"
)]

use ironhum::engine::columns::{Basis, CapitalRecovery, CashFlow};
use ironhum::engine::decision::fit::{Terminals, fitting};
use ironhum::engine::decision::fleet::{FleetColumns, Kernel, Outcome};
use ironhum::engine::decision::keep_or_replace::decide;
use ironhum::engine::decision::place::resolve;
use ironhum::engine::decision::{Candidate, Context, LeftOut, UnitFacts};
use ironhum::engine::economics::Assumptions;
use ironhum::engine::flags::Flags;
use ironhum::engine::loading::{Market, Ratios, Weights};
use ironhum::engine::transformer::losses::Losses;
use ironhum::engine::working::Silent;
use rand::rngs::StdRng;
use rand::{RngExt, SeedableRng};

/// One random case in plain numbers.
#[derive(Debug)]
struct Case {
    n: usize,
    latest: usize,
    i: f64,
    mid_year: bool,
    full: bool,
    e: f64,
    e_q: f64,
    price: f64,
    demand: f64,
    growth: f64,
    growth_years: usize,
    limit: Option<f64>,
    sizes: Option<(usize, usize)>,
    weibull: Option<(f64, f64)>,
    premium: f64,
    failure_cost: f64,
    removal: f64,
    scrap: f64,
    upkeep: f64,
    upkeep_age: f64,
    life: f64,
    kva: f64,
    p0: f64,
    pk: f64,
    peak: f64,
    lsf: f64,
    year_made: Option<i64>,
    offers: Vec<Buy>,
}

#[derive(Clone, Debug)]
struct Buy {
    kva: f64,
    p0: f64,
    pk: f64,
    price: f64,
    install: f64,
    life: Option<f64>,
    lead: f64,
    three_phase: Option<bool>,
    hv_kv: Option<f64>,
}

const FIRST_YEAR: i64 = 2026;

fn random(rng: &mut StdRng) -> Case {
    let n = rng.random_range(1..7);
    let sizes = [50.0, 100.0, 160.0, 250.0, 400.0];
    let buy = |rng: &mut StdRng| Buy {
        kva: sizes[rng.random_range(0..5)],
        p0: rng.random_range(50.0..400.0),
        pk: rng.random_range(500.0..4000.0),
        price: rng.random_range(200.0..4000.0_f64).round(),
        install: [0.0, 300.0][rng.random_range(0..2)],
        life: rng.random_bool(0.5).then(|| rng.random_range(3.0..40.0)),
        lead: [0.0, 0.0, 0.5, 1.0, 3.0][rng.random_range(0..5)],
        three_phase: [None, Some(true), Some(true), Some(false)][rng.random_range(0..4)],
        hv_kv: [None, Some(10.0), Some(10.2), Some(9.8), Some(20.0)][rng.random_range(0..5)],
    };
    let mut offers: Vec<Buy> = (0..rng.random_range(1..6)).map(|_| buy(rng)).collect();
    if rng.random_bool(0.3) {
        // Twins make ties that only the catalogue order breaks.
        let twin = offers[rng.random_range(0..offers.len())].clone();
        offers.push(twin);
    }
    if rng.random_bool(0.1) {
        // A twin of the old unit that costs nothing: replacing ties with never.
        offers.push(Buy {
            kva: 100.0,
            p0: 300.0,
            pk: 2000.0,
            price: 0.0,
            install: 0.0,
            life: None,
            lead: 0.0,
            three_phase: None,
            hv_kv: None,
        });
    }
    let free_twin = offers.last().is_some_and(|o| o.price == 0.0);
    let hazard = rng.random_bool(0.5) && !free_twin;
    Case {
        n,
        latest: rng.random_range(0..8).min(n - 1),
        i: [0.0, 0.05, 0.08, -0.02][rng.random_range(0..4)],
        mid_year: rng.random_bool(0.5),
        full: rng.random_bool(0.5),
        e: [0.0, 0.02, 0.05][rng.random_range(0..3)],
        e_q: [0.0, 0.03][rng.random_range(0..2)],
        price: rng.random_range(0.03..0.3),
        demand: [0.0, 40.0][rng.random_range(0..2)],
        growth: [0.0, 0.03, -0.06][rng.random_range(0..3)],
        growth_years: rng.random_range(1..8),
        limit: rng.random_bool(0.4).then(|| rng.random_range(0.4..1.3)),
        sizes: rng.random_bool(0.6).then(|| (rng.random_range(0..3), rng.random_range(0..3))),
        weibull: hazard.then(|| (rng.random_range(1.0..6.0), rng.random_range(8.0..50.0))),
        premium: [0.0, 0.25][rng.random_range(0..2)],
        failure_cost: [0.0, 2000.0][rng.random_range(0..2)],
        removal: if free_twin { 0.0 } else { [0.0, 250.0][rng.random_range(0..2)] },
        scrap: if free_twin { 0.0 } else { [0.0, 600.0][rng.random_range(0..2)] },
        upkeep: if free_twin { 0.0 } else { [0.0, 30.0][rng.random_range(0..2)] },
        upkeep_age: [0.0, 0.04][rng.random_range(0..2)],
        life: rng.random_range(4.0..40.0),
        kva: 100.0,
        p0: 300.0,
        pk: 2000.0,
        peak: rng.random_range(20.0..130.0),
        lsf: rng.random_range(0.1..0.9),
        year_made: rng.random_bool(0.85).then(|| rng.random_range(1960..2031)),
        offers,
    }
}

/// The oracle.
struct Oracle<'a> {
    c: &'a Case,
    /// Indices of the offers that fit.
    fit: Vec<usize>,
}

impl Oracle<'_> {
    fn new(c: &Case) -> Oracle<'_> {
        let agrees = |o: &Buy| {
            o.three_phase != Some(false)
                && o.hv_kv.is_none_or(|v| (9.8 - 1e-9..=10.2 + 1e-9).contains(&v))
        };
        let agreeing: Vec<usize> = (0..c.offers.len()).filter(|&j| agrees(&c.offers[j])).collect();
        let mut ratings: Vec<f64> = agreeing.iter().map(|&j| c.offers[j].kva).collect();
        ratings.sort_by(f64::total_cmp);
        ratings.dedup();
        let kept: Vec<f64> = match c.sizes {
            Some((down, up)) if !ratings.is_empty() => {
                let place =
                    ratings.iter().position(|r| *r >= c.kva).unwrap_or(ratings.len() - 1) as i64;
                let width = (down + up + 1) as i64;
                let mut first = place - down as i64;
                while first + width > ratings.len() as i64 && first > 0 {
                    first -= 1;
                }
                first = first.max(0);
                ratings.iter().skip(first as usize).take(width as usize).copied().collect()
            }
            _ => ratings,
        };
        let fit = agreeing.into_iter().filter(|&j| kept.contains(&c.offers[j].kva)).collect();
        Oracle { c, fit }
    }
    fn d(&self, k: usize) -> f64 {
        let k = k as f64;
        1.0 / (1.0 + self.c.i).powf(if self.c.mid_year { k - 0.5 } else { k })
    }
    fn v(&self, t: usize) -> f64 {
        1.0 / (1.0 + self.c.i).powf(t as f64)
    }
    fn a(&self, n: f64) -> f64 {
        if self.c.i == 0.0 { n } else { (1.0 - (1.0 + self.c.i).powf(-n)) / self.c.i }
    }
    fn peak(&self, k: usize) -> f64 {
        let years = k.min(self.c.growth_years) - 1;
        let mut peak = self.c.peak;
        for _ in 0..years {
            peak *= 1.0 + self.c.growth;
        }
        peak
    }
    fn run(&self, kva: f64, p0: f64, pk: f64, k: usize, age: f64) -> f64 {
        let c = self.c;
        let idx = (1.0 + c.e).powf(k as f64 - 1.0);
        let beta2 = (self.peak(k) / kva).powi(2);
        (p0 * 8.76 + pk * beta2 * c.lsf * 8.76) * c.price * idx
            + c.demand * (p0 + pk * beta2 * 0.64) / 1000.0
            + c.upkeep * (1.0 + c.upkeep_age).powf(age)
    }
    fn age(&self, k: usize) -> f64 {
        match self.c.year_made {
            Some(made) => ((FIRST_YEAR + k as i64 - 1 - made) as f64).max(0.0),
            None => k as f64 - 1.0,
        }
    }
    fn h(&self, age: f64) -> f64 {
        match (self.c.weibull, self.c.year_made) {
            (Some((b, eta)), Some(_)) => {
                1.0 - ((age / eta).powf(b) - ((age + 1.0) / eta).powf(b)).exp()
            }
            _ => 0.0,
        }
    }
    fn carries(&self, j: usize, t: usize) -> bool {
        self.c.limit.is_none_or(|limit| {
            (t + 1..=self.c.n).all(|k| self.peak(k) <= limit * self.c.offers[j].kva * (1.0 + 1e-12))
        })
    }
    fn open(&self, j: usize, t: usize) -> bool {
        t as f64 >= self.c.offers[j].lead && t <= self.c.latest && self.carries(j, t)
    }
    fn g(&self, j: usize, t: usize, premium: f64) -> f64 {
        let (c, o) = (self.c, &self.c.offers[j]);
        let q = (1.0 + c.e_q).powf(t as f64);
        let mut k_t = (o.price + o.install) * (1.0 + premium) * q;
        if !c.full {
            k_t *= self.a((c.n - t) as f64) / self.a(o.life.unwrap_or(c.life));
        }
        let mut pv = (k_t + c.removal - c.scrap) * self.v(t);
        for k in t + 1..=c.n {
            let service = (k - t) as f64 - 1.0;
            pv += self.d(k) * self.run(o.kva, o.p0, o.pk, k, service)
                + self.v(k) * self.h(service) * (c.failure_cost + o.price + o.install);
        }
        pv
    }
    /// What a failure of year `t` leads to.
    fn forced(&self, t: usize) -> f64 {
        if t == self.c.n {
            return 0.0;
        }
        let able: Vec<usize> = self.fit.iter().copied().filter(|&j| self.carries(j, t)).collect();
        let pool = if able.is_empty() { self.fit.clone() } else { able };
        pool.iter().map(|&j| self.g(j, t, self.c.premium)).fold(f64::INFINITY, f64::min)
    }
    /// What is still to pay from time `t` on with the old unit alive, when buying is `allowed` or not.
    fn from(&self, t: usize, allowed: bool) -> f64 {
        let c = self.c;
        if t == c.n {
            return (c.removal - c.scrap) * self.v(t);
        }
        let h = self.h(self.age(t + 1));
        let mut wait = self.d(t + 1) * self.run(c.kva, c.p0, c.pk, t + 1, self.age(t + 1))
            + (1.0 - h) * self.from(t + 1, allowed);
        if h > 0.0 {
            wait += h * (c.failure_cost * self.v(t + 1) + self.forced(t + 1));
        }
        let buy =
            self.fit.iter().filter(|&&j| allowed && self.open(j, t)).map(|&j| self.g(j, t, 0.0));
        buy.fold(wait, f64::min)
    }
    /// J(t, c): the old unit kept to time `t`, then offer `j`.
    fn fixed(&self, j: usize, t: usize) -> f64 {
        let c = self.c;
        let (mut pv, mut alive) = (0.0, 1.0);
        for k in 1..=t {
            let h = self.h(self.age(k));
            let failing =
                if h > 0.0 { h * (c.failure_cost * self.v(k) + self.forced(k)) } else { 0.0 };
            pv += alive * (self.d(k) * self.run(c.kva, c.p0, c.pk, k, self.age(k)) + failing);
            alive *= 1.0 - h;
        }
        pv + alive * self.g(j, t, 0.0)
    }
}

fn engine(c: &Case) -> (Context, Vec<Candidate>, UnitFacts, Terminals) {
    let basis = Basis {
        name: "random".into(),
        currency: "EUR".into(),
        first_year: FIRST_YEAR,
        horizon_years: c.n as i64,
        discount_rate_pct: c.i * 100.0,
        cash_flow: Some(if c.mid_year { CashFlow::MidYear } else { CashFlow::YearEnd }),
        energy_price_per_kwh: Some(c.price),
        energy_escalation_pct: Some(c.e * 100.0),
        demand_charge_per_kw_year: Some(c.demand),
        load_growth_years: Some(c.growth_years as i64),
        capital_recovery: Some(if c.full {
            CapitalRecovery::Full
        } else {
            CapitalRecovery::Annuity
        }),
        life_years: Some(c.life),
        equipment_escalation_pct: Some(c.e_q * 100.0),
        latest_replacement_years: Some(c.latest as i64),
        offer_sizes_down: c.sizes.map(|s| s.0 as i64),
        offer_sizes_up: c.sizes.map(|s| s.1 as i64),
        loading_limit_pu: c.limit,
        failure_shape: c.weibull.map(|w| w.0),
        failure_scale_years: c.weibull.map(|w| w.1),
        emergency_premium_pct: Some(c.premium * 100.0),
        upkeep_per_year: Some(c.upkeep),
        upkeep_age_pct: Some(c.upkeep_age * 100.0),
        ..Basis::blank()
    };
    let context = Context {
        assumptions: Assumptions::resolve(&basis).expect("a good basis"),
        market: Market {
            constant: Weights { price_per_kwh: c.price, ..Weights::default() },
            profiles: vec![Ok(Weights { price_per_kwh: c.price, ..Weights::default() })],
            series: false,
        },
        ratios: vec![Ratios { peak: 1.0, load_factor_pu: c.lsf, loss_factor_pu: c.lsf }],
        durations: Vec::new(),
        estimate: None,
        candidates: Vec::new(),
        flags: Flags::NONE,
    };
    let candidates = c
        .offers
        .iter()
        .map(|o| Candidate {
            offer: String::new(),
            losses: Losses {
                rated_kva: o.kva,
                no_load_loss_w: o.p0,
                load_loss_w: o.pk,
                auxiliary_loss_w: 0.0,
                reactance_pu: None,
            },
            price: o.price,
            install_cost: o.install,
            life_years: o.life,
            lead_time_years: o.lead,
            phases: o.three_phase.map(|three| if three { 3 } else { 1 }),
            hv_kv: o.hv_kv,
            lv_kv: None,
            clock: None,
            lawful: Vec::new(),
        })
        .collect();
    let nan = f64::NAN;
    let facts = UnitFacts {
        in_service: true,
        rated_kva: c.kva,
        loss_base_kva: nan,
        no_load_loss_w: c.p0,
        load_loss_w: c.pk,
        total_loss_w: nan,
        auxiliary_loss_w: nan,
        auxiliary_hours: nan,
        peak_kva: c.peak,
        load_factor_pu: nan,
        loss_factor_pu: nan,
        load_growth_pct: c.growth * 100.0,
        responsibility_pu: 0.8,
        energised_hours: nan,
        power_factor: nan,
        year_made: c.year_made.map_or(nan, |y| y as f64),
        failure_cost: c.failure_cost,
        removal_cost: c.removal,
        scrap_value: c.scrap,
        customers: nan,
        impedance_pct: nan,
        phases: Some(3),
        winding_metal: None,
        insulation: None,
        from_test: false,
        profile: 0,
    };
    let terminals = Terminals {
        phases: Some(3),
        hv_kv: Some(10.0),
        lv_kv: None,
        clock: None,
        rated_kva: c.kva,
    };
    (context, candidates, facts, terminals)
}

#[test]
fn ten_thousand_random_cases_equal_the_oracle() {
    let mut rng = StdRng::seed_from_u64(20_261_201);
    let (mut left_out, mut never, mut now, mut later, mut failing, mut ties) = (0, 0, 0, 0, 0, 0);
    for number in 0..10_000 {
        let case = random(&mut rng);
        let oracle = Oracle::new(&case);
        let (context, candidates, facts, terminals) = engine(&case);
        let a = &context.assumptions;
        let fit = fitting(&terminals, &candidates, a.offer_sizes);
        assert_eq!(fit, oracle.fit, "case {number}: window {case:?}");
        let place = resolve(&mut Silent, &facts, &context).expect("complete");
        let got = decide(&place, &candidates, &fit, a).expect("has a life");
        let open: Vec<(usize, usize)> = (0..=case.latest)
            .flat_map(|t| oracle.fit.iter().map(move |&j| (t, j)))
            .filter(|&(t, j)| oracle.open(j, t))
            .collect();
        let Some(got) = got else {
            assert!(open.is_empty(), "case {number}: an open offer was missed");
            left_out += 1;
            continue;
        };
        let value = oracle.from(0, true);
        let keep = oracle.from(0, false);
        let scale = keep.abs().max(value.abs()).max(1.0);
        let near = |x: f64, y: f64| (x - y).abs() <= 1e-9 * scale;
        let all: Vec<(usize, usize, f64)> =
            open.iter().map(|&(t, j)| (t, j, oracle.fixed(j, t))).collect();
        let least = all.iter().fold(keep, |m, x| m.min(x.2));
        assert!(
            near(value, least),
            "case {number}: V(0) {value} is not min(J, R) {least}: {case:?}"
        );
        assert!(
            near(got.recursion_pv, value) && near(got.best_pv, value),
            "case {number}: {case:?}"
        );
        assert!(near(got.keep_pv, keep), "case {number}");

        // The choice: never before any, then lower t, then the offer that entered first.
        let equal = |x: f64, y: f64| (x - y).abs() <= 1e-12 * x.abs().max(y.abs());
        let tied =
            all.iter().filter(|x| equal(x.2, least)).count() + usize::from(equal(keep, least));
        ties += usize::from(tied > 1);
        let choice = if equal(keep, least) {
            None
        } else {
            all.iter().find(|x| equal(x.2, least)).map(|x| (x.0, x.1))
        };
        assert_eq!(got.best.map(|b| (b.offset, b.offer)), choice, "case {number}: {case:?}");
        for choice in &got.years {
            let at = all.iter().filter(|x| x.0 == choice.offset);
            let least = at.fold(f64::INFINITY, |m, x| m.min(x.2));
            assert!(near(choice.pv, least), "case {number}: year {}", choice.offset);
        }
        if choice.is_some_and(|(t, _)| t == 0) {
            let other = all.iter().filter(|x| x.0 > 0).fold(keep, |m, x| m.min(x.2));
            assert!(near(got.waiting_pv(&mut Silent), other - least), "case {number}: waiting");
        } else {
            assert_eq!(got.waiting_pv(&mut Silent), 0.0);
        }
        match choice {
            None => never += 1,
            Some((0, _)) => now += 1,
            Some(_) => later += 1,
        }
        failing += usize::from(case.weibull.is_some() && case.year_made.is_some());

        // The bulk form gives the same.
        let mut fleet = FleetColumns::default();
        fleet.push("U", None, 0, terminals, &facts);
        let kernel = Kernel::new(&context, &candidates, &fleet).expect("has a life");
        let mut out = [Outcome::left_out(LeftOut::NoOffer)];
        kernel.evaluate(&fleet, 0..1, &mut out);
        let bulk = (out[0].best_offer != Outcome::NONE)
            .then(|| (usize::from(out[0].best_year_offset), out[0].best_offer as usize));
        assert_eq!(bulk, choice, "case {number}: bulk");
        assert!(near(out[0].best_pv, value) && near(out[0].keep_pv, keep), "case {number}: bulk");
        assert!(
            near(out[0].waiting_pv, got.waiting_pv(&mut Silent)),
            "case {number}: bulk waiting"
        );
    }
    // The cases must reach every branch, or the agreement says little.
    eprintln!(
        "left out {left_out}, never {never}, now {now}, later {later}, failing {failing}, ties {ties}"
    );
    assert!([left_out, never, now, later, failing, ties].iter().all(|n| *n > 300));
}
