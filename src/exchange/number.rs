//! Numbers as people write them: which sign is the decimal sign, and when a comma or point could also group
//! thousands. What could be read in two ways is refused, never guessed.

use std::borrow::Cow;

use super::recognise::{Decimal, Delimiter};

/// What a written number says about the decimal sign.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Says {
    /// Nothing: no comma, no point, or not a number at all.
    Nothing,
    /// This sign, for certain.
    Sign(Decimal),
    /// The comma or the point parts three digits from up to three: decimals or thousands.
    Either,
}

/// Reads a written number: `1.234` and `1,234` could mean two things, `12,5` and `0,125` only one.
fn says(text: &str) -> Says {
    let digits = text.strip_prefix(['+', '-']).unwrap_or(text);
    let (digits, power) = digits.split_once(['e', 'E']).unwrap_or((digits, "0"));
    if power.parse::<i32>().is_err() {
        return Says::Nothing;
    }
    if !digits.bytes().all(|b| b.is_ascii_digit() || b == b',' || b == b'.') {
        return Says::Nothing;
    }
    let (commas, points) = (digits.matches(',').count(), digits.matches('.').count());
    match (commas, points) {
        (0, 0) => Says::Nothing,
        (1, 0) | (0, 1) => {
            let (sign, at) =
                if commas == 1 { (Decimal::Comma, ',') } else { (Decimal::Point, '.') };
            let (whole, part) = digits.split_once(at).unwrap_or_default();
            let groups =
                part.len() == 3 && (1..=3).contains(&whole.len()) && !whole.starts_with('0');
            if groups { Says::Either } else { Says::Sign(sign) }
        }
        // Several of one sign group thousands, so the other one is the decimal sign.
        (_, 0) => Says::Sign(Decimal::Point),
        (0, _) => Says::Sign(Decimal::Comma),
        // Both: the last one is the decimal sign.
        _ if digits.rfind(',') > digits.rfind('.') => Says::Sign(Decimal::Comma),
        _ => Says::Sign(Decimal::Point),
    }
}

/// The decimal sign of a file, decided by the first numbers that leave no doubt.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Decimals {
    sign: Option<Decimal>,
    /// Whether a lone point between digits is a decimal point until a number says otherwise.
    point_is_safe: bool,
}

impl Decimals {
    /// Numbers of a workbook or a TOML file: a point, always.
    pub const POINT: Self = Self { sign: Some(Decimal::Point), point_is_safe: true };

    /// Nothing decided yet. Where commas part the cells, a point in a number is a decimal point.
    pub(super) fn undecided(delimiter: Delimiter) -> Self {
        Self { sign: None, point_is_safe: delimiter == Delimiter::Comma }
    }

    /// Decided by the caller.
    pub(super) fn of(sign: Decimal) -> Self {
        Self { sign: Some(sign), point_is_safe: false }
    }

    /// Decided by the numbers of a file's head: what most of the clear ones say.
    pub(super) fn weigh<'a>(self, numbers: impl Iterator<Item = &'a str>) -> Self {
        let (mut points, mut commas) = (0_usize, 0_usize);
        for text in numbers {
            match says(text.trim()) {
                Says::Sign(Decimal::Point) => points += 1,
                Says::Sign(Decimal::Comma) => commas += 1,
                Says::Nothing | Says::Either => {}
            }
        }
        match (points, commas) {
            (0, 0) => self,
            _ if commas > points => Self::of(Decimal::Comma),
            _ => Self::of(Decimal::Point),
        }
    }

    /// The sign, where one was decided.
    pub fn sign(self) -> Option<Decimal> {
        self.sign
    }

    /// The number with a point as its decimal sign, for [`Column::read`](crate::engine::columns::Column::read).
    ///
    /// # Errors
    /// Why the text could be read in two ways, or goes against the sign of the file.
    pub fn plain<'a>(&mut self, text: &'a str) -> Result<Cow<'a, str>, String> {
        let text = text.trim();
        let signs = |sign: u8| text.bytes().filter(|byte| *byte == sign).count();
        let (commas, points) = (signs(b','), signs(b'.'));
        let is_clear = self.sign == Some(Decimal::Point) && points == 1;
        if commas == 0 && (points == 0 || is_clear) {
            return Ok(Cow::Borrowed(text));
        }
        if self.sign.is_none() {
            match says(text) {
                Says::Sign(sign) => self.sign = Some(sign),
                Says::Either if self.point_is_safe && text.contains('.') => {}
                Says::Either => {
                    return Err(
                        "could mean thousands or decimals, and no other number of the file tells; \
                         say which with --decimal point or --decimal comma"
                            .to_owned(),
                    );
                }
                Says::Nothing => return Ok(Cow::Borrowed(text)),
            }
        }
        let (sign, other, name) = match self.sign {
            Some(Decimal::Comma) => (',', '.', "comma"),
            _ => ('.', ',', "point"),
        };
        if says(text) == Says::Nothing {
            return Ok(Cow::Borrowed(text));
        }
        if text.contains(other) || text.matches(sign).count() > 1 {
            let grouped = says(text) == Says::Either || commas + points > 1;
            return Err(if grouped {
                format!(
                    "has a sign that may group thousands; write it without (the decimal sign of this file is the {name})"
                )
            } else {
                format!("is not a number: the decimal sign of this file is the {name}")
            });
        }
        Ok(if sign == ',' { Cow::Owned(text.replace(',', ".")) } else { Cow::Borrowed(text) })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_a_number_says() {
        for (text, wanted) in [
            ("1234", Says::Nothing),
            ("12,5", Says::Sign(Decimal::Comma)),
            ("0,125", Says::Sign(Decimal::Comma)),
            ("1234,567", Says::Sign(Decimal::Comma)),
            ("12.5", Says::Sign(Decimal::Point)),
            ("-.5", Says::Sign(Decimal::Point)),
            ("1,234", Says::Either),
            ("-1.234", Says::Either),
            ("1,234,567", Says::Sign(Decimal::Point)),
            ("1.234,5", Says::Sign(Decimal::Comma)),
            ("1,234.5", Says::Sign(Decimal::Point)),
            ("1,2E+03", Says::Sign(Decimal::Comma)),
            ("1,2 kVA", Says::Nothing),
            ("Dyn11,", Says::Nothing),
        ] {
            assert_eq!(says(text), wanted, "{text}");
        }
    }

    #[test]
    fn a_clear_number_decides_the_doubtful_ones() {
        let mut comma =
            Decimals::undecided(Delimiter::Semicolon).weigh(["1,234", "12,5"].into_iter());
        assert_eq!(comma.plain("1,234").as_deref(), Ok("1.234"));
        assert!(comma.plain("1.234").expect_err("thousands").contains("group thousands"));
        assert!(comma.plain("1.5").expect_err("point").contains("is the comma"));
        let mut point = Decimals::undecided(Delimiter::Comma);
        assert_eq!(point.plain("1.234").as_deref(), Ok("1.234"));
        assert!(point.plain("1,234").expect_err("thousands").contains("thousands or decimals"));
        assert_eq!(point.plain("1.5").as_deref(), Ok("1.5"));
        assert!(point.plain("1,234").expect_err("thousands").contains("group thousands"));
        assert!(point.plain("1,5").expect_err("comma").contains("is the point"));
        let mut none = Decimals::undecided(Delimiter::Semicolon);
        assert!(none.plain("1.250").expect_err("either").contains("--decimal"));
        assert_eq!(none.plain("1250").as_deref(), Ok("1250"));
        assert_eq!(none.plain("x").as_deref(), Ok("x"));
    }
}
