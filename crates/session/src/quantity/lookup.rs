//! A number by its name, as people write it.

use super::{Quantity, all};
use thiserror::Error;

/// There is no number of that name.
#[derive(Debug, Clone, Error)]
#[error("no number is called \"{name}\"{}", self.suggestion())]
pub struct NotFound {
    /// As asked.
    pub name: String,
    /// Numbers whose names come near, nearest first.
    pub near: Vec<&'static Quantity>,
}

impl NotFound {
    fn suggestion(&self) -> String {
        if self.near.is_empty() {
            return String::new();
        }
        let keys: Vec<&str> = self.near.iter().map(|quantity| quantity.key).collect();
        format!("; near it: {}", keys.join(", "))
    }
}

/// Most names suggested.
const MOST_NEAR: usize = 5;

/// The number with this key (with or without its unit) or label; capitals, spaces and punctuation don't matter.
pub fn find(name: &str) -> Result<&'static Quantity, NotFound> {
    let asked = plain(name);
    let exact = |name: fn(&Quantity) -> String| all().find(|quantity| name(quantity) == asked);
    let found = exact(|quantity| plain(quantity.key))
        .or_else(|| exact(|quantity| plain(quantity.label)))
        .or_else(|| exact(|quantity| plain(stem(quantity))));
    found.ok_or_else(|| NotFound {
        name: name.to_owned(),
        near: near(&asked),
    })
}

/// Key without its unit.
fn stem(quantity: &Quantity) -> &'static str {
    let suffix = quantity.unit.suffix();
    quantity.key.strip_suffix(suffix).unwrap_or(quantity.key)
}

fn plain(name: &str) -> String {
    name.chars()
        .filter(|c| c.is_alphanumeric())
        .flat_map(char::to_lowercase)
        .collect()
}

/// Names that contain what was asked, then those a few slips away.
fn near(asked: &str) -> Vec<&'static Quantity> {
    if asked.is_empty() {
        return Vec::new();
    }
    let allowed = (asked.chars().count() / 3).clamp(1, 4);
    let mut found: Vec<(usize, &'static Quantity)> = all()
        .filter_map(|quantity| {
            let names = [
                plain(quantity.key),
                plain(quantity.label),
                plain(stem(quantity)),
            ];
            if names.iter().any(|name| name.contains(asked)) {
                return Some((0, quantity));
            }
            let words = quantity.key.split('_').map(str::to_owned);
            let least = names
                .into_iter()
                .chain(words.filter(|word| word.len() > 3))
                .map(|name| slips(asked, &name))
                .min()?;
            (least <= allowed).then_some((least, quantity))
        })
        .collect();
    found.sort_by_key(|(slips, _)| *slips);
    found
        .into_iter()
        .take(MOST_NEAR)
        .map(|(_, quantity)| quantity)
        .collect()
}

/// Letters to be put in, left out or exchanged to make one of the other (Levenshtein distance).
fn slips(a: &str, b: &str) -> usize {
    let b: Vec<char> = b.chars().collect();
    let mut row: Vec<usize> = (0..=b.len()).collect();
    for (i, from) in a.chars().enumerate() {
        let mut diagonal = i;
        let mut left = i + 1;
        for (to, above) in b.iter().zip(row.iter_mut().skip(1)) {
            let exchanged = diagonal + usize::from(from != *to);
            diagonal = *above;
            left = exchanged.min(left + 1).min(diagonal + 1);
            *above = left;
        }
        if let Some(first) = row.first_mut() {
            *first = i + 1;
        }
    }
    row.last().copied().unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_as_people_write_them() {
        for (asked, key) in [
            ("cape_jkg", "cape_jkg"),
            ("CAPE", "cape_jkg"),
            ("cape", "cape_jkg"),
            ("theta-e", "theta_e_k"),
            ("θe", "theta_e_k"),
            ("LCL height", "lcl_m"),
            ("lifted index", "lifted_index_k"),
            ("Precipitable Water", "precipitable_water_mm"),
        ] {
            assert_eq!(find(asked).unwrap().key, key, "{asked}");
        }
    }

    #[test]
    fn near_misses_are_suggested() {
        for (asked, key) in [
            ("precipitabel water", "precipitable_water_mm"),
            ("helicity", "helicity_effective_m2s2"),
            ("lifted_indx", "lifted_index_k"),
            ("helicty", "helicity_effective_m2s2"),
        ] {
            let near = find(asked).unwrap_err().near;
            assert!(near.iter().any(|quantity| quantity.key == key), "{asked}");
            assert!(near.len() <= MOST_NEAR);
        }
        let error = find("xyzzy").unwrap_err();
        assert!(error.near.is_empty());
        assert_eq!(error.to_string(), "no number is called \"xyzzy\"");
        assert!(find("").unwrap_err().near.is_empty());
    }

    #[test]
    fn slips_are_counted() {
        // The textbook example of Levenshtein's distance, and its ends.
        assert_eq!(slips("kitten", "sitting"), 3);
        assert_eq!(slips("", "abc"), 3);
        assert_eq!(slips("abc", ""), 3);
        assert_eq!(slips("same", "same"), 0);
    }
}
