//! What ironhum does not compute, told from the vector group: auto-transformers and more than two windings.

/// Why a transformer of this vector group is refused; none where it has two windings, or where the group is not
/// written as IEC 60076-1 writes it (`YNd11`, `Dyn5`, `Ii0`; `+d` marks a stabilising winding, which is none).
pub fn refused(vector_group: &str) -> Option<&'static str> {
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
