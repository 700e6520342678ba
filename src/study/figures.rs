//! The figures of the results: one table of what each JSON key is called, how it is rounded and what it means.
//! Text tables, screens, help and docs read it; the unit is the suffix of the key.

/// How a figure is written for people.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Figure {
    /// Key in JSON and CSV.
    pub key: &'static str,
    /// Short heading.
    pub heading: &'static str,
    /// Unit under the heading ("" = none, "money" = the currency).
    pub unit: &'static str,
    /// Decimal places for people.
    pub places: usize,
    /// What it means.
    pub meaning: &'static str,
}

macro_rules! figures {
    ($($key:literal $heading:literal $unit:literal $places:literal $meaning:literal;)+) => {
        /// Every figure of every result.
        pub const FIGURES: &[Figure] = &[
            $(Figure { key: $key, heading: $heading, unit: $unit, places: $places, meaning: $meaning }),+
        ];
    };
}

figures! {
    "rank" "#" "" 0 "place in the ranking";
    "unit" "unit" "" 0 "identifier of the unit";
    "site" "site" "" 0 "where it stands";
    "rated_kva" "rating" "kVA" 1 "rated power";
    "year_made" "made" "" 0 "year of manufacture";
    "peak_pu" "peak" "pu" 2 "peak load of year 1 over the rating";
    "keep_pv" "keep" "money" 0 "present value of keeping the unit to the end of the horizon, failures included";
    "now_offer" "best now" "" 0 "best offer if bought now";
    "now_pv" "now" "money" 0 "present value of replacing now";
    "best_offer" "offer" "" 0 "offer of the best choice; blank where never replacing is best";
    "best_year_offset" "delay" "years" 0 "years of delay of the best choice";
    "best_year" "year" "" 0 "calendar year of the best choice";
    "best_pv" "best" "money" 0 "least present value";
    "saving_pv" "saving" "money" 0 "keep less best: what the best choice saves in present value";
    "waiting_pv" "waiting" "money" 0 "what a year's delay costs at least, where now is best";
    "payback_years" "payback" "years" 1 "price, installation, removal less scrap over the first year's saving";
    "capital" "capital" "money" 0 "price and installation of the best choice at today's price";
    "energy_saved_kwh" "energy saved" "kWh" 0 "in the first year of service of the best choice";
    "co2_saved_kg" "CO2 saved" "kg" 0 "in the first year of service of the best choice";
    "now_irr_pct" "rate of return, now" "%" 2 "rate of return of buying the best offer now";
    "discounted_payback_years" "discounted payback" "years" 1 "years until the discounted savings of the best choice make up its capital";
    "co2_avoided_t" "CO2 avoided" "t" 1 "by the best choice over the horizon";
    "cost_per_t_co2" "cost of that CO2" "money/t" 2 "what the best choice costs for each tonne that it avoids; negative where it saves";
    "keep_euac" "equal yearly: keep" "money" 0 "equal yearly cost of keeping over the horizon";
    "best_euac" "equal yearly: best" "money" 0 "equal yearly cost of the best choice over the horizon";
    "flags" "flags" "" 0 "what is doubtful";
    "rank_low" "if low" "" 0 "place if the estimated losses of the unit were at the lower ends of their 95 % intervals";
    "rank_high" "if high" "" 0 "place if the estimated losses of the unit were at the upper ends of their 95 % intervals";
    "estimate_w" "estimate" "W" 0 "loss estimated from the fleet's known units, a geometric mean";
    "low_w" "low" "W" 0 "lower end of the 95 % prediction interval";
    "high_w" "high" "W" 0 "upper end of the 95 % prediction interval";
    "known_units" "from units" "" 0 "units of known loss that the estimate rests on";
    "units_set_aside" "set aside" "" 0 "units whose known loss lies so far off that it counts as misread";
    "terms" "by" "" 0 "what the estimate goes with";
    "no_load_energy_kwh" "iron" "kWh" 0 "energy of the no-load loss in the year";
    "load_energy_kwh" "copper" "kWh" 0 "energy of the load loss in the year";
    "auxiliary_energy_kwh" "aux" "kWh" 0 "energy of fans and pumps in the year";
    "no_load_cost" "iron" "money" 0 "cost of the no-load loss";
    "load_cost" "copper" "money" 0 "cost of the load loss";
    "auxiliary_cost" "aux" "money" 0 "cost of the auxiliary loss";
    "loss_cost" "loss cost" "money" 0 "cost of all losses in the year";
    "load_factor_pu" "LF" "pu" 3 "mean load over peak load";
    "loss_factor_pu" "LsF" "pu" 3 "mean squared load over squared peak";
    "efficiency_pct" "efficiency" "%" 2 "energy delivered over energy taken in, over the year";
    "why" "why" "" 0 "why it is left out";
    "lot" "lot" "" 0 "lot of the tender";
    "bid" "bid" "" 0 "identifier of the bid";
    "bidder" "bidder" "" 0 "who bids";
    "price" "price" "money" 0 "price of one unit";
    "added_cost" "adders" "money" 0 "freight, installation and other adders";
    "owning_cost" "owning cost" "money" 0 "price, adders and what the losses are worth";
    "owning_cost_at_tolerance" "at tolerance" "money" 0 "owning cost at the worst losses that the tolerance allows";
    "lot_cost" "whole lot" "money" 0 "owning cost times the quantity";
    "near_tie" "near tie" "" 0 "within the near-tie band of the least owning cost";
    "law" "law" "" 0 "whether the law named by the lot is met";
    "excluded" "misses" "" 0 "what the bid misses; excluded bids are not ranked";
    "serial" "serial" "" 0 "serial number of the delivered unit";
    "no_load_excess_w" "iron excess" "W" 0 "measured above guaranteed no-load loss";
    "load_excess_w" "copper excess" "W" 0 "measured above guaranteed load loss";
    "auxiliary_excess_w" "aux excess" "W" 0 "measured above guaranteed auxiliary loss";
    "penalty" "penalty" "money" 0 "what the excess losses are worth";
    "beyond_tolerance" "beyond" "" 0 "beyond the tolerance of the lot";
    "probability_pu" "cheapest" "pu" 3 "part of the draws in which the bid is the cheapest to own";
    "mean_regret" "mean regret" "money" 0 "mean of what the bid costs above the cheapest of each draw";
    "owning_cost_p5" "P5" "money" 0 "owning cost that 5 % of the draws stay below";
    "owning_cost_p50" "P50" "money" 0 "median owning cost";
    "owning_cost_p95" "P95" "money" 0 "owning cost that 95 % of the draws stay below";
    "factor_a_per_kw" "A" "money/kW" 2 "value of a kW of no-load loss, once";
    "factor_b_per_kw" "B" "money/kW" 2 "value of a kW of load loss at rated load, once";
    "factor_aux_per_kw" "A aux" "money/kW" 2 "value of a kW of auxiliary loss, once";
}

/// The figure of a key.
pub fn figure(key: &str) -> Option<&'static Figure> {
    FIGURES.iter().find(|figure| figure.key == key)
}

/// A number for people: rounded, thousands apart by a space, a true minus.
pub fn group(value: f64, places: usize) -> String {
    let text = format!("{:.places$}", value.abs());
    let (whole, fraction) = text.split_once('.').unwrap_or((&text, ""));
    let mut out = String::new();
    if value < 0.0 && text.bytes().any(|b| b.is_ascii_digit() && b != b'0') {
        out.push('−');
    }
    for (i, digit) in whole.chars().enumerate() {
        if i > 0 && (whole.len() - i).is_multiple_of(3) {
            out.push(' ');
        }
        out.push(digit);
    }
    if !fraction.is_empty() {
        out.push('.');
        out.push_str(fraction);
    }
    out
}

/// A number for people with as many places as it needs, three at most.
pub fn short(value: f64) -> String {
    let text = group(value, 3);
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

/// What is enough: the number rounded up to a number of decimal places, but not for the noise of the last digits.
pub fn enough(value: f64, places: usize) -> String {
    let scale = 10_f64.powi(i32::try_from(places).unwrap_or(0));
    let (scaled, nearest) = (value * scale, (value * scale).round());
    let noise = (scaled - nearest).abs() <= 1e-9 * scaled.abs();
    group(if noise { nearest } else { scaled.ceil() } / scale, places)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn enough_is_never_too_little() {
        assert_eq!(enough(939.0612, 2), "939.07");
        assert_eq!(enough(2.21, 1), "2.3");
        assert_eq!(enough(2.3, 1), "2.3");
        assert_eq!(enough(0.1 + 0.2, 1), "0.3");
        assert_eq!(enough(1234.0, 0), "1 234");
        assert_eq!(enough(0.0, 1), "0.0");
    }

    #[test]
    fn numbers_for_people() {
        assert_eq!(group(1_234_567.891, 1), "1 234 567.9");
        assert_eq!(group(-999.5, 0), "−1 000");
        assert_eq!(group(-0.4, 0), "0");
        assert_eq!(group(0.0, 2), "0.00");
        assert_eq!([short(25_000.0), short(0.4), short(1.23456)], ["25 000", "0.4", "1.235"]);
    }

    #[test]
    fn keys_are_once() {
        let mut keys: Vec<_> = FIGURES.iter().map(|f| f.key).collect();
        keys.sort_unstable();
        keys.dedup();
        assert_eq!(keys.len(), FIGURES.len());
    }
}
