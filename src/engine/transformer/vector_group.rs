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
    match super::windings::refused(vector_group.trim()) {
        Some(why) => Err(Refusal::new("vector_group", vector_group, why)),
        None => Ok(()),
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
    fn other_kinds_are_refused_by_name() {
        for group in ["Dyn11", "YNd5", "Yzn5", "Ii0", " Yy0 "] {
            assert!(two_windings(group).is_ok(), "{group}");
        }
        assert!(two_windings("YNa0").expect_err("auto").why.contains("auto-transformer"));
        assert!(
            two_windings("YNyn0d11").expect_err("three").why.contains("three or more windings")
        );
    }
}
