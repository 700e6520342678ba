//! Vector groups: the clock number, which ones can stand for each other, and which are not computed with.

use crate::engine::Refusal;

/// The clock number at the end of a vector group like `Dyn11`; none where there is none up to 11.
pub fn clock(vector_group: &str) -> Option<u8> {
    let digits = vector_group.trim().trim_start_matches(|c: char| !c.is_ascii_digit());
    digits.parse().ok().filter(|hour: &u8| *hour < 12)
}

/// Whether two clock numbers can be matched at the terminals.
///
/// Equal; or apart by 4 or 8 (relabelling the phases); or both odd (crossing two phases on both sides maps n
/// to 12 − n). Otherwise never. Source: common practice of paralleling, no source.
pub fn clocks_match(a: u8, b: u8) -> bool {
    a == b || matches!(a.abs_diff(b), 4 | 8) || (a % 2 == 1 && b % 2 == 1)
}

/// Whether two vector groups can be matched; blank or unreadable ones agree with all.
pub fn agree(a: Option<&str>, b: Option<&str>) -> bool {
    match (a.and_then(clock), b.and_then(clock)) {
        (Some(a), Some(b)) => clocks_match(a, b),
        _ => true,
    }
}

/// Number of phases of a vector group: `D`, `Y` and `Z` windings are of three phases, `I` of one.
pub fn phases(vector_group: &str) -> Option<i64> {
    match vector_group.trim().chars().next()?.to_ascii_uppercase() {
        'D' | 'Y' | 'Z' => Some(3),
        'I' => Some(1),
        _ => None,
    }
}

/// Refuses the vector groups of auto-transformers (`YNa0`, `Ia0`) and of three-winding units (`YNyn0d11`).
///
/// # Errors
/// Such a group: the methods hold for two separate windings.
pub fn two_windings(vector_group: &str) -> Result<(), Refusal> {
    match refused(vector_group) {
        Some(why) => Err(Refusal::new("vector_group", vector_group, why)),
        None => Ok(()),
    }
}

/// Why a transformer of this vector group is refused; none where it has two windings, or where the group is not
/// written as IEC 60076-1 writes it (`YNd11`, `Dyn5`, `Ii0`; `+d` marks a stabilising winding, which is none).
fn refused(vector_group: &str) -> Option<&'static str> {
    let text: String =
        vector_group.chars().filter(|c| !matches!(c, ' ' | '-' | '/' | ',')).collect();
    let rest = text.strip_prefix(['Y', 'D', 'Z', 'I'])?;
    let rest = rest.strip_prefix('N').unwrap_or(rest).to_ascii_lowercase();
    let (mut rest, mut lower, mut is_auto) = (rest.as_str(), 0, false);
    while !rest.is_empty() {
        rest = match rest.strip_prefix("auto").or_else(|| rest.strip_prefix('a')) {
            Some(rest) => {
                is_auto = true;
                rest
            }
            None => rest.strip_prefix(['y', 'd', 'z', 'i'])?,
        };
        rest =
            rest.strip_prefix('n').unwrap_or(rest).trim_start_matches(|c: char| c.is_ascii_digit());
        lower += 1;
    }
    match (is_auto, lower) {
        (true, _) => Some("is an auto-transformer; ironhum computes two-winding transformers"),
        (false, 2..) => {
            Some("has three or more windings; ironhum computes two-winding transformers")
        }
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn clocks() {
        assert_eq!(clock("Dyn11"), Some(11));
        assert_eq!(clock("YNd5"), Some(5));
        assert_eq!(clock("Yy0"), Some(0));
        assert_eq!(clock("Dyn"), None);
        assert_eq!(clock("Dyn13"), None);
        assert!(
            clocks_match(11, 5) && clocks_match(1, 11) && clocks_match(0, 4) && clocks_match(2, 10)
        );
        assert!(
            !clocks_match(0, 1)
                && !clocks_match(0, 6)
                && !clocks_match(11, 0)
                && !clocks_match(2, 4)
        );
        assert!(agree(Some("Dyn11"), None) && agree(Some("odd"), Some("Dyn11")));
        assert!(!agree(Some("Dyn11"), Some("Yyn0")));
    }

    #[test]
    fn phases_are_read_from_the_vector_group() {
        assert_eq!([phases("Dyn11"), phases(" yzn5"), phases("Ii0")], [Some(3), Some(3), Some(1)]);
        assert_eq!([phases(""), phases("11")], [None, None]);
    }

    #[test]
    fn only_two_windings_pass() {
        for fits in
            ["Dyn11", "YNd5", "Yzn5", "Ii0", "Yy0", "YNyn0", "DYN11", "Dd0", "YNyn0+d", "Yyn"]
        {
            assert_eq!(refused(fits), None, "{fits}");
        }
        for unreadable in ["", "standard", "delta-wye", "Yard", "11", "Dyn11 (auto-fill)"] {
            assert_eq!(refused(unreadable), None, "{unreadable}");
        }
        for auto in ["YNa0", "YNauto", "Ia0", "YNa0d11", "YNAUTO"] {
            assert!(refused(auto).is_some_and(|why| why.contains("auto")), "{auto}");
        }
        for three in ["YNyn0d11", "YNyn0-d11", "Dyn11yn11", "Ii0i0", "YNd11d11", "YNynd"] {
            assert!(refused(three).is_some_and(|why| why.contains("three")), "{three}");
        }
    }
}
