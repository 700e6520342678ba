//! Legal minimum efficiency: what a law asks of a transformer bought on a date, and whether it is met.
//!
//! The tables are data files in `law/tables`, each row with its date and how far it can be trusted. A verdict names
//! the table, the limit, the value held against it, and carries `verify` wherever a remembered row or formula was
//! used. A screening aid: the official text, local law and licensed practice decide. Legal maxima get no tolerance.

mod canada;
mod european;
mod levels;
mod lookup;
mod tables;
mod united_states;

use chrono::NaiveDate;

use crate::engine::Refusal;
use crate::engine::columns::{
    Insulation, Mounting, Offer, TapChanger, Unit, WindingMetal, choice, nearest,
};
use crate::engine::transformer::losses::Losses;
use crate::engine::transformer::temperature::{load_loss_at, vanishing_temp_c};
use crate::engine::working::{Formula, Recorder as _, Step, Working};

pub use tables::Confidence;

choice! {
    /// A transformer with windings for two voltages.
    DualVoltage {
        /// One winding for two voltages, less power (0.85 of rated at most) at the lower one.
        ReducedPower = "reduced-power",
        /// One winding for two voltages, full power at both.
        OneWinding = "one-winding",
        /// Both windings for two voltages, full power in every combination.
        BothWindings = "both-windings",
    }
}

/// What a law is asked about. Blank facts are none; what they leave open the verdict says.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Subject {
    /// Rated power.
    pub rated_kva: f64,
    /// Number of phases.
    pub phases: Option<i64>,
    /// Rated frequency.
    pub frequency_hz: Option<f64>,
    /// Rated voltage of the high-voltage winding.
    pub hv_kv: Option<f64>,
    /// Rated voltage of the low-voltage winding.
    pub lv_kv: Option<f64>,
    /// Highest voltage for equipment of the high-voltage winding.
    pub hv_um_kv: Option<f64>,
    /// Basic impulse level of the high-voltage winding (US and Canadian dry-type bands).
    pub bil_kv: Option<f64>,
    /// What insulates the windings.
    pub insulation: Option<Insulation>,
    /// How it stands.
    pub mounting: Option<Mounting>,
    /// How taps are changed.
    pub tap_changer: Option<TapChanger>,
    /// Windings for two voltages.
    pub dual_voltage: Option<DualVoltage>,
    /// Whether it replaces one of the same kind (EU, pole-mounted).
    pub replaces_like: bool,
    /// Winding metal.
    pub winding_metal: Option<WindingMetal>,
    /// No-load loss, P0.
    pub no_load_loss_w: f64,
    /// Load loss at rated load and reference temperature, Pk.
    pub load_loss_w: f64,
    /// Reference temperature of the load loss (°C).
    pub reference_temp_c: Option<f64>,
    /// Stray part of the load loss where it must be brought to another temperature.
    pub stray_share_pu: f64,
    /// Cooling power at no load, Pc0 (EU index); zero for ONAN and ONAN/ONAF.
    pub no_load_cooling_w: Option<f64>,
    /// Further cooling power at the load of the index, Pck (EU index from 2019).
    pub load_cooling_w: Option<f64>,
}

impl Subject {
    /// A subject of which only rating and losses are known.
    pub const fn new(rated_kva: f64, no_load_loss_w: f64, load_loss_w: f64) -> Self {
        Self {
            rated_kva,
            phases: None,
            frequency_hz: None,
            hv_kv: None,
            lv_kv: None,
            hv_um_kv: None,
            bil_kv: None,
            insulation: None,
            mounting: None,
            tap_changer: None,
            dual_voltage: None,
            replaces_like: false,
            winding_metal: None,
            no_load_loss_w,
            load_loss_w,
            reference_temp_c: None,
            stray_share_pu: 0.0,
            no_load_cooling_w: None,
            load_cooling_w: None,
        }
    }

    /// A unit that stands, with its losses at its rating.
    pub fn of_unit(unit: &Unit, losses: &Losses, stray_share_pu: f64) -> Self {
        Self {
            phases: unit.phases,
            frequency_hz: unit.frequency_hz,
            hv_kv: unit.hv_kv,
            lv_kv: unit.lv_kv,
            hv_um_kv: unit.hv_um_kv,
            insulation: unit.insulation,
            mounting: unit.mounting,
            tap_changer: unit.tap_changer,
            winding_metal: unit.winding_metal,
            reference_temp_c: unit.reference_temp_c,
            stray_share_pu,
            ..Self::new(losses.rated_kva, losses.no_load_loss_w, losses.load_loss_w)
        }
    }

    /// An offer, with its losses at its rating.
    pub fn of_offer(offer: &Offer, losses: &Losses, stray_share_pu: f64) -> Self {
        Self {
            phases: offer.phases,
            hv_kv: offer.hv_kv,
            lv_kv: offer.lv_kv,
            insulation: offer.insulation,
            winding_metal: offer.winding_metal,
            reference_temp_c: offer.reference_temp_c,
            stray_share_pu,
            ..Self::new(losses.rated_kva, losses.no_load_loss_w, losses.load_loss_w)
        }
    }

    /// The load loss at the temperature that a law asks for; says in `notes` what it did.
    fn load_loss_at_c(&self, w: &mut Working, notes: &mut Vec<String>, to_c: f64) -> f64 {
        let Some(from) = self.reference_temp_c else {
            notes.push(format!(
                "reference_temp_c is blank: the load loss is taken as if quoted at {to_c} °C"
            ));
            return self.load_loss_w;
        };
        if from == to_c {
            return self.load_loss_w;
        }
        let t0 = vanishing_temp_c(self.winding_metal.unwrap_or(WindingMetal::Copper));
        let stray = self.stray_share_pu * self.load_loss_w;
        let metal =
            self.winding_metal.map_or("copper (winding_metal is blank)", WindingMetal::word);
        notes.push(format!(
            "the load loss is brought from {from} °C to {to_c} °C with a stray share of {} and windings of {metal}",
            self.stray_share_pu
        ));
        load_loss_at(w, self.load_loss_w - stray, stray, t0, from, to_c)
    }
}

/// On which side of a limit a value may lie; equality passes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Bound {
    /// At most.
    Max,
    /// At least.
    Min,
}

/// One limit of a law and the value held against it.
#[derive(Clone, Debug, PartialEq)]
pub struct Limit {
    /// What is limited, with its unit: `no_load_loss_w`, `load_loss_w`, `efficiency_pct`,
    /// `peak_efficiency_index_pct`.
    pub quantity: &'static str,
    /// The side.
    pub bound: Bound,
    /// The limit.
    pub limit: f64,
    /// The value of the subject under the law's conditions.
    pub value: f64,
    /// Law, table and tier.
    pub source: String,
    /// How far the rows and formulas behind it can be trusted.
    pub confidence: Confidence,
}

impl Limit {
    /// Whether the value keeps the limit. No tolerance: 1e-12 is for the rounding of a corrected limit, so that a
    /// value written as the limit itself passes.
    pub fn meets(&self) -> bool {
        let rounding = 1e-12 * self.limit;
        match self.bound {
            Bound::Max => self.value <= self.limit + rounding,
            Bound::Min => self.value >= self.limit - rounding,
        }
    }
}

/// What a law says of a subject.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Key of the law.
    pub law: &'static str,
    /// Whether it is met: true where the law sets no limit; none where it cannot be told.
    pub meets: Option<bool>,
    /// Why there is no limit, or why it cannot be told; "" where limits were compared.
    pub why: String,
    /// The limits that were compared.
    pub limits: Vec<Limit>,
    /// What was assumed on the way.
    pub notes: Vec<String>,
    /// How far the law as stated here can be trusted.
    pub confidence: Confidence,
    /// Whether a remembered row or formula was used: look it up in the official text.
    pub verify: bool,
    /// The steps.
    pub working: Vec<Step>,
}

/// What the rules of one law find.
enum Finding {
    /// Limits to hold.
    Limits(Vec<Limit>),
    /// The law sets none, as known with this confidence.
    Free(String, Confidence),
    /// It cannot be told, as known with this confidence.
    Open(String, Confidence),
}

/// A law of the book.
#[derive(Clone, Copy, Debug)]
pub struct Law {
    /// Its key, the word for `law` in basis and lot.
    pub key: &'static str,
    /// Its name.
    pub name: &'static str,
    find: fn(&mut Working, &mut Vec<String>, &Subject, NaiveDate) -> Finding,
}

const LAWS: &[Law] = &[
    Law {
        key: "eu-548-2014",
        name: "Regulation (EU) 548/2014 as amended by (EU) 2019/1783",
        find: european::find,
    },
    Law {
        key: "us-10cfr431",
        name: "10 CFR 431.196 (US energy conservation standards, distribution transformers)",
        find: united_states::find,
    },
    Law {
        key: "ca-sor-2016-311",
        name: "SOR/2016-311 Division 11 (Canada, dry-type transformers)",
        find: canada::find,
    },
];

/// The laws that are known.
pub const fn known() -> &'static [Law] {
    LAWS
}

/// The law of a key.
///
/// # Errors
/// A key that is not known; the message names those that are.
pub fn named(key: &str) -> Result<&'static Law, Refusal> {
    LAWS.iter().find(|law| law.key == key).ok_or_else(|| {
        let keys: Vec<&str> = LAWS.iter().map(|law| law.key).collect();
        let near = nearest(key, keys.iter().copied())
            .map_or(String::new(), |near| format!(" (nearest: {near})"));
        Refusal::new("law", key, format!("is not known{near}; known are {}", keys.join(", ")))
    })
}

/// The date whose law counts for a purchase at the start of a year.
pub fn at_start_of(year: i64) -> Option<NaiveDate> {
    NaiveDate::from_ymd_opt(i32::try_from(year).ok()?, 1, 1)
}

/// Holds a subject against the law in force on a date.
///
/// # Errors
/// A key that is not known.
pub fn check(key: &str, subject: &Subject, date: NaiveDate) -> Result<Verdict, Refusal> {
    let mut working = Working::default();
    let verdict = judge(&mut working, key, subject, date)?;
    Ok(Verdict { working: working.into_steps(), ..verdict })
}

const LIMIT: Formula = Formula {
    name: "legal limit",
    symbol: "limit",
    formula: "as the table gives it, with its corrections",
    unit: "",
    source: "the law and table that are named",
};
const HELD: Formula = Formula {
    name: "value held against the legal limit",
    symbol: "value",
    formula: "under the conditions of the law",
    ..LIMIT
};

/// The verdict, its steps stated to `w`.
pub(crate) fn judge(
    w: &mut Working,
    key: &str,
    subject: &Subject,
    date: NaiveDate,
) -> Result<Verdict, Refusal> {
    let law = named(key)?;
    let mut notes = Vec::new();
    let finding = (law.find)(w, &mut notes, subject, date);
    let (meets, why, limits, confidence) = match finding {
        Finding::Free(why, confidence) => (Some(true), why, Vec::new(), confidence),
        Finding::Open(why, confidence) => (None, why, Vec::new(), confidence),
        Finding::Limits(limits) => {
            for limit in &limits {
                for (formula, value) in [(&LIMIT, limit.limit), (&HELD, limit.value)] {
                    w.step(formula, &[], value);
                    w.about(&|| limit.quantity.to_owned());
                }
            }
            let least = limits.iter().map(|l| l.confidence).min().unwrap_or(Confidence::Memory);
            (Some(limits.iter().all(Limit::meets)), String::new(), limits, least)
        }
    };
    Ok(Verdict {
        law: law.key,
        meets,
        why,
        limits,
        notes,
        confidence,
        verify: confidence == Confidence::Memory,
        working: Vec::new(),
    })
}

#[cfg(test)]
mod tests;
