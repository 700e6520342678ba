-- The book, version 2: what was awarded, and which units of the fleet came of it.
--
-- An award keeps the terms under which the bid was chosen: settlement goes by them, whatever becomes of the basis.

CREATE TABLE awards (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL REFERENCES tenders (tender),
    lot TEXT NOT NULL CHECK (length(lot) > 0),
    bid TEXT NOT NULL CHECK (length(bid) > 0),
    factor_a_per_kw REAL NOT NULL CHECK (factor_a_per_kw BETWEEN -1000000000000.0 AND 1000000000000.0 AND (factor_a_per_kw = 0.0 OR abs(factor_a_per_kw) >= 1e-12)),
    factor_b_per_kw REAL NOT NULL CHECK (factor_b_per_kw BETWEEN -1000000000000.0 AND 1000000000000.0 AND (factor_b_per_kw = 0.0 OR abs(factor_b_per_kw) >= 1e-12)),
    factor_aux_per_kw REAL NOT NULL CHECK (factor_aux_per_kw BETWEEN -1000000000000.0 AND 1000000000000.0 AND (factor_aux_per_kw = 0.0 OR abs(factor_aux_per_kw) >= 1e-12)),
    stray_share_pu REAL NOT NULL CHECK (stray_share_pu = 0.0 OR stray_share_pu BETWEEN 1e-12 AND 1.0),
    owning_cost REAL NOT NULL CHECK (owning_cost BETWEEN -1000000000000000.0 AND 1000000000000000.0 AND (owning_cost = 0.0 OR abs(owning_cost) >= 1e-12)),
    recommended TEXT CHECK (length(recommended) > 0),
    basis TEXT CHECK (length(basis) > 0),
    program TEXT NOT NULL CHECK (length(program) > 0),
    awarded_at TEXT NOT NULL CHECK (length(awarded_at) > 0),
    awarded_by TEXT NOT NULL CHECK (length(awarded_by) > 0),
    why TEXT,
    UNIQUE (tender, lot),
    FOREIGN KEY (tender, lot, bid) REFERENCES bids (tender, lot, bid)
) STRICT;

CREATE TABLE deliveries (
    id INTEGER PRIMARY KEY,
    tender TEXT NOT NULL CHECK (length(tender) > 0),
    lot TEXT NOT NULL CHECK (length(lot) > 0),
    bid TEXT NOT NULL CHECK (length(bid) > 0),
    serial TEXT NOT NULL CHECK (length(serial) > 0),
    unit TEXT NOT NULL CHECK (length(unit) > 0) REFERENCES units (unit),
    UNIQUE (tender, lot, bid, serial),
    UNIQUE (unit),
    FOREIGN KEY (tender, lot, bid, serial) REFERENCES measured (tender, lot, bid, serial)
) STRICT;
