//! The legal minimum efficiency as a calculation: a rating with its losses held against a law on a date.

use super::input::{Input, KV, KVA, LOSS_W, SHARE, TEMPERATURE_C, calc};
use super::{Calc, Datum, result};
use crate::engine::Refusal;
use crate::engine::columns::{Insulation, Mounting, TapChanger, WindingMetal, YesNo};
use crate::engine::law::{self, DualVoltage, Subject};

pub(super) const CALCS: &[Calc] = &[LEGAL_MINIMUM];

calc! {
    LEGAL_MINIMUM = "legal-minimum",
    "whether losses meet a minimum-efficiency law on the date of purchase; a screening aid",
    "Regulation (EU) 548/2014 with 2019/1783; 10 CFR 431.196; SOR/2016-311; methods, section 11";
    {
        law: String, Input::text().required(), "key of the law: eu-548-2014, us-10cfr431 or ca-sor-2016-311";
        date: String, Input::date().required(), "date of purchase";
        rated_kva: f64, KVA.required(), "rated power";
        no_load_loss_w: f64, LOSS_W.required(), "no-load loss";
        load_loss_w: f64, LOSS_W.required(), "load loss at rated load";
        reference_temp_c: Option<f64>, TEMPERATURE_C.blank("as the law asks"), "reference temperature of the load loss";
        phases: Option<i64>, Input::integer_of(&[1, 3]), "number of phases";
        frequency_hz: Option<f64>, Input::real(10.0, 400.0), "rated frequency";
        hv_kv: Option<f64>, KV, "rated voltage of the high-voltage winding";
        lv_kv: Option<f64>, KV, "rated voltage of the low-voltage winding";
        hv_um_kv: Option<f64>, KV.blank("the next standard value above hv_kv"), "highest voltage for equipment of the high-voltage winding";
        bil_kv: Option<f64>, Input::above(0.0, 3000.0), "basic impulse level (US and Canadian dry-type)";
        insulation: Option<Insulation>, Input::choice(Insulation::WORDS), "what insulates the windings";
        mounting: Option<Mounting>, Input::choice(Mounting::WORDS), "how it stands";
        tap_changer: Option<TapChanger>, Input::choice(TapChanger::WORDS), "how taps are changed";
        dual_voltage: Option<DualVoltage>, Input::choice(DualVoltage::WORDS), "windings for two voltages";
        replaces_like: YesNo, Input::choice(YesNo::WORDS).default("no"), "whether it replaces a pole-mounted unit one to one (EU)";
        winding_metal: Option<WindingMetal>, Input::choice(WindingMetal::WORDS).blank("copper"), "winding metal";
        stray_share_pu: f64, SHARE.default("0"), "stray part of the load loss, for another temperature";
        no_load_cooling_w: Option<f64>, LOSS_W.blank("0"), "cooling power at no load, Pc0 (EU index)";
        load_cooling_w: Option<f64>, LOSS_W.blank("0"), "further cooling power at the load of the index, Pck (EU index)";
    }
    |i, w| {
        let date = i.date.parse().map_err(|_| {
            Refusal::new("date", &i.date, "is not a date like 2027-03-31")
        })?;
        let subject = Subject {
            phases: i.phases,
            frequency_hz: i.frequency_hz,
            hv_kv: i.hv_kv,
            lv_kv: i.lv_kv,
            hv_um_kv: i.hv_um_kv,
            bil_kv: i.bil_kv,
            insulation: i.insulation,
            mounting: i.mounting,
            tap_changer: i.tap_changer,
            dual_voltage: i.dual_voltage,
            replaces_like: i.replaces_like == YesNo::Yes,
            winding_metal: i.winding_metal,
            reference_temp_c: i.reference_temp_c,
            stray_share_pu: i.stray_share_pu,
            no_load_cooling_w: i.no_load_cooling_w,
            load_cooling_w: i.load_cooling_w,
            ..Subject::new(i.rated_kva, i.no_load_loss_w, i.load_loss_w)
        };
        let verdict = law::judge(w, &i.law, &subject, date)?;
        let meets = verdict.meets.map_or(Datum::Nothing, Datum::Truth);
        let text = |value: fn(&law::Limit) -> String| verdict.limits.iter().map(value).collect::<Vec<_>>();
        Ok(result("meets", meets)
            .and("why", verdict.why.as_str())
            .and("quantity", text(|l| l.quantity.to_owned()))
            .and("limit", verdict.limits.iter().map(|l| l.limit).collect::<Vec<f64>>())
            .and("value", verdict.limits.iter().map(|l| l.value).collect::<Vec<f64>>())
            .and("table", text(|l| l.source.clone()))
            .and("confidence", verdict.confidence.word())
            .and("verify", verdict.verify)
            .and("notes", verdict.notes))
    }
}
