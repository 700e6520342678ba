//! What is doubtful about a figure: one table of flags, each with its key and its sentence.

/// A set of flags, kept as bits.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Flags(pub u64);

macro_rules! flags {
    ($($bit:expr, $constant:ident, $key:literal, $meaning:literal;)+) => {
        impl Flags {
            $(#[doc = $meaning] pub const $constant: Self = Self(1 << $bit);)+
        }
        /// Every flag with its key (JSON, CSV) and its meaning (screens, docs).
        pub const FLAGS: &[(Flags, &str, &str)] = &[$((Flags::$constant, $key, $meaning)),+];
    };
}

flags! {
    0, LOSS_FACTOR_ESTIMATED, "loss_factor_estimated", "the loss factor is estimated from the load factor (w·LF + (1−w)·LF²)";
    1, PRICE_NOT_WEIGHTED, "price_not_weighted", "no profile: load losses are priced at the plain mean of the price series";
    2, YEAR_MADE_BLANK, "year_made_blank", "year_made is blank: no failures are counted for the unit nor for what replaces it";
    3, LOADING_CONTRADICTS, "loading_contradicts", "load or loss factor given beside the profile differs from it by more than 0.05; the profile counts";
    4, LOSSES_CONTRADICT, "losses_contradict", "total_loss_w differs from no_load_loss_w + load_loss_w by more than 1 %; the parts count";
    5, LOAD_LOSS_FROM_TOTAL, "load_loss_from_total", "the load loss is total_loss_w less the no-load loss";
    6, LOSS_BASE_DIFFERS, "loss_base_differs", "the load loss was quoted at loss_base_kva and is brought to rated_kva";
    7, OVERLOADED, "overloaded", "the peak load of year 1 is above the rating";
    8, VOLTAGE_BLANK, "voltage_blank", "a voltage is blank: offers of every voltage count as fitting";
    9, PHASES_BLANK, "phases_blank", "phases is blank: one- and three-phase offers count as fitting";
    10, VECTOR_GROUP_UNREAD, "vector_group_unread", "the vector group has no clock number that could be read; it is passed over";
    11, CARBON_SERIES, "carbon_series", "both the basis and the price series give CO2 per kWh; the series counts";
    12, LOSS_ESTIMATED, "loss_estimated", "a loss is estimated from the fleet's known units";
    13, SPLIT_UNKNOWN, "split_unknown", "the load loss is brought to another temperature and its split into I²R and stray is not known: stray_share_pu of the basis is used; ask the maker for the loss at the reference temperature";
    14, NO_REFERENCE_TEMP, "no_reference_temp", "no reference temperature of the bid or of the lot: the load loss is compared as quoted; ask for it and import the bid (or the lot) with reference_temp_c";
    15, LIMIT_UNKNOWN, "limit_unknown", "a value that the lot limits is blank in the bid; it passes: ask the bidder and import the bid again";
    16, LAW_RELAXED, "law_relaxed", "no offer meets the law in a year in which the unit may fail; a forced purchase passes it over";
    17, VERIFY_LAW, "verify_law", "the legal table is marked as remembered: verify it in the official text";
    18, FACTOR_SCALE, "factor_scale", "no-load and load loss are capitalised at under 1 % of the price of every bid: check that the factors are per kW, not per W";
    19, NO_LIFE, "no_life", "no life for this offer";
    20, DROP_AT_RMS, "drop_at_rms", "voltage drop at the RMS load: no profile to integrate over";
    21, RESPONSIBILITY_DEFAULT, "responsibility_default", "demand charge at full own peak: no responsibility_pu and no system load are known";
    22, LOSSES_SWAPPED, "losses_swapped", "the load loss is below the no-load loss: were they exchanged?";
    23, LAW_NOT_CHECKED, "law_not_checked", "the law that is named could not be held against an offer or bid; it passes";
    24, QUANTITY_SHORT, "quantity_short", "the bid offers fewer units than the lot asks for";
    25, OFFER_OVERLOADED, "offer_overloaded", "the best offer is smaller than the peak load of a year of its service; a loading_limit_pu of 1 rules that out";
    26, IMPEDANCE_UNKNOWN, "impedance_unknown", "impedance_pct is blank or contradicts the load loss: its voltage drop is that of the resistance alone";
    27, OFFER_IMPEDANCE_UNKNOWN, "offer_impedance_unknown", "impedance_pct of an offer is blank or contradicts its load loss: its voltage drop is that of the resistance alone";
    28, CAPACITY_SCALE, "capacity_scale", "the capacity charge of a kW and year is above what a kW of loss costs in energy all year: is it an investment, paid once? Give what it costs per year";
    29, DEMAND_UNUSED, "demand_unused", "factor_method levelized does not use demand_charge_per_kw_year: what capacity costs per kW and year is investment_per_kw_year there";
    30, INVESTMENT_UNUSED, "investment_unused", "factor_method present-value does not use investment_per_kw_year: what capacity costs per kW and year is demand_charge_per_kw_year there";
    31, LOSS_VALUE_SCALE, "loss_value_scale", "the capitalised losses of the best offer are under 1 % or over 50 times its price: is the energy price per kWh, are losses in W and prices per unit?";
    32, NO_LOAD_LOSS_FROM_TOTAL, "no_load_loss_from_total", "the no-load loss is total_loss_w less the load loss";
    33, ADDERS_LOWER_PRICE, "adders_lower_price", "the adders take off more than half of the price: a rebate, or a slip?";
    34, LOSS_BASE_FAR, "loss_base_far", "loss_base_kva is below a quarter or above four times rated_kva, which no cooling stages are: a slip?";
    35, NAMEPLATE_ODD, "nameplate_odd", "the nameplate is outside what is usual or possible; ironhum check says what";
    36, FROM_TEST, "from_test", "a blank of the nameplate is filled from the unit's test report";
    37, LOSS_SCALE, "loss_scale", "a loss is below 0.02 W (no-load) or 0.2 W (load) per kVA of the rating: were kW written in a column of W? (common practice, no source)";
    38, TEST_TEMP_BLANK, "test_temp_blank", "test_temp_c is blank, so the load loss counts as one at the lot's reference temperature, but the bid was quoted at another: where the report gives it at the bid's temperature, import that as test_temp_c";
    39, MEASURED_BEYOND, "measured_beyond", "more units are measured than the lot has: is a serial number written in two ways, or does a unit belong to another lot?";
    40, RATE_SCALE, "rate_scale", "by the rate stored with the tender the price is ten times, or a tenth, of what the other bids ask on the median: is the rate that of one unit of the bid's currency in the tender's? (common practice, no source)";
}

impl Flags {
    /// No flag.
    pub const NONE: Self = Self(0);

    /// Both sets together.
    #[must_use]
    pub const fn with(self, other: Self) -> Self {
        Self(self.0 | other.0)
    }

    /// The set with `flag` where `condition` holds.
    #[must_use]
    pub const fn with_if(self, condition: bool, flag: Self) -> Self {
        if condition { self.with(flag) } else { self }
    }

    /// Whether all of `other` are in.
    pub const fn has(self, other: Self) -> bool {
        self.0 & other.0 == other.0
    }

    /// The keys of the flags that are up.
    pub fn keys(self) -> Vec<&'static str> {
        FLAGS.iter().filter(|(flag, ..)| self.has(*flag)).map(|(_, key, _)| *key).collect()
    }

    /// The sentences of the flags that are up.
    pub fn meanings(self) -> Vec<&'static str> {
        FLAGS.iter().filter(|(flag, ..)| self.has(*flag)).map(|(.., meaning)| *meaning).collect()
    }
}
