//! Which offers fit a place, and from when one may be bought.

use crate::engine::Refusal;
use crate::engine::columns::Offer;
use crate::engine::economics::Assumptions;
use crate::engine::loading::Duty;
use crate::engine::loading::duty::growth;
use crate::engine::transformer::losses::{Losses, quoted};
use crate::engine::transformer::vector_group;
use crate::engine::transformer::voltage_drop::Supply;
use crate::engine::working::{Formula, Recorder, Silent};

/// An offer made ready to compute with.
#[derive(Clone, Debug, PartialEq)]
pub struct Candidate {
    /// Identifier of the offer.
    pub offer: String,
    /// Its losses at its rating.
    pub losses: Losses,
    /// Price of one unit.
    pub price: f64,
    /// Cost of putting it in.
    pub install_cost: f64,
    /// Years of service that the price buys.
    pub life_years: Option<f64>,
    /// Years from order to delivery.
    pub lead_time_years: f64,
    /// Number of phases.
    pub phases: Option<i64>,
    /// Rated high voltage.
    pub hv_kv: Option<f64>,
    /// Rated low voltage.
    pub lv_kv: Option<f64>,
    /// Clock number of the vector group.
    pub clock: Option<u8>,
    /// Whether it meets the law named in the basis, by years of delay; empty = no law is named.
    pub lawful: Vec<bool>,
}

const CAPITAL: Formula = Formula {
    name: "price and installation at today's price",
    symbol: "P",
    formula: "price + install",
    unit: "money",
    source: "the offer; methods, section 7",
};

impl Candidate {
    /// The candidate of an offer.
    ///
    /// # Errors
    /// Losses that contradict each other.
    pub fn of_offer(offer: &Offer) -> Result<Self, Refusal> {
        let losses = quoted(
            &mut Silent,
            offer.rated_kva,
            offer.loss_base_kva,
            Some(offer.no_load_loss_w),
            Some(offer.load_loss_w),
            None,
            offer.auxiliary_loss_w,
        )?;
        Ok(Self {
            offer: offer.offer.clone(),
            losses: losses.with_impedance(&mut Silent, offer.impedance_pct),
            price: offer.price.amount(),
            install_cost: offer.install_cost.unwrap_or_default().amount(),
            life_years: offer.life_years,
            lead_time_years: offer.lead_time_years.unwrap_or(0.0),
            phases: offer.phases,
            hv_kv: offer.hv_kv,
            lv_kv: offer.lv_kv,
            clock: offer.vector_group.as_deref().and_then(vector_group::clock),
            lawful: Vec::new(),
        })
    }

    /// Price with installation.
    pub fn price_installed(&self) -> f64 {
        self.capital(&mut Silent)
    }

    /// Price with installation, stated.
    pub fn capital<R: Recorder>(&self, w: &mut R) -> f64 {
        let inputs = [("price", self.price), ("install", self.install_cost)];
        let value = w.step(&CAPITAL, &inputs, self.price + self.install_cost);
        w.about(&|| self.offer.clone());
        value
    }

    /// Whether it meets the law when bought `t` years from now.
    pub fn lawful_at(&self, t: usize) -> bool {
        self.lawful.get(t).copied().unwrap_or(true)
    }

    /// Whether its lead time has passed at time `t`.
    pub fn delivered_by(&self, t: usize) -> bool {
        #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
        let t = t as f64;
        t >= self.lead_time_years
    }

    /// Whether the peak of a year after `t` is above its rating.
    pub fn overloaded(&self, duty: &Duty, t: usize, a: &Assumptions) -> bool {
        highest_peak(duty, t, a) > self.losses.rated_kva * (1.0 + 1e-12)
    }

    /// Whether the voltage holds at the peak of every year after `t`; at rated voltage it always does.
    pub fn holds_voltage(&self, duty: &Duty, t: usize, a: &Assumptions) -> bool {
        holds_voltage(&self.losses, duty, t, a).unwrap_or(true)
    }

    /// Whether it carries the peak of every year after `t`: its voltage holds, and the load is within the limit.
    pub fn carries(&self, duty: &Duty, t: usize, a: &Assumptions) -> bool {
        if !self.holds_voltage(duty, t, a) {
            return false;
        }
        let rated_kva = self.losses.rated_kva;
        a.loading_limit_pu
            .is_none_or(|limit| within_limit(highest_peak(duty, t, a), rated_kva, limit))
    }
}

/// Whether the voltage behind a transformer holds at the peak of every year after `t`; none at rated voltage, where it
/// is not asked.
pub fn holds_voltage(losses: &Losses, duty: &Duty, t: usize, a: &Assumptions) -> Option<bool> {
    let drop = duty.drop.as_ref()?;
    Some(Supply::of(losses, drop).carries(highest_peak(duty, t, a) / losses.rated_kva))
}

/// Whether a peak load keeps a loading limit; equality up to rounding passes.
pub fn within_limit(peak_kva: f64, rated_kva: f64, limit_pu: f64) -> bool {
    peak_kva <= limit_pu * rated_kva * (1.0 + 1e-12)
}

/// The year after `t` with the highest peak: the load grows or shrinks steadily, so it is the last or the first.
pub fn year_of_highest_peak(duty: &Duty, t: usize, a: &Assumptions) -> usize {
    if duty.load_growth_pu > 0.0 { a.years } else { t + 1 }
}

/// Highest peak of the years after `t` (kVA).
pub fn highest_peak(duty: &Duty, t: usize, a: &Assumptions) -> f64 {
    let k = year_of_highest_peak(duty, t, a);
    duty.peak_kva * growth(duty.load_growth_pu, k, a.load_growth_years)
}

/// The terminals of a place, as far as they are known: what a replacement must agree with.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Terminals {
    /// Number of phases.
    pub phases: Option<i64>,
    /// Rated high voltage.
    pub hv_kv: Option<f64>,
    /// Rated low voltage.
    pub lv_kv: Option<f64>,
    /// Clock number of the vector group.
    pub clock: Option<u8>,
    /// Rated power of the unit there.
    pub rated_kva: f64,
}

fn voltage_agrees(place: Option<f64>, offer: Option<f64>) -> bool {
    match (place, offer) {
        (Some(place), Some(offer)) => (offer - place).abs() <= 0.02 * place * (1.0 + 1e-9),
        _ => true,
    }
}

impl Terminals {
    /// Whether a candidate has the same number of phases, as far as both are known.
    pub fn phases_agree(&self, c: &Candidate) -> bool {
        self.phases.is_none() || c.phases.is_none() || self.phases == c.phases
    }

    /// Whether a candidate agrees in phases and voltages, as far as they are known.
    pub fn connects(&self, c: &Candidate) -> bool {
        self.phases_agree(c)
            && voltage_agrees(self.hv_kv, c.hv_kv)
            && voltage_agrees(self.lv_kv, c.lv_kv)
    }
}

/// Indices of the candidates that fit the terminals and lie in the window of sizes, in catalogue order.
///
/// The window is shaped by the distinct ratings of those that agree in phases and voltages (within 2 %); the
/// vector group then removes candidates inside it.
pub fn fitting(
    terminals: &Terminals,
    candidates: &[Candidate],
    sizes: Option<(usize, usize)>,
) -> Vec<usize> {
    let connecting: Vec<usize> =
        (0..candidates.len()).filter(|&i| terminals.connects(&candidates[i])).collect();
    let rating = |i: usize| candidates[i].losses.rated_kva;
    let mut ratings: Vec<f64> = connecting.iter().map(|&i| rating(i)).collect();
    ratings.sort_by(f64::total_cmp);
    ratings.dedup();
    let (from, to) = match sizes {
        Some((down, up)) if !ratings.is_empty() => {
            let width = (down + up + 1).min(ratings.len());
            let own = ratings.partition_point(|r| *r < terminals.rated_kva).min(ratings.len() - 1);
            let first = own.saturating_sub(down).min(ratings.len() - width);
            (ratings[first], ratings[first + width - 1])
        }
        _ => (f64::NEG_INFINITY, f64::INFINITY),
    };
    let clock_agrees = |c: &Candidate| match (terminals.clock, c.clock) {
        (Some(a), Some(b)) => vector_group::clocks_match(a, b),
        _ => true,
    };
    connecting
        .into_iter()
        .filter(|&i| (from..=to).contains(&rating(i)) && clock_agrees(&candidates[i]))
        .collect()
}

#[cfg(test)]
pub(crate) mod tests {
    use super::*;

    pub(crate) fn candidate(rated_kva: f64) -> Candidate {
        Candidate {
            offer: String::new(),
            losses: Losses {
                rated_kva,
                no_load_loss_w: 100.0,
                load_loss_w: 1000.0,
                auxiliary_loss_w: 0.0,
                reactance_pu: None,
            },
            price: 5000.0,
            install_cost: 0.0,
            life_years: None,
            lead_time_years: 0.0,
            phases: None,
            hv_kv: None,
            lv_kv: None,
            clock: None,
            lawful: Vec::new(),
        }
    }

    fn terminals(rated_kva: f64) -> Terminals {
        Terminals { phases: Some(3), hv_kv: Some(11.0), lv_kv: None, clock: Some(11), rated_kva }
    }

    #[test]
    fn window_slides_inwards_and_keeps_its_width() {
        let sizes = [25.0, 50.0, 100.0, 160.0, 250.0];
        let candidates: Vec<_> = sizes.iter().map(|s| candidate(*s)).collect();
        let fit = |kva| fitting(&terminals(kva), &candidates, Some((1, 1)));
        assert_eq!(fit(100.0), vec![1, 2, 3]);
        assert_eq!(fit(90.0), vec![1, 2, 3], "place is the smallest rating not below its own");
        assert_eq!(fit(10.0), vec![0, 1, 2]);
        assert_eq!(fit(900.0), vec![2, 3, 4]);
        assert_eq!(fitting(&terminals(50.0), &candidates, Some((0, 9))), vec![0, 1, 2, 3, 4]);
        assert_eq!(fitting(&terminals(50.0), &candidates, None).len(), 5);
    }

    #[test]
    fn two_percent_of_voltage_is_included() {
        let with = |hv| Candidate { hv_kv: Some(hv), ..candidate(100.0) };
        let list = [with(11.22), with(10.78), with(11.221), with(20.0)];
        assert_eq!(fitting(&terminals(100.0), &list, None), vec![0, 1]);
    }

    #[test]
    fn vector_group_thins_the_window_without_shaping_it() {
        let group = |kva, clock| Candidate { clock: Some(clock), ..candidate(kva) };
        let list = [group(50.0, 5), group(100.0, 0), group(160.0, 11)];
        assert_eq!(fitting(&terminals(100.0), &list, Some((1, 1))), vec![0, 2]);
    }
}
