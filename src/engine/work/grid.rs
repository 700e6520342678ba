//! Calculations of the network: regulation, voltage drop, transformers in parallel, short circuit.

use super::input::{Input, KV, KVA, LOAD_PU, LOSS_W, List, PERCENT, SHARE, calc};
use super::{Calc, result};
use crate::engine::Refusal;
use crate::engine::transformer::circuit::{self, Circuit, LoadKind};
use crate::engine::transformer::fault::{self, Feed};
use crate::engine::transformer::losses::{Losses, at_current};
use crate::engine::transformer::nameplate::Phases;
use crate::engine::transformer::parallel::{self, Member, Tapped};
use crate::engine::transformer::regulation;
use crate::engine::transformer::vector_group::{agree, two_windings};
use crate::engine::transformer::voltage_drop::{self, Supply};
use crate::engine::working::Recorder;

pub(super) const CALCS: &[Calc] = &[
    REGULATION,
    VOLTAGE_DROP,
    PARALLEL_SHARING,
    CIRCULATING_CURRENT,
    UNITS_IN_PARALLEL,
    FAULT_LEVEL,
    FAULT_CURRENT,
];

/// A percentage of series resistance or reactance.
const PART_PCT: Input = Input::real(0.0, 100.0);

/// The series circuit from whichever of its values were given.
fn series<R: Recorder>(
    w: &mut R,
    r_pct: Option<f64>,
    x_pct: Option<f64>,
    impedance_pct: Option<f64>,
    losses: Option<(f64, f64)>,
) -> Result<Circuit, Refusal> {
    match (r_pct, x_pct, impedance_pct, losses) {
        (Some(r), Some(x), None, _) => Ok(Circuit { r_pu: r / 100.0, x_pu: x / 100.0 }),
        // A base of 100 kVA makes 1 % of resistance 1 kW of loss.
        (Some(r), None, Some(z), _) => circuit::of_nameplate(w, 100.0, 1000.0 * r, z),
        (None, None, Some(z), Some((kva, pk))) => circuit::of_nameplate(w, kva, pk, z),
        _ => {
            let why = "give r_pct and x_pct, or r_pct and impedance_pct, or rated_kva, load_loss_w and impedance_pct";
            Err(Refusal::new("r_pct", "", why))
        }
    }
}

calc! {
    REGULATION = "regulation",
    "fall of the secondary voltage from no load to a load: exact, first order, with the 1/200 term",
    "series circuit; IEC 60076-8 (memory); methods, section 2";
    {
        r_pct: Option<f64>, PART_PCT, "series resistance";
        x_pct: Option<f64>, PART_PCT, "series reactance";
        impedance_pct: Option<f64>, Input::above(0.0, 100.0), "short-circuit impedance, instead of x_pct";
        rated_kva: Option<f64>, KVA, "rated power, with load_loss_w instead of r_pct";
        load_loss_w: Option<f64>, LOSS_W, "load loss at rated load";
        load_pu: f64, LOAD_PU.default("1"), "load over the rating";
        power_factor: f64, SHARE.default("0.9"), "power factor of the load";
        load: LoadKind, Input::choice(LoadKind::WORDS).default("lagging"), "kind of load";
        load_voltage_pu: f64, Input::above(0.0, 2.0).default("1"), "voltage at the load, for the source voltage";
        rated_voltage_v: Option<f64>, Input::above(0.0, 1.2e6), "rated secondary voltage, for the voltage at no load";
    }
    |i, w| {
        let losses = i.rated_kva.zip(i.load_loss_w);
        let c = series(w, i.r_pct, i.x_pct, i.impedance_pct, losses)?;
        let pf = i.load.power_factor(i.power_factor)?;
        let exact = regulation::exact(w, &c, i.load_pu, pf);
        let second = regulation::second_order(w, &c, i.load_pu, pf);
        let first = regulation::first_order(&mut crate::engine::working::Silent, &c, i.load_pu, pf);
        let source = regulation::source_voltage(w, &c, i.load_pu, pf, i.load_voltage_pu)?;
        Ok(result("regulation_pct", 100.0 * exact)
            .and("regulation_first_order_pct", 100.0 * first)
            .and("regulation_second_order_pct", 100.0 * second)
            .and("source_voltage_pu", source)
            .and("no_load_voltage_v", i.rated_voltage_v.map(|v| v * (1.0 + exact))))
    }
}

calc! {
    VOLTAGE_DROP = "voltage-drop",
    "voltage, current and loss at a load with the voltage drop counted, beside the rated model",
    "two-bus power flow; methods, section 2 (voltage_model drop)";
    {
        rated_kva: f64, KVA.required(), "rated power";
        no_load_loss_w: f64, LOSS_W.required(), "no-load (iron) loss";
        load_loss_w: f64, LOSS_W.required(), "load (copper) loss at rated load";
        impedance_pct: f64, Input::above(0.0, 100.0).required(), "short-circuit impedance";
        load_pu: f64, LOAD_PU.default("1"), "load over the rating";
        power_factor: f64, SHARE.default("0.9"), "power factor of the load";
        load: LoadKind, Input::choice(LoadKind::WORDS).default("lagging"), "kind of load";
        operating_voltage_pu: f64, Input::real(0.5, 1.5).default("1"), "voltage of the high-voltage side over rated";
    }
    |i, w| {
        let supply = Supply {
            circuit: circuit::of_nameplate(w, i.rated_kva, i.load_loss_w, i.impedance_pct)?,
            v_hv_pu: i.operating_voltage_pu,
            power_factor: i.load.power_factor(i.power_factor)?,
        };
        let losses = Losses {
            rated_kva: i.rated_kva,
            no_load_loss_w: i.no_load_loss_w,
            load_loss_w: i.load_loss_w,
            auxiliary_loss_w: 0.0,
            reactance_pu: None,
        };
        let current = voltage_drop::current(w, &supply, i.load_pu)?;
        let drop = at_current(w, &losses, i.operating_voltage_pu, current);
        let rated = at_current(w, &losses, 1.0, i.load_pu);
        Ok(result("low_side_voltage_pu", i.load_pu / current)
            .and("current_pu", current)
            .and("loss_w", drop)
            .and("rated_model_loss_w", rated))
    }
}

calc! {
    PARALLEL_SHARING = "parallel-sharing",
    "how transformers in parallel share a load, and the load at which the first is full",
    "equal voltages at both ends; methods, section 2";
    {
        rated_kva: List<f64>, KVA.list().required(), "rated power of each transformer";
        r_pct: List<f64>, PART_PCT.list().required(), "series resistance of each, on its own rating, or one for all";
        x_pct: List<f64>, PART_PCT.list().required(), "series reactance of each, on its own rating, or one for all";
        load_kva: f64, Input::above(0.0, 1e9).required(), "apparent power of the load";
        power_factor: f64, SHARE.default("0.9"), "power factor of the load";
        load: LoadKind, Input::choice(LoadKind::WORDS).default("lagging"), "kind of load";
        vector_group: List<String>, Input::text().list().blank("taken as matching"), "vector group of each";
    }
    |i, w| {
        for group in i.vector_group.iter() {
            two_windings(group)?;
            if !agree(Some(group), i.vector_group.first().map(String::as_str)) {
                let why = format!(
                    "cannot be matched with {} at the terminals: the bank would be short-circuited by the angle between the groups; the transformers must not be paralleled",
                    i.vector_group[0]
                );
                return Err(Refusal::new("vector_group", group, why));
            }
        }
        let n = i.rated_kva.len();
        let (r, x) = (i.r_pct.as_long_as("r_pct", n)?, i.x_pct.as_long_as("x_pct", n)?);
        let member = |((kva, r), x): ((&f64, f64), f64)| Member {
            rated_kva: *kva,
            circuit: Circuit { r_pu: r / 100.0, x_pu: x / 100.0 },
        };
        let members: Vec<Member> = i.rated_kva.iter().zip(r).zip(x).map(member).collect();
        let pf = i.load.power_factor(i.power_factor)?;
        let shares = parallel::sharing(w, &members, i.load_kva * pf.cos, i.load_kva * pf.sin)?;
        let limit = parallel::bank_limit(w, &shares, i.load_kva)?;
        let each = |value: fn(&parallel::Share) -> f64| shares.iter().map(value).collect::<Vec<f64>>();
        Ok(result("share_kva", each(parallel::Share::kva))
            .and("share_kw", each(|s| s.kw))
            .and("share_kvar", each(|s| s.kvar))
            .and("lag_deg", each(parallel::Share::lag_deg))
            .and("loading_pct", each(|s| 100.0 * s.loading_pu))
            .and("share_pct", shares.iter().map(|s| 100.0 * s.kva() / i.load_kva).collect::<Vec<_>>())
            .and("bank_limit_kva", limit))
    }
}

calc! {
    CIRCULATING_CURRENT = "circulating-current",
    "current that circulates at no load between two transformers of unequal ratio",
    "methods, section 2; Hubert Ex 3.4";
    {
        phases: i64, Input::integer_of(&[1, 3]).default("3"), "number of phases";
        rated_kva: List<f64>, KVA.list().required(), "rated power of both, or one for both";
        r_pct: List<f64>, PART_PCT.list().required(), "series resistance of both, on own rating";
        x_pct: List<f64>, PART_PCT.list().required(), "series reactance of both, on own rating";
        no_load_voltage_v: List<f64>, Input::above(0.0, 1.2e6).list().required(), "secondary voltages at no load, between lines if three-phase";
        rated_voltage_v: List<f64>, Input::above(0.0, 1.2e6).list().blank("no_load_voltage_v"), "rated secondary voltages, where taps differ";
    }
    |i, w| {
        let phases = Phases::of(i.phases)?;
        let kva = i.rated_kva.as_long_as("rated_kva", 2)?;
        let (r, x) = (i.r_pct.as_long_as("r_pct", 2)?, i.x_pct.as_long_as("x_pct", 2)?);
        let volts = i.no_load_voltage_v.as_long_as("no_load_voltage_v", 2)?;
        let rated = if i.rated_voltage_v.is_empty() { &i.no_load_voltage_v } else { &i.rated_voltage_v };
        let rated = rated.as_long_as("rated_voltage_v", 2)?;
        let side = |n: usize| Tapped {
            member: Member {
                rated_kva: kva[n],
                circuit: Circuit { r_pu: r[n] / 100.0, x_pu: x[n] / 100.0 },
            },
            rated_v: rated[n],
            no_load_v: volts[n],
        };
        let c = parallel::circulating(w, phases, side(0), side(1))?;
        Ok(result("circulating_current_a", c.current_a)
            .and("of_first_rated_pct", 100.0 * c.of_first_pu)
            .and("of_second_rated_pct", 100.0 * c.of_second_pu)
            .and("mismatch_pct", 100.0 * c.mismatch_pu))
    }
}

calc! {
    UNITS_IN_PARALLEL = "units-in-parallel",
    "loads above which one more of equal transformers in parallel lowers the loss",
    "common practice; methods, section 2";
    {
        rated_kva: f64, KVA.required(), "rated power of one transformer";
        no_load_loss_w: f64, LOSS_W.required(), "no-load loss of one";
        load_loss_w: f64, LOSS_W.required(), "load loss of one at rated load";
        units: i64, Input::integer(1, 100).default("2"), "largest number to change from";
    }
    |i, w| {
        let mut loads = Vec::new();
        for n in 1..=i.units {
            #[expect(clippy::cast_precision_loss, reason = "at most 100 units")]
            let n = n as f64;
            let (p0, pk) = (i.no_load_loss_w, i.load_loss_w);
            loads.push(parallel::switching_load(w, i.rated_kva, p0, pk, n)?);
        }
        Ok(result("switching_load_kva", loads))
    }
}

calc! {
    FAULT_LEVEL = "fault-level",
    "fault level and current at the secondary, with the network behind the transformer",
    "1/S_k = z/S_r + 1/S_net; methods, section 2";
    {
        rated_kva: f64, KVA.required(), "rated power";
        impedance_pct: f64, Input::above(0.0, 100.0).required(), "short-circuit impedance";
        network_mva: Option<f64>, Input::above(0.0, 1e9).blank("infinite"), "fault level of the network at the primary";
        lv_kv: Option<f64>, KV, "secondary voltage, for the current";
        phases: i64, Input::integer_of(&[1, 3]).default("3"), "number of phases";
    }
    |i, w| {
        let (mva, z) = (i.rated_kva / 1000.0, i.impedance_pct / 100.0);
        let infinite = fault::fault_level(w, mva, z, None)?;
        let level = match i.network_mva {
            Some(network) => fault::fault_level(w, mva, z, Some(network))?,
            None => infinite,
        };
        let current = match i.lv_kv {
            Some(kv) => Some(fault::fault_current(w, Phases::of(i.phases)?, level, kv)?),
            None => None,
        };
        Ok(result("fault_level_mva", level)
            .and("infinite_network_mva", infinite)
            .and("fault_current_ka", current.map(|a| a / 1000.0)))
    }
}

calc! {
    FAULT_CURRENT = "fault-current",
    "current that the feeding winding draws into a fault behind the transformer",
    "series circuit; Hubert Ex 2.8, Theraja Ex 32.53";
    {
        phases: i64, Input::integer_of(&[1, 3]).default("3"), "number of phases";
        rated_kva: f64, KVA.required(), "rated power";
        hv_kv: f64, KV.required(), "rated voltage of the feeding winding";
        lv_kv: Option<f64>, KV.blank("a fault without resistance"), "rated voltage of the winding with the fault";
        r_pct: Option<f64>, PART_PCT, "series resistance";
        x_pct: Option<f64>, PART_PCT, "series reactance";
        impedance_pct: Option<f64>, Input::above(0.0, 100.0), "short-circuit impedance, instead of x_pct";
        load_loss_w: Option<f64>, LOSS_W, "load loss at rated load, instead of r_pct";
        fault_resistance_ohm: f64, Input::real(0.0, 1e9).default("0"), "resistance of the fault, at the far winding";
        applied_pct: f64, PERCENT.default("100"), "applied voltage in percent of hv_kv";
    }
    |i, w| {
        let losses = i.load_loss_w.map(|pk| (i.rated_kva, pk));
        let c = series(w, i.r_pct, i.x_pct, i.impedance_pct, losses)?;
        if i.fault_resistance_ohm > 0.0 && i.lv_kv.is_none() {
            let why = "is needed to carry the fault resistance to the feeding winding";
            return Err(Refusal::new("lv_kv", "", why));
        }
        let feed = Feed {
            phases: Phases::of(i.phases)?,
            rated_kva: i.rated_kva,
            rated_v: 1000.0 * i.hv_kv,
            far_v: 1000.0 * i.lv_kv.unwrap_or(i.hv_kv),
            applied_v: 10.0 * i.hv_kv * i.applied_pct,
        };
        let through = fault::into_fault(w, &feed, &c, i.fault_resistance_ohm)?;
        Ok(result("current_a", through.current_a)
            .and("angle_deg", through.angle_deg)
            .and("impedance_pct", 100.0 * c.z_pu())
            .and("x_pct", 100.0 * c.x_pu)
            .and("series_resistance_ohm", through.resistance_ohm)
            .and("series_reactance_ohm", through.reactance_ohm)
            .and("series_impedance_ohm", through.resistance_ohm.hypot(through.reactance_ohm)))
    }
}
