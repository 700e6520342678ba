//! The formulas of a valuation, in the order in which they build on one another (methods, section 7).

use crate::engine::working::Formula;

const SOURCE: &str = "methods, section 7";

pub(super) const OLD_YEAR: Formula = Formula {
    name: "running cost of the old unit in a year, discounted, times the chance S that it still stands",
    symbol: "old",
    formula: "S·run·(1+i)^−k",
    unit: "money",
    source: SOURCE,
};
pub(super) const OLD_MID_YEAR: Formula =
    Formula { formula: "S·run·(1+i)^−(k−½)", ..OLD_YEAR };
pub(super) const OLD_YEARS: Formula = Formula {
    name: "discounted running cost of the old unit",
    symbol: "run_old",
    formula: "Σ_k S·run·d_k",
    unit: "money",
    source: SOURCE,
};
pub(super) const FAILURE: Formula = Formula {
    name: "failure of the old unit at the end of a year: its cost F and the forced purchase G′",
    symbol: "fail",
    formula: "S·h·(F·(1+i)^−k + G′)",
    unit: "money",
    source: SOURCE,
};
pub(super) const FAILURES: Formula = Formula {
    name: "expected failures of the old unit",
    symbol: "fail_old",
    formula: "Σ_k S·h·(F·v^k + G′)",
    unit: "money",
    source: SOURCE,
};
pub(super) const STANDS: Formula = Formula {
    name: "chance that the old unit still stands",
    symbol: "S",
    formula: "Π_{k≤t} (1−h_k)",
    unit: "pu",
    source: SOURCE,
};
pub(super) const FORCED_PRICE: Formula = Formula {
    name: "price and installation of a forced purchase",
    symbol: "P",
    formula: "P_planned·(1+premium)",
    unit: "money",
    source: SOURCE,
};
pub(super) const PURCHASE: Formula = Formula {
    name: "purchase as charged inside the horizon, removal less scrap, discounted",
    symbol: "capital",
    formula: "(K + removal_less_scrap)·(1+i)^−t",
    unit: "money",
    source: SOURCE,
};
pub(super) const NEW_YEAR: Formula = Formula {
    name: "running cost of the new unit in a year, discounted",
    symbol: "new",
    formula: "run·(1+i)^−k",
    unit: "money",
    source: SOURCE,
};
pub(super) const NEW_MID_YEAR: Formula = Formula { formula: "run·(1+i)^−(k−½)", ..NEW_YEAR };
pub(super) const NEW_YEARS: Formula = Formula {
    name: "discounted running cost of the new unit",
    symbol: "run_new",
    formula: "Σ_k run·d_k",
    unit: "money",
    source: SOURCE,
};
pub(super) const NEW_FAILURE: Formula = Formula {
    name: "failure of the new unit in a year, at expected cost",
    symbol: "fail",
    formula: "h·(F + P)·(1+i)^−k",
    unit: "money",
    source: SOURCE,
};
pub(super) const NEW_FAILURES: Formula = Formula {
    name: "expected failures of the new unit",
    symbol: "fail_new",
    formula: "Σ_k h·(F + P)·v^k",
    unit: "money",
    source: SOURCE,
};
pub(super) const BUYING: Formula = Formula {
    name: "cost from the purchase to the end of the horizon",
    symbol: "G",
    formula: "capital + run_new + fail_new",
    unit: "money",
    source: SOURCE,
};
pub(super) const FORCED: Formula = Formula {
    name: "cost from a forced purchase on: the offer for which it is least",
    symbol: "G′",
    ..BUYING
};
pub(super) const CHOICE: Formula = Formula {
    name: "present value of replacing",
    symbol: "J",
    formula: "run_old + fail_old + S·G",
    unit: "money",
    source: SOURCE,
};
pub(super) const END: Formula = Formula {
    name: "removal less scrap at the end of the horizon, discounted, where the unit still stands",
    symbol: "end",
    formula: "S·removal_less_scrap·(1+i)^−N",
    unit: "money",
    source: SOURCE,
};
pub(super) const KEEP: Formula = Formula {
    name: "present value of keeping it to the end of the horizon",
    symbol: "R",
    formula: "run_old + fail_old + end",
    unit: "money",
    source: SOURCE,
};
