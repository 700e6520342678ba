//! A fleet in columns: the bare numbers of every unit side by side, NaN where unknown, and the kinds of
//! terminals that occur. Filled from a book once; a changed basis never reads the book again.

use rustc_hash::FxHashMap;

use crate::engine::columns::{Insulation, Unit, WindingMetal};
use crate::engine::decision::fit::Terminals;
use crate::engine::decision::place::UnitFacts;

/// Many short names end to end.
#[derive(Clone, Debug, Default)]
pub struct Names {
    text: String,
    ends: Vec<u32>,
}

impl Names {
    /// Adds a name.
    pub fn push(&mut self, name: &str) {
        self.text.push_str(name);
        self.ends.push(u32::try_from(self.text.len()).unwrap_or(u32::MAX));
    }
    fn reserve(&mut self, more: usize) {
        self.text.reserve(more.saturating_mul(8));
        self.ends.reserve(more);
    }
    /// Name number `i`; "" beyond the last.
    pub fn get(&self, i: usize) -> &str {
        let from = if i == 0 { 0 } else { self.ends.get(i - 1).map_or(0, |e| *e as usize) };
        self.ends.get(i).and_then(|end| self.text.get(from..*end as usize)).unwrap_or("")
    }
    /// Number of names.
    pub fn len(&self) -> usize {
        self.ends.len()
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.ends.is_empty()
    }
    fn append(&mut self, other: &Self) {
        let shift = u32::try_from(self.text.len()).unwrap_or(u32::MAX);
        self.text.push_str(&other.text);
        self.ends.extend(other.ends.iter().map(|end| end + shift));
    }
}

/// A column of numbers, NaN where unknown. As long as nothing is known it takes no room.
#[derive(Clone, Debug, Default)]
pub struct Numbers {
    /// Empty while every number is unknown, else one for each unit.
    known: Vec<f64>,
    len: usize,
    room: usize,
}

impl Numbers {
    /// Number `i`; NaN where it is unknown.
    #[inline]
    pub fn get(&self, i: usize) -> f64 {
        self.known.get(i).copied().unwrap_or(f64::NAN)
    }
    fn reserve(&mut self, more: usize) {
        self.room = self.len + more;
    }
    #[inline]
    fn push(&mut self, number: f64) {
        if !self.known.is_empty() || !number.is_nan() {
            self.fill();
            self.known.push(number);
        }
        self.len += 1;
    }
    fn set(&mut self, i: usize, number: f64) {
        if number.to_bits() != self.get(i).to_bits() {
            self.room = self.len;
            self.fill();
            self.known[i] = number;
        }
    }
    /// Makes the numbers that stand for nothing so far.
    #[inline]
    fn fill(&mut self) {
        if self.known.len() < self.len || self.known.capacity() == 0 {
            self.known.reserve(self.room);
            self.known.resize(self.len, f64::NAN);
        }
    }
    fn append(&mut self, other: &mut Self) {
        if !self.known.is_empty() || !other.known.is_empty() {
            self.fill();
            other.fill();
            self.known.append(&mut other.known);
        }
        self.len += other.len;
    }
}

/// Kinds of terminals while columns are filled.
type Kinds = FxHashMap<(i64, u64, u64, u8, u64), u32>;

macro_rules! columns {
    ($($name:ident),+) => {
        /// A fleet in columns. The fields are named as the columns of `Unit`.
        #[derive(Clone, Debug, Default)]
        #[expect(missing_docs, reason = "named as the columns of `Unit`, whose facts say what they are")]
        pub struct FleetColumns {
            /// Identifiers.
            pub unit: Names,
            /// Row of the unit in the book.
            pub row: Vec<i64>,
            /// Whether it is in service.
            pub in_service: Vec<bool>,
            /// Index of the load profile; `u32::MAX` = none.
            pub profile: Vec<u32>,
            /// Where they stand; "" = unknown.
            pub site: Names,
            /// Index into `terminals`.
            pub kind: Vec<u32>,
            /// The kinds of terminals that occur.
            pub terminals: Vec<Terminals>,
            pub winding_metal: Vec<Option<WindingMetal>>,
            pub insulation: Vec<Option<Insulation>>,
            /// Whether blanks are filled from a test report; empty while none is.
            from_test: Vec<bool>,
            $(pub $name: Numbers,)+
            kinds: Kinds,
        }

        /// The names of the columns of numbers.
        pub const NUMBERS: [&str; [$(stringify!($name)),+].len()] = [$(stringify!($name)),+];

        impl UnitFacts {
            /// A unit in service of which only numbers are known, in the order of [`NUMBERS`].
            #[inline]
            pub fn of_numbers([$($name),+]: [f64; NUMBERS.len()]) -> Self {
                Self {
                    in_service: true,
                    profile: u32::MAX,
                    phases: None,
                    winding_metal: None,
                    insulation: None,
                    from_test: false,
                    $($name,)+
                }
            }
        }

        impl FleetColumns {
            /// The facts of unit number `i`.
            #[inline]
            pub fn facts(&self, i: usize) -> UnitFacts {
                UnitFacts {
                    in_service: self.in_service[i],
                    profile: self.profile[i],
                    phases: self.terminals[self.kind[i] as usize].phases,
                    winding_metal: self.winding_metal[i],
                    insulation: self.insulation[i],
                    from_test: self.from_test.get(i).copied().unwrap_or(false),
                    $($name: self.$name.get(i),)+
                }
            }

            /// Makes room for more units.
            pub fn reserve(&mut self, more: usize) {
                self.unit.reserve(more);
                self.row.reserve(more);
                self.in_service.reserve(more);
                self.profile.reserve(more);
                self.site.reserve(more);
                self.kind.reserve(more);
                self.winding_metal.reserve(more);
                self.insulation.reserve(more);
                $(self.$name.reserve(more);)+
            }

            /// Adds a unit.
            pub fn push(
                &mut self,
                unit: &str,
                site: Option<&str>,
                row: i64,
                terminals: Terminals,
                facts: &UnitFacts,
            ) {
                let kind = self.kind_of(terminals);
                self.site.push(site.unwrap_or(""));
                self.unit.push(unit);
                self.row.push(row);
                self.in_service.push(facts.in_service);
                self.profile.push(facts.profile);
                self.kind.push(kind);
                self.winding_metal.push(facts.winding_metal);
                self.insulation.push(facts.insulation);
                $(self.$name.push(facts.$name);)+
            }

            /// Adds all units of another part of the same fleet behind the own ones.
            pub fn append(&mut self, mut other: Self) {
                let kinds: Vec<u32> = other.terminals.iter().map(|t| self.kind_of(*t)).collect();
                self.site.append(&other.site);
                self.unit.append(&other.unit);
                self.row.append(&mut other.row);
                self.in_service.append(&mut other.in_service);
                self.profile.append(&mut other.profile);
                self.winding_metal.append(&mut other.winding_metal);
                self.insulation.append(&mut other.insulation);
                self.kind.extend(other.kind.iter().map(|kind| kinds[*kind as usize]));
                $(self.$name.append(&mut other.$name);)+
            }
        }
    };
}

columns!(
    rated_kva,
    loss_base_kva,
    no_load_loss_w,
    load_loss_w,
    total_loss_w,
    auxiliary_loss_w,
    auxiliary_hours,
    peak_kva,
    load_factor_pu,
    loss_factor_pu,
    load_growth_pct,
    responsibility_pu,
    energised_hours,
    power_factor,
    year_made,
    failure_cost,
    removal_cost,
    scrap_value,
    customers,
    impedance_pct
);

impl FleetColumns {
    /// Number of units.
    pub fn len(&self) -> usize {
        self.kind.len()
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.kind.is_empty()
    }

    /// Takes the losses and impedance of unit number `i` from its record, filled from a test report.
    pub fn take_test(&mut self, i: usize, filled: &Unit) {
        self.from_test.resize(self.len(), false);
        self.from_test[i] = true;
        for (column, value) in [
            (&mut self.no_load_loss_w, filled.no_load_loss_w),
            (&mut self.load_loss_w, filled.load_loss_w),
            (&mut self.loss_base_kva, filled.loss_base_kva),
            (&mut self.impedance_pct, filled.impedance_pct),
        ] {
            column.set(i, value.unwrap_or(f64::NAN));
        }
    }

    /// Site of unit number `i`.
    pub fn site(&self, i: usize) -> Option<&str> {
        Some(self.site.get(i)).filter(|site| !site.is_empty())
    }

    fn kind_of(&mut self, t: Terminals) -> u32 {
        let volts = |v: Option<f64>| v.map_or(u64::MAX, f64::to_bits);
        let key = (
            t.phases.unwrap_or(0),
            volts(t.hv_kv),
            volts(t.lv_kv),
            t.clock.unwrap_or(u8::MAX),
            t.rated_kva.to_bits(),
        );
        if let Some(kind) = self.kinds.get(&key) {
            return *kind;
        }
        let next = u32::try_from(self.terminals.len()).unwrap_or(u32::MAX);
        self.terminals.push(t);
        self.kinds.insert(key, next);
        next
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_column_without_a_number_takes_no_room() {
        let nan = f64::NAN;
        let column = |numbers: &[f64]| {
            let mut column = Numbers::default();
            column.reserve(9);
            for number in numbers {
                column.push(*number);
            }
            column
        };
        let all = |c: &Numbers| (0..c.len).map(|i| c.get(i).to_bits()).collect::<Vec<_>>();
        let bits = |numbers: &[f64]| numbers.iter().map(|x| x.to_bits()).collect::<Vec<_>>();
        assert_eq!(column(&[nan, nan]).known.capacity(), 0);
        assert_eq!(all(&column(&[nan, 1.0, nan])), bits(&[nan, 1.0, nan]));
        for (a, b) in
            [(&[nan, nan][..], &[nan][..]), (&[nan], &[2.0]), (&[1.0], &[nan, nan]), (&[], &[3.0])]
        {
            let mut joined = column(a);
            joined.append(&mut column(b));
            assert_eq!(all(&joined), bits(&[a, b].concat()));
        }
    }

    #[test]
    fn names_stand_end_to_end() {
        let mut names = Names::default();
        names.push("T1");
        names.push("");
        let mut more = Names::default();
        more.push("Übergang");
        names.append(&more);
        assert_eq!(
            (names.get(0), names.get(1), names.get(2), names.get(3)),
            ("T1", "", "Übergang", "")
        );
        assert_eq!(names.len(), 3);
    }
}
