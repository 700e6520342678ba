-- The book, version 1: a fleet, what can be bought, the assumptions, the tenders, and who changed what.
--
-- Names of columns are those of the files (money in whole thousandths: <name>_milli); ranges are the physical
-- ranges of the column facts, and a test holds both to the program's table. What ranking reads of a unit
-- stands first in its row, remarks last: SQLite reads a row only as far as it is asked to. Choices of more than
-- two words are chains of OR: for a longer IN list SQLite builds a table anew for every row it checks.

PRAGMA application_id = 0x49724875; -- "IrHu"

-- A year of equal steps: little-endian doubles, one after the other.
CREATE TABLE profiles (
    id INTEGER PRIMARY KEY,
    profile TEXT NOT NULL CHECK (length(profile) > 0),
    step_minutes INTEGER NOT NULL CHECK (step_minutes BETWEEN 1 AND 1440),
    steps INTEGER NOT NULL CHECK (steps > 0),
    first_timestamp TEXT,
    load BLOB NOT NULL CHECK (length(load) = 8 * steps),
    UNIQUE (profile)
) STRICT;

CREATE TABLE price_series (
    id INTEGER PRIMARY KEY,
    name TEXT NOT NULL CHECK (length(name) > 0),
    step_minutes INTEGER NOT NULL CHECK (step_minutes BETWEEN 1 AND 1440),
    steps INTEGER NOT NULL CHECK (steps > 0),
    first_timestamp TEXT,
    price_per_kwh BLOB NOT NULL CHECK (length(price_per_kwh) = 8 * steps),
    co2_kg_per_kwh BLOB CHECK (length(co2_kg_per_kwh) = 8 * steps),
    system_load BLOB CHECK (length(system_load) = 8 * steps),
    UNIQUE (name)
) STRICT;

CREATE TABLE units (
    id INTEGER PRIMARY KEY,
    unit TEXT NOT NULL CHECK (length(unit) > 0),
    rated_kva REAL NOT NULL CHECK (rated_kva BETWEEN 0.1 AND 2000000.0),
    no_load_loss_w REAL CHECK (no_load_loss_w = 0.0 OR no_load_loss_w BETWEEN 1e-12 AND 100000000.0),
    load_loss_w REAL CHECK (load_loss_w = 0.0 OR load_loss_w BETWEEN 1e-12 AND 100000000.0),
    peak_kva REAL CHECK (peak_kva = 0.0 OR peak_kva BETWEEN 1e-12 AND 10000000.0),
    profile TEXT CHECK (length(profile) > 0) REFERENCES profiles (profile),
    load_growth_pct REAL CHECK (load_growth_pct > -100.0 AND load_growth_pct <= 100.0 AND (load_growth_pct = 0.0 OR abs(load_growth_pct) >= 1e-12)),
    phases INTEGER CHECK (phases IN (1, 3)),
    hv_kv REAL CHECK (hv_kv BETWEEN 0.001 AND 1200.0),
    lv_kv REAL CHECK (lv_kv BETWEEN 0.001 AND 1200.0),
    year_made INTEGER CHECK (year_made BETWEEN 1880 AND 2100),
    loss_base_kva REAL CHECK (loss_base_kva BETWEEN 0.1 AND 2000000.0),
    total_loss_w REAL CHECK (total_loss_w = 0.0 OR total_loss_w BETWEEN 1e-12 AND 100000000.0),
    auxiliary_loss_w REAL CHECK (auxiliary_loss_w = 0.0 OR auxiliary_loss_w BETWEEN 1e-12 AND 100000000.0),
    auxiliary_hours REAL CHECK (auxiliary_hours = 0.0 OR auxiliary_hours BETWEEN 1e-12 AND 8784.0),
    load_factor_pu REAL CHECK (load_factor_pu = 0.0 OR load_factor_pu BETWEEN 1e-12 AND 1.0),
    loss_factor_pu REAL CHECK (loss_factor_pu = 0.0 OR loss_factor_pu BETWEEN 1e-12 AND 1.0),
    power_factor REAL CHECK (power_factor BETWEEN 0.01 AND 1.0),
    responsibility_pu REAL CHECK (responsibility_pu = 0.0 OR responsibility_pu BETWEEN 1e-12 AND 1.0),
    energised_hours REAL CHECK (energised_hours = 0.0 OR energised_hours BETWEEN 1e-12 AND 8784.0),
    in_service TEXT CHECK (in_service IN ('yes', 'no')),
    winding_metal TEXT CHECK (winding_metal = 'copper' OR winding_metal = 'aluminium' OR winding_metal = 'mixed'),
    vector_group TEXT,
    impedance_pct REAL CHECK (impedance_pct BETWEEN 0.01 AND 60.0),
    failure_cost_milli INTEGER CHECK (failure_cost_milli BETWEEN 0 AND 1000000000000000),
    removal_cost_milli INTEGER CHECK (removal_cost_milli BETWEEN 0 AND 1000000000000000),
    scrap_value_milli INTEGER CHECK (scrap_value_milli BETWEEN 0 AND 1000000000000000),
    customers INTEGER CHECK (customers BETWEEN 0 AND 100000000),
    replace_by_year INTEGER CHECK (replace_by_year BETWEEN 1950 AND 2200),
    reference_temp_c REAL CHECK (reference_temp_c = 0.0 OR reference_temp_c BETWEEN 1e-12 AND 250.0),
    insulation TEXT CHECK (insulation IN ('liquid', 'dry')),
    site TEXT,
    feeder TEXT,
    hv_um_kv REAL CHECK (hv_um_kv BETWEEN 0.001 AND 1200.0),
    frequency_hz REAL CHECK (frequency_hz BETWEEN 10.0 AND 400.0),
    cooling TEXT,
    mounting TEXT CHECK (mounting = 'pole' OR mounting = 'pad' OR mounting = 'indoor' OR mounting = 'substation'),
    tap_changer TEXT CHECK (tap_changer = 'none' OR tap_changer = 'off-load' OR tap_changer = 'on-load'),
    no_load_current_pct REAL CHECK (no_load_current_pct = 0.0 OR no_load_current_pct BETWEEN 1e-12 AND 100.0),
    condition_pct REAL CHECK (condition_pct = 0.0 OR condition_pct BETWEEN 1e-12 AND 100.0),
    pcb_ppm REAL CHECK (pcb_ppm = 0.0 OR pcb_ppm BETWEEN 1e-12 AND 1000000.0),
    note TEXT,
    UNIQUE (unit)
) STRICT;

CREATE TABLE test_reports (
    id INTEGER PRIMARY KEY,
    unit TEXT NOT NULL CHECK (length(unit) > 0) REFERENCES units (unit),
    open_circuit_voltage_v REAL CHECK (open_circuit_voltage_v BETWEEN 1e-6 AND 1200000.0),
    open_circuit_current_a REAL CHECK (open_circuit_current_a BETWEEN 1e-6 AND 1000000.0),
    open_circuit_power_w REAL CHECK (open_circuit_power_w BETWEEN 1e-6 AND 100000000.0),
    short_circuit_voltage_v REAL CHECK (short_circuit_voltage_v BETWEEN 1e-6 AND 1200000.0),
    short_circuit_current_a REAL CHECK (short_circuit_current_a BETWEEN 1e-6 AND 1000000.0),
    short_circuit_power_w REAL CHECK (short_circuit_power_w BETWEEN 1e-6 AND 100000000.0),
    hv_resistance_ohm REAL CHECK (hv_resistance_ohm BETWEEN 1e-9 AND 1000000.0),
    lv_resistance_ohm REAL CHECK (lv_resistance_ohm BETWEEN 1e-9 AND 1000000.0),
    resistance_temp_c REAL CHECK (resistance_temp_c BETWEEN -50.0 AND 250.0 AND (resistance_temp_c = 0.0 OR abs(resistance_temp_c) >= 1e-12)),
    test_temp_c REAL CHECK (test_temp_c BETWEEN -50.0 AND 250.0 AND (test_temp_c = 0.0 OR abs(test_temp_c) >= 1e-12)),
    open_circuit_side TEXT CHECK (open_circuit_side IN ('hv', 'lv')),
    short_circuit_side TEXT CHECK (short_circuit_side IN ('hv', 'lv')),
    tested_on TEXT CHECK (tested_on GLOB '[0-9][0-9][0-9][0-9]-[0-9][0-9]-[0-9][0-9]'),
    UNIQUE (unit)
) STRICT;

CREATE TABLE offers (
    id INTEGER PRIMARY KEY,
    offer TEXT NOT NULL CHECK (length(offer) > 0),
    maker TEXT,
    rated_kva REAL NOT NULL CHECK (rated_kva BETWEEN 0.1 AND 2000000.0),
    loss_base_kva REAL CHECK (loss_base_kva BETWEEN 0.1 AND 2000000.0),
    phases INTEGER CHECK (phases IN (1, 3)),
    hv_kv REAL CHECK (hv_kv BETWEEN 0.001 AND 1200.0),
    lv_kv REAL CHECK (lv_kv BETWEEN 0.001 AND 1200.0),
    vector_group TEXT,
    cooling TEXT,
    insulation TEXT CHECK (insulation IN ('liquid', 'dry')),
    winding_metal TEXT CHECK (winding_metal = 'copper' OR winding_metal = 'aluminium' OR winding_metal = 'mixed'),
    impedance_pct REAL CHECK (impedance_pct BETWEEN 0.01 AND 60.0),
    no_load_loss_w REAL NOT NULL CHECK (no_load_loss_w = 0.0 OR no_load_loss_w BETWEEN 1e-12 AND 100000000.0),
    load_loss_w REAL NOT NULL CHECK (load_loss_w = 0.0 OR load_loss_w BETWEEN 1e-12 AND 100000000.0),
    reference_temp_c REAL CHECK (reference_temp_c = 0.0 OR reference_temp_c BETWEEN 1e-12 AND 250.0),
    auxiliary_loss_w REAL CHECK (auxiliary_loss_w = 0.0 OR auxiliary_loss_w BETWEEN 1e-12 AND 100000000.0),
    price_milli INTEGER NOT NULL CHECK (price_milli BETWEEN 0 AND 1000000000000000),
    install_cost_milli INTEGER CHECK (install_cost_milli BETWEEN 0 AND 1000000000000000),
    life_years REAL CHECK (life_years BETWEEN 0.1 AND 200.0),
    lead_time_years REAL CHECK (lead_time_years = 0.0 OR lead_time_years BETWEEN 1e-12 AND 100.0),
    UNIQUE (offer)
) STRICT;

CREATE TABLE bases (
    id INTEGER PRIMARY KEY,
    name TEXT NOT NULL CHECK (length(name) > 0),
    currency TEXT NOT NULL CHECK (length(currency) > 0),
    first_year INTEGER NOT NULL CHECK (first_year BETWEEN 1950 AND 2200),
    horizon_years INTEGER NOT NULL CHECK (horizon_years BETWEEN 1 AND 200),
    discount_rate_pct REAL NOT NULL CHECK (discount_rate_pct BETWEEN -50.0 AND 1000.0 AND (discount_rate_pct = 0.0 OR abs(discount_rate_pct) >= 1e-12)),
    cash_flow TEXT CHECK (cash_flow IN ('year-end', 'mid-year')),
    energy_price_per_kwh REAL CHECK (energy_price_per_kwh = 0.0 OR energy_price_per_kwh BETWEEN 1e-12 AND 1000000.0),
    price_series TEXT CHECK (length(price_series) > 0) REFERENCES price_series (name),
    energy_escalation_pct REAL CHECK (energy_escalation_pct > -100.0 AND energy_escalation_pct <= 100.0 AND (energy_escalation_pct = 0.0 OR abs(energy_escalation_pct) >= 1e-12)),
    demand_charge_per_kw_year REAL CHECK (demand_charge_per_kw_year = 0.0 OR demand_charge_per_kw_year BETWEEN 1e-12 AND 1000000000.0),
    demand_escalation_pct REAL CHECK (demand_escalation_pct > -100.0 AND demand_escalation_pct <= 100.0 AND (demand_escalation_pct = 0.0 OR abs(demand_escalation_pct) >= 1e-12)),
    load_growth_pct REAL CHECK (load_growth_pct > -100.0 AND load_growth_pct <= 100.0 AND (load_growth_pct = 0.0 OR abs(load_growth_pct) >= 1e-12)),
    load_growth_years INTEGER CHECK (load_growth_years BETWEEN 1 AND 200),
    energised_hours REAL CHECK (energised_hours = 0.0 OR energised_hours BETWEEN 1e-12 AND 8784.0),
    auxiliary_hours REAL CHECK (auxiliary_hours = 0.0 OR auxiliary_hours BETWEEN 1e-12 AND 8784.0),
    loss_factor_weight_pu REAL CHECK (loss_factor_weight_pu = 0.0 OR loss_factor_weight_pu BETWEEN 1e-12 AND 1.0),
    responsibility_pu REAL CHECK (responsibility_pu = 0.0 OR responsibility_pu BETWEEN 1e-12 AND 1.0),
    stray_share_pu REAL CHECK (stray_share_pu = 0.0 OR stray_share_pu BETWEEN 1e-12 AND 1.0),
    voltage_model TEXT CHECK (voltage_model IN ('rated', 'drop')),
    operating_voltage_pu REAL CHECK (operating_voltage_pu BETWEEN 0.5 AND 1.5),
    capital_recovery TEXT CHECK (capital_recovery IN ('annuity', 'full')),
    life_years REAL CHECK (life_years BETWEEN 0.1 AND 200.0),
    equipment_escalation_pct REAL CHECK (equipment_escalation_pct > -100.0 AND equipment_escalation_pct <= 100.0 AND (equipment_escalation_pct = 0.0 OR abs(equipment_escalation_pct) >= 1e-12)),
    latest_replacement_years INTEGER CHECK (latest_replacement_years BETWEEN 0 AND 200),
    offer_sizes_down INTEGER CHECK (offer_sizes_down BETWEEN 0 AND 100),
    offer_sizes_up INTEGER CHECK (offer_sizes_up BETWEEN 0 AND 100),
    loading_limit_pu REAL CHECK (loading_limit_pu BETWEEN 0.01 AND 10.0),
    failure_shape REAL CHECK (failure_shape BETWEEN 0.01 AND 100.0),
    failure_scale_years REAL CHECK (failure_scale_years BETWEEN 0.1 AND 1000.0),
    failure_cost REAL CHECK (failure_cost = 0.0 OR failure_cost BETWEEN 1e-12 AND 1000000000000.0),
    failure_cost_per_customer REAL CHECK (failure_cost_per_customer = 0.0 OR failure_cost_per_customer BETWEEN 1e-12 AND 1000000000.0),
    emergency_premium_pct REAL CHECK (emergency_premium_pct = 0.0 OR emergency_premium_pct BETWEEN 1e-12 AND 1000.0),
    removal_cost REAL CHECK (removal_cost = 0.0 OR removal_cost BETWEEN 1e-12 AND 1000000000000.0),
    scrap_value REAL CHECK (scrap_value = 0.0 OR scrap_value BETWEEN 1e-12 AND 1000000000000.0),
    upkeep_per_year REAL CHECK (upkeep_per_year = 0.0 OR upkeep_per_year BETWEEN 1e-12 AND 1000000000000.0),
    upkeep_age_pct REAL CHECK (upkeep_age_pct > -100.0 AND upkeep_age_pct <= 100.0 AND (upkeep_age_pct = 0.0 OR abs(upkeep_age_pct) >= 1e-12)),
    carbon_price_per_t REAL CHECK (carbon_price_per_t = 0.0 OR carbon_price_per_t BETWEEN 1e-12 AND 1000000000.0),
    carbon_kg_per_kwh REAL CHECK (carbon_kg_per_kwh = 0.0 OR carbon_kg_per_kwh BETWEEN 1e-12 AND 1000.0),
    carbon_escalation_pct REAL CHECK (carbon_escalation_pct > -100.0 AND carbon_escalation_pct <= 100.0 AND (carbon_escalation_pct = 0.0 OR abs(carbon_escalation_pct) >= 1e-12)),
    factor_method TEXT CHECK (factor_method IN ('present-value', 'levelized')),
    fixed_charge_rate_pct REAL CHECK (fixed_charge_rate_pct BETWEEN 0.01 AND 1000.0),
    increase_factor REAL CHECK (increase_factor BETWEEN 0.01 AND 100.0),
    transmission_efficiency_pu REAL CHECK (transmission_efficiency_pu BETWEEN 0.01 AND 1.0),
    investment_per_kw_year REAL CHECK (investment_per_kw_year = 0.0 OR investment_per_kw_year BETWEEN 1e-12 AND 1000000000.0),
    near_tie_pct REAL CHECK (near_tie_pct = 0.0 OR near_tie_pct BETWEEN 1e-12 AND 100.0),
    law TEXT CHECK (length(law) > 0),
    estimate_missing INTEGER CHECK (estimate_missing IN (0, 1)),
    units_per_year INTEGER CHECK (units_per_year BETWEEN 0 AND 10000000),
    units_per_site_year INTEGER CHECK (units_per_site_year BETWEEN 0 AND 10000000),
    carry_over INTEGER CHECK (carry_over IN (0, 1)),
    UNIQUE (name)
) STRICT;

CREATE TABLE basis_ranges (
    id INTEGER PRIMARY KEY,
    basis TEXT NOT NULL REFERENCES bases (name),
    quantity TEXT NOT NULL CHECK (length(quantity) > 0),
    distribution TEXT CHECK (distribution = 'triangular' OR distribution = 'uniform' OR distribution = 'normal' OR distribution = 'lognormal'),
    low REAL CHECK (low BETWEEN -1000000000000.0 AND 1000000000000.0 AND (low = 0.0 OR abs(low) >= 1e-12)),
    base REAL CHECK (base BETWEEN -1000000000000.0 AND 1000000000000.0 AND (base = 0.0 OR abs(base) >= 1e-12)),
    high REAL CHECK (high BETWEEN -1000000000000.0 AND 1000000000000.0 AND (high = 0.0 OR abs(high) >= 1e-12)),
    mean REAL CHECK (mean BETWEEN -1000000000000.0 AND 1000000000000.0 AND (mean = 0.0 OR abs(mean) >= 1e-12)),
    deviation REAL CHECK (deviation = 0.0 OR deviation BETWEEN 1e-12 AND 1000000000000.0),
    UNIQUE (basis, quantity)
) STRICT;

CREATE TABLE basis_budgets (
    id INTEGER PRIMARY KEY,
    basis TEXT NOT NULL REFERENCES bases (name),
    year INTEGER NOT NULL CHECK (year BETWEEN 1950 AND 2200),
    budget REAL NOT NULL CHECK (budget = 0.0 OR budget BETWEEN 1e-12 AND 1000000000000000.0),
    UNIQUE (basis, year)
) STRICT;

CREATE TABLE tenders (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL CHECK (length(tender) > 0),
    currency TEXT NOT NULL CHECK (length(currency) > 0),
    dated TEXT CHECK (dated GLOB '[0-9][0-9][0-9][0-9]-[0-9][0-9]-[0-9][0-9]'),
    UNIQUE (tender)
) STRICT;

CREATE TABLE tender_rates (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL REFERENCES tenders (tender),
    currency TEXT NOT NULL CHECK (length(currency) > 0),
    rate REAL NOT NULL CHECK (rate BETWEEN 1e-9 AND 1000000000.0),
    UNIQUE (tender, currency)
) STRICT;

CREATE TABLE lots (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL REFERENCES tenders (tender),
    lot TEXT NOT NULL CHECK (length(lot) > 0),
    quantity INTEGER CHECK (quantity BETWEEN 1 AND 10000000),
    rated_kva REAL NOT NULL CHECK (rated_kva BETWEEN 0.1 AND 2000000.0),
    hv_kv REAL CHECK (hv_kv BETWEEN 0.001 AND 1200.0),
    lv_kv REAL CHECK (lv_kv BETWEEN 0.001 AND 1200.0),
    vector_group TEXT,
    reference_temp_c REAL CHECK (reference_temp_c = 0.0 OR reference_temp_c BETWEEN 1e-12 AND 250.0),
    factor_a_per_kw REAL CHECK (factor_a_per_kw = 0.0 OR factor_a_per_kw BETWEEN 1e-12 AND 1000000000.0),
    factor_b_per_kw REAL CHECK (factor_b_per_kw = 0.0 OR factor_b_per_kw BETWEEN 1e-12 AND 1000000000.0),
    factor_aux_per_kw REAL CHECK (factor_aux_per_kw = 0.0 OR factor_aux_per_kw BETWEEN 1e-12 AND 1000000000.0),
    peak_pu REAL CHECK (peak_pu = 0.0 OR peak_pu BETWEEN 1e-12 AND 100.0),
    loss_factor_pu REAL CHECK (loss_factor_pu = 0.0 OR loss_factor_pu BETWEEN 1e-12 AND 1.0),
    load_growth_pct REAL CHECK (load_growth_pct > -100.0 AND load_growth_pct <= 100.0 AND (load_growth_pct = 0.0 OR abs(load_growth_pct) >= 1e-12)),
    max_no_load_loss_w REAL CHECK (max_no_load_loss_w = 0.0 OR max_no_load_loss_w BETWEEN 1e-12 AND 100000000.0),
    max_load_loss_w REAL CHECK (max_load_loss_w = 0.0 OR max_load_loss_w BETWEEN 1e-12 AND 100000000.0),
    impedance_pct REAL CHECK (impedance_pct BETWEEN 0.01 AND 60.0),
    impedance_tolerance_pct REAL CHECK (impedance_tolerance_pct = 0.0 OR impedance_tolerance_pct BETWEEN 1e-12 AND 100.0),
    max_sound_db REAL CHECK (max_sound_db = 0.0 OR max_sound_db BETWEEN 1e-12 AND 200.0),
    max_mass_kg REAL CHECK (max_mass_kg BETWEEN 0.1 AND 10000000.0),
    max_delivery_weeks REAL CHECK (max_delivery_weeks = 0.0 OR max_delivery_weeks BETWEEN 1e-12 AND 1000.0),
    law TEXT CHECK (length(law) > 0),
    near_tie_pct REAL CHECK (near_tie_pct = 0.0 OR near_tie_pct BETWEEN 1e-12 AND 100.0),
    tolerance TEXT CHECK (tolerance = 'iec' OR tolerance = 'ieee' OR tolerance = 'none'),
    settlement TEXT CHECK (settlement IN ('unit', 'lot-mean')),
    UNIQUE (tender, lot)
) STRICT;

CREATE TABLE bids (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL CHECK (length(tender) > 0),
    lot TEXT NOT NULL CHECK (length(lot) > 0),
    bid TEXT NOT NULL CHECK (length(bid) > 0),
    bidder TEXT,
    price_milli INTEGER NOT NULL CHECK (price_milli BETWEEN 0 AND 1000000000000000),
    currency TEXT CHECK (length(currency) > 0),
    quantity INTEGER CHECK (quantity BETWEEN 1 AND 10000000),
    rated_kva REAL CHECK (rated_kva BETWEEN 0.1 AND 2000000.0),
    loss_base_kva REAL CHECK (loss_base_kva BETWEEN 0.1 AND 2000000.0),
    no_load_loss_w REAL NOT NULL CHECK (no_load_loss_w = 0.0 OR no_load_loss_w BETWEEN 1e-12 AND 100000000.0),
    load_loss_w REAL CHECK (load_loss_w = 0.0 OR load_loss_w BETWEEN 1e-12 AND 100000000.0),
    total_loss_w REAL CHECK (total_loss_w = 0.0 OR total_loss_w BETWEEN 1e-12 AND 100000000.0),
    reference_temp_c REAL CHECK (reference_temp_c = 0.0 OR reference_temp_c BETWEEN 1e-12 AND 250.0),
    auxiliary_loss_w REAL CHECK (auxiliary_loss_w = 0.0 OR auxiliary_loss_w BETWEEN 1e-12 AND 100000000.0),
    impedance_pct REAL CHECK (impedance_pct BETWEEN 0.01 AND 60.0),
    vector_group TEXT,
    insulation TEXT CHECK (insulation IN ('liquid', 'dry')),
    winding_metal TEXT CHECK (winding_metal = 'copper' OR winding_metal = 'aluminium' OR winding_metal = 'mixed'),
    freight_cost_milli INTEGER CHECK (freight_cost_milli BETWEEN 0 AND 1000000000000000),
    install_cost_milli INTEGER CHECK (install_cost_milli BETWEEN 0 AND 1000000000000000),
    adder_cost_milli INTEGER CHECK (adder_cost_milli BETWEEN -1000000000000000 AND 1000000000000000),
    sound_db REAL CHECK (sound_db = 0.0 OR sound_db BETWEEN 1e-12 AND 200.0),
    mass_kg REAL CHECK (mass_kg BETWEEN 0.1 AND 10000000.0),
    delivery_weeks REAL CHECK (delivery_weeks = 0.0 OR delivery_weeks BETWEEN 1e-12 AND 1000.0),
    warranty_years REAL CHECK (warranty_years = 0.0 OR warranty_years BETWEEN 1e-12 AND 100.0),
    note TEXT,
    UNIQUE (tender, lot, bid),
    FOREIGN KEY (tender, lot) REFERENCES lots (tender, lot)
) STRICT;

CREATE TABLE measured (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL CHECK (length(tender) > 0),
    lot TEXT NOT NULL CHECK (length(lot) > 0),
    bid TEXT NOT NULL CHECK (length(bid) > 0),
    serial TEXT NOT NULL CHECK (length(serial) > 0),
    no_load_loss_w REAL NOT NULL CHECK (no_load_loss_w = 0.0 OR no_load_loss_w BETWEEN 1e-12 AND 100000000.0),
    load_loss_w REAL NOT NULL CHECK (load_loss_w = 0.0 OR load_loss_w BETWEEN 1e-12 AND 100000000.0),
    auxiliary_loss_w REAL CHECK (auxiliary_loss_w = 0.0 OR auxiliary_loss_w BETWEEN 1e-12 AND 100000000.0),
    test_temp_c REAL CHECK (test_temp_c BETWEEN -50.0 AND 250.0 AND (test_temp_c = 0.0 OR abs(test_temp_c) >= 1e-12)),
    tested_on TEXT CHECK (tested_on GLOB '[0-9][0-9][0-9][0-9]-[0-9][0-9]-[0-9][0-9]'),
    UNIQUE (tender, lot, bid, serial),
    FOREIGN KEY (tender, lot, bid) REFERENCES bids (tender, lot, bid)
) STRICT;

CREATE TABLE settings (
    name TEXT PRIMARY KEY,
    value TEXT NOT NULL
) STRICT, WITHOUT ROWID;

-- One file taken in. Written only where it changed something.
CREATE TABLE import_batches (
    id INTEGER PRIMARY KEY,
    at TEXT NOT NULL,
    who TEXT NOT NULL,
    source TEXT NOT NULL,
    why TEXT,
    rows_new INTEGER NOT NULL CHECK (rows_new >= 0),
    rows_changed INTEGER NOT NULL CHECK (rows_changed >= 0),
    rows_same INTEGER NOT NULL CHECK (rows_same >= 0)
) STRICT;

-- Every change: who, when, from what, why, and the old values. New rows of a batch are one entry; their ids
-- run from first_id to last_id.
CREATE TABLE journal (
    id INTEGER PRIMARY KEY,
    at TEXT NOT NULL,
    who TEXT NOT NULL,
    action TEXT NOT NULL CHECK (action IN ('added', 'changed', 'removed', 'chosen')),
    kind TEXT NOT NULL,
    key TEXT,
    row INTEGER,
    what TEXT NOT NULL CHECK (json_valid(what)),
    source TEXT,
    why TEXT,
    batch INTEGER REFERENCES import_batches (id) DEFERRABLE INITIALLY DEFERRED,
    replaced BLOB
) STRICT;

CREATE INDEX journal_by_subject ON journal (kind, key);

CREATE TRIGGER journal_is_not_rewritten BEFORE UPDATE ON journal
BEGIN SELECT RAISE(ABORT, 'the journal is never rewritten'); END;
CREATE TRIGGER journal_is_not_cut BEFORE DELETE ON journal
BEGIN SELECT RAISE(ABORT, 'the journal is never cut'); END;
CREATE TRIGGER batch_is_not_rewritten BEFORE UPDATE ON import_batches
BEGIN SELECT RAISE(ABORT, 'the journal is never rewritten'); END;
CREATE TRIGGER batch_is_not_cut BEFORE DELETE ON import_batches
BEGIN SELECT RAISE(ABORT, 'the journal is never cut'); END;
