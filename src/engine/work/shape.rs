//! The shape of a worked calculation for machines: {calc, inputs, result, steps, source}, steps in one line.

use serde::ser::{Serialize, SerializeMap, SerializeSeq, SerializeStruct, Serializer};

use super::{Datum, Worked};
use crate::engine::working::{Step, flatten};

impl Serialize for Datum {
    fn serialize<S: Serializer>(&self, s: S) -> Result<S::Ok, S::Error> {
        match self {
            Self::Nothing => s.serialize_none(),
            Self::Number(value) => s.serialize_f64(*value),
            Self::Numbers(values) => values.serialize(s),
            Self::Word(word) => s.serialize_str(word),
            Self::Words(words) => words.serialize(s),
            Self::Truth(truth) => s.serialize_bool(*truth),
        }
    }
}

/// Named values as one object, in order.
struct Named<'a>(&'a [(&'static str, Datum)]);

impl Serialize for Named<'_> {
    fn serialize<S: Serializer>(&self, s: S) -> Result<S::Ok, S::Error> {
        let mut map = s.serialize_map(Some(self.0.len()))?;
        for (name, datum) in self.0 {
            map.serialize_entry(name, datum)?;
        }
        map.end()
    }
}

/// One step without its parts.
struct Line<'a>(&'a Step);

impl Serialize for Line<'_> {
    fn serialize<S: Serializer>(&self, s: S) -> Result<S::Ok, S::Error> {
        let Step { formula, of, substituted, value, .. } = self.0;
        let mut line = s.serialize_struct("step", 5)?;
        if of.is_empty() {
            line.serialize_field("name", formula.name)?;
        } else {
            line.serialize_field("name", &format!("{}: {of}", formula.name))?;
        }
        line.serialize_field("formula", &format!("{} = {}", formula.symbol, formula.formula))?;
        line.serialize_field("substituted", substituted)?;
        line.serialize_field("value", value)?;
        line.serialize_field("unit", formula.unit)?;
        line.end()
    }
}

/// The steps in the order in which they were taken.
struct Lines<'a>(&'a [Step]);

impl Serialize for Lines<'_> {
    fn serialize<S: Serializer>(&self, s: S) -> Result<S::Ok, S::Error> {
        let all = flatten(self.0);
        let mut list = s.serialize_seq(Some(all.len()))?;
        for step in all {
            list.serialize_element(&Line(step))?;
        }
        list.end()
    }
}

impl Serialize for Worked {
    fn serialize<S: Serializer>(&self, s: S) -> Result<S::Ok, S::Error> {
        let mut worked = s.serialize_struct("worked", 5)?;
        worked.serialize_field("calc", self.calc)?;
        worked.serialize_field("inputs", &Named(&self.inputs))?;
        worked.serialize_field("result", &Named(&self.result))?;
        worked.serialize_field("steps", &Lines(&self.steps))?;
        worked.serialize_field("source", self.source)?;
        worked.end()
    }
}

#[cfg(test)]
mod tests {
    use crate::engine::work::run;

    #[test]
    fn shape_is_the_promised_one() {
        let worked = run("growth-rate", &["doubling_years=1"]).expect("sound");
        let json = serde_json::to_string(&worked).expect("plain");
        let expected = concat!(
            r#"{"calc":"growth-rate","inputs":{"doubling_years":1.0},"result":{"growth_pct":100.0},"#,
            r#""steps":[{"name":"growth rate of a load that doubles in n years","formula":"g = 2^(1/n) − 1","#,
            r#""substituted":"2^(1/1) − 1","value":1.0,"unit":"1/year"}],"source":"definition; Gonen Ex 2.10"}"#
        );
        assert_eq!(json, expected);
        let none = run("regulation", &["r_pct=1", "x_pct=5"]).expect("sound");
        assert!(
            serde_json::to_string(&none).expect("plain").contains(r#""no_load_voltage_v":null"#)
        );
    }
}
