//! The legal tables as typed rows, read from the data files beside this one (UTF-8 CSV, one row per rating).

use std::sync::LazyLock;

use chrono::NaiveDate;
use serde::Deserialize;

/// How far a row of a legal table can be trusted, least first.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Confidence {
    /// Written from memory: to be looked up before it is relied on.
    Memory,
    /// Read in one public copy.
    Text,
    /// Read in two public copies that agree.
    TwoSources,
}

impl Confidence {
    /// The word that the tables use.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Memory => "memory",
            Self::Text => "text",
            Self::TwoSources => "two_sources",
        }
    }
}

/// Largest losses at a rating: EU tables I.1, I.2, I.6.
#[derive(Debug, Deserialize)]
pub(super) struct LossRow {
    pub(super) table: String,
    pub(super) rated_power_kva: f64,
    pub(super) tier: u8,
    pub(super) max_load_loss_pk_w: f64,
    pub(super) max_no_load_loss_p0_w: f64,
    pub(super) confidence: Confidence,
}

/// Least Peak Efficiency Index at a rating: EU tables I.4, I.5, I.7, I.8, I.9.
#[derive(Debug, Deserialize)]
pub(super) struct IndexRow {
    pub(super) table: String,
    pub(super) rated_power_mva: f64,
    pub(super) rating_label: String,
    pub(super) tier: u8,
    pub(super) min_pei_percent: f64,
    pub(super) note: String,
    pub(super) confidence: Confidence,
}

/// Higher losses that are allowed for a combination of voltages: EU tables I.3, I.3a, I.3b.
#[derive(Debug, Deserialize)]
pub(super) struct CorrectionRow {
    pub(super) table: String,
    pub(super) insulation: String,
    pub(super) primary_um_condition: String,
    pub(super) secondary_um_condition: String,
    pub(super) dual_voltage_case: String,
    pub(super) pk_increase_percent: f64,
    pub(super) p0_increase_percent: f64,
    pub(super) confidence: Confidence,
}

/// Higher losses that are allowed with on-load tappings: EU Annex I point 1.3.
#[derive(Debug, Deserialize)]
pub(super) struct TappingRow {
    pub(super) tier: u8,
    pub(super) pk_increase_percent: f64,
    pub(super) p0_increase_percent: f64,
    pub(super) confidence: Confidence,
}

/// Least efficiency at a rating: 10 CFR 431.196.
#[derive(Debug, Deserialize)]
pub(super) struct UsRow {
    pub(super) rule: String,
    pub(super) paragraph: String,
    pub(super) equipment_class: String,
    pub(super) phase: String,
    pub(super) bil_band: String,
    pub(super) rated_power_kva: f64,
    pub(super) min_efficiency_percent: f64,
    pub(super) per_unit_load: f64,
    pub(super) manufactured_from_date: NaiveDate,
    pub(super) manufactured_before_date: Option<NaiveDate>,
    pub(super) confidence: Confidence,
}

/// A condition under which US efficiency is stated.
#[derive(Debug, Deserialize)]
pub(super) struct UsCondition {
    pub(super) equipment_class: String,
    pub(super) quantity: String,
    pub(super) value: f64,
    pub(super) confidence: Confidence,
}

/// Least efficiency at a rating: SOR/2016-311.
#[derive(Debug, Deserialize)]
pub(super) struct CanadaRow {
    pub(super) instrument: String,
    pub(super) section: String,
    pub(super) phase: String,
    pub(super) voltage_class: String,
    pub(super) bil_band: String,
    pub(super) rated_power_kva: f64,
    pub(super) min_efficiency_percent: f64,
    pub(super) load_percent_of_nominal: f64,
    pub(super) manufactured_from_date: NaiveDate,
    pub(super) confidence: Confidence,
}

/// Reads embedded tables; that no row is lost is tested.
fn read<T: for<'a> Deserialize<'a>>(texts: &[&str]) -> Vec<T> {
    let rows = |text: &&str| {
        csv::Reader::from_reader(text.as_bytes())
            .into_deserialize()
            .filter_map(Result::ok)
            .collect()
    };
    texts.iter().flat_map(|text| -> Vec<T> { rows(text) }).collect()
}

macro_rules! table {
    ($(#[$doc:meta])* $name:ident: $row:ty = $($file:literal),+) => {
        $(#[$doc])*
        pub(super) static $name: LazyLock<Vec<$row>> =
            LazyLock::new(|| read(&[$(include_str!(concat!("tables/", $file))),+]));
    };
}

table! {
    /// Tables I.1, I.2 and I.6.
    EU_LOSSES: LossRow =
        "eu_548_2014_table_I1_liquid_le3150kva.csv",
        "eu_548_2014_table_I2_dry_le3150kva.csv",
        "eu_548_2014_table_I6_pole_mounted.csv"
}
table! {
    /// Tables I.4, I.5 (medium above 3150 kVA) and I.7, I.8 (large) as of 2014.
    EU_INDEX_2014: IndexRow =
        "eu_548_2014_table_I4_I5_pei_medium_gt3150kva.csv",
        "eu_548_2014_table_I7_I8_pei_large_2014_superseded.csv"
}
table! {
    /// Tables I.7, I.8 and I.9 as of 2019.
    EU_INDEX_2019: IndexRow = "eu_548_2014_table_I7_I8_I9_pei_large_2019.csv"
}
table! {
    /// Tables I.3 (2014), I.3a and I.3b (2019).
    EU_CORRECTIONS: CorrectionRow = "eu_548_2014_table_I3_I3a_I3b_corrections.csv"
}
table! {
    /// Point 1.3.
    EU_TAPPINGS: TappingRow = "eu_548_2014_point_1_3_onload_tapping_adders.csv"
}
table! {
    /// All levels of 10 CFR 431.196.
    US: UsRow =
        "us_10cfr431_196_liquid_2016_from_memory.csv",
        "us_10cfr431_196_liquid_2029_from_memory.csv",
        "us_10cfr431_196_lv_dry_2007_2016.csv",
        "us_10cfr431_196_lv_dry_2029_from_memory.csv",
        "us_10cfr431_196_mv_dry_2016.csv"
}
table! {
    /// Load and reference temperatures of 10 CFR 431.
    US_CONDITIONS: UsCondition = "us_doe_reference_conditions.csv"
}
table! {
    /// All levels of SOR/2016-311.
    CANADA: CanadaRow = "ca_sor_2016_311_dry_type_efficiency.csv"
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Lines of the files less their headers.
    #[test]
    fn no_row_is_lost() {
        assert_eq!((EU_LOSSES.len(), EU_INDEX_2014.len(), EU_INDEX_2019.len()), (72, 88, 130));
        assert_eq!((EU_CORRECTIONS.len(), EU_TAPPINGS.len()), (18, 2));
        assert_eq!((US.len(), US_CONDITIONS.len(), CANADA.len()), (181, 9, 110));
    }
}
