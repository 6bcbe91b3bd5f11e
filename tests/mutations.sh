#!/usr/bin/env bash
# Breaks the formulas one at a time, in a copy of the tree, and shows which checks fail: the tests of thermo and the table of
# accuracy (without real soundings). Ends with an error when a break goes unnoticed. Not part of the ordinary tests.
#
#   tests/mutations.sh              every mutation, as a table for DEVELOPERS.md
#   tests/mutations.sh WORD         those with WORD in their name
#
# Builds in target/mutations (or $MUTATIONS_TARGET).
set -euo pipefail
root=$(cd "$(dirname "$0")/.." && pwd)
only=${1:-}
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
export CARGO_TARGET_DIR=${MUTATIONS_TARGET:-$root/target/mutations}
export CARGO_TERM_COLOR=never

# What is broken | file | edit by sed. Every edit must change its file.
mutations=(
    "theta-e: 3036 to 3030|pseudoadiabat.rs|s/3036\.0/3030.0/g"
    "eps: ratio of the gas constants to 0.622|constants.rs|s|= GAS_CONSTANT_DRY / GAS_CONSTANT_VAPOUR|= 0.622|"
    "CIN: sign|lift.rs|s/let cin = GAS_CONSTANT_DRY \* negative/let cin = -GAS_CONSTANT_DRY * negative/"
    "mixed layer: moisture weighted by the foot of its step|column.rs|s/gauss4(a, a + h, .z. segment\.mixing_ratio(z) \* exp(-z))/gauss4(a, a + h, |z| segment.mixing_ratio(z) * exp(-za))/; s/720\.0 \* 1e-11/-1.0/"
    "eq. 10: 611.2 to 610.78 Pa|saturation.rs|s/E0: f64 = 611\.2/E0: f64 = 610.78/"
    "eq. 15: 56 to 55|air.rs|s/ - 56\.0/ - 55.0/g; s/+ 56\.0/+ 55.0/g"
    "Rd: 287.05 to 287.5|constants.rs|s/287\.05/287.5/"
    "g: 9.80665 to 9.81|constants.rs|s/9\.80665/9.81/"
    "kappa: 0.2854 to 0.2857|constants.rs|s/0\.2854/0.2857/"
    "theta-e: 1.78 to 17.8|pseudoadiabat.rs|s/1\.78/17.8/g"
    "areas: end correction 1/12 to 1/10|numeric.rs|s|h \* (1\.0 / 12\.0)|h * (1.0 / 10.0)|"
    "a parcel of vapour alone is let in|path.rs|s/e >= 0\.5 \* p/e >= 5.0 * p/"
    "mixed layer: depth 99 hPa|parcels.rs|s/from_pa(pressure\.pa() - depth\.pa())/from_pa(pressure.pa() - 0.99 * depth.pa())/"
    "LFC: of the smallest layer|lift.rs|s/area > other/area < other/"
    "reversible: weight of condensate left out|lapse.rs|s|t \* (1\.0 + vapour / EPSILON) / (1\.0 + total)|t * (1.0 + vapour / EPSILON) / (1.0 + vapour)|"
    "ice: latent heat of fusion to 3.0e5|lapse.rs|s/3\.337e5/3.0e5/"
    "over ice: 22.46 to 22.0|saturation.rs|s/22\.46 \* c/22.0 * c/"
    "theta-e: 0.448 to 0.81 (eq. 38's)|pseudoadiabat.rs|s/0\.448/0.81/g; s/0\.896/1.62/g"
    "eq. 10: 243.5 to 243.04|saturation.rs|s/B: f64 = 243\.5/B: f64 = 243.04/"
    "dry ascent: exponent without vapour|air.rs|s/KAPPA \* (1\.0 - 0\.28 \* w)/KAPPA * (1.0 - 0.0 * w)/"
    "CAPE: only the highest layer|lift.rs|s/cape: buoyant\.iter()/cape: buoyant.iter().rev().take(1)/"
    "environment: no virtual correction|column.rs|s/LIGHTER: f64 = 1\.0 - EPSILON/LIGHTER: f64 = 0.0/"
)

# The tree as it stands, tracked files only; of its crates thermo and the table alone, so that a break is built in seconds.
git -C "$root" ls-files -z | tar -C "$root" --null -T - -cf - | tar -C "$work" -xf -
cd "$work"
# What was broken in an earlier run is newer than the tree: without this its build would count as up to date.
find crates tests -name '*.rs' -exec touch {} +
sed -i 's|^members = .*|members = ["crates/thermo", "tests"]|; s|^default-members.*||' Cargo.toml
sed -i -E '/dewbound-(formats|session|sounding|trust)|^(jiff|tempfile|cargo_metadata|serde_json|approx)/d; /^\[\[bin\]\]/,$d' tests/Cargo.toml
rm -r tests/src/*.rs tests/src/demo tests/tests/*.rs
for module in reference residuals slow_parcel; do
    cp "$root/tests/src/$module.rs" tests/src/
    echo "pub mod $module;" >>tests/src/lib.rs
done
sed -i '/^mod real;/d; /real::ascents/d' tests/tests/accuracy/main.rs
rm tests/tests/accuracy/real.rs

failing() {
    cargo test --workspace --no-fail-fast >log 2>&1 || true
    if ! grep -q '^test result' log || ! grep -q '^accuracy: [0-9]* of' log; then
        tail -40 log >&2
        echo "the tests did not run" >&2
        exit 2
    fi
    thermo=$(sed -n 's/^test \(.*\) \.\.\. FAILED$/\1/p' log | sed 's/ (line [0-9]*)//; s|crates/thermo/src/||' | sort -u)
    accuracy=$(sed -n 's/^FAILED //p' log)
}

count() { grep -c . <<<"$1" || true; }

first() { # the first two lines, and how many more
    local all=$1 n
    n=$(count "$all")
    head -2 <<<"$all" | paste -sd ';' | sed 's/;/; /'
    ((n <= 2)) || echo "and $((n - 2)) more"
}

failing
if [[ -n $thermo$accuracy ]]; then
    printf 'fails before anything is broken:\n%s\n%s\n' "$thermo" "$accuracy" >&2
    exit 2
fi

echo "| broken | failing tests of thermo | failing lines of the table |"
echo "|---|---|---|"
unnoticed=()
for mutation in "${mutations[@]}"; do
    name=${mutation%%|*}
    rest=${mutation#*|}
    file=crates/thermo/src/${rest%%|*}
    edit=${rest#*|}
    [[ $name == *"$only"* ]] || continue
    cp "$file" original
    sed -i "$edit" "$file"
    if cmp -s original "$file"; then
        echo "no longer applies: $name" >&2
        exit 2
    fi
    failing
    echo "| $name | $(first "$thermo" | paste -sd ' ') | $(first "$accuracy" | paste -sd ' ') |"
    [[ -n $thermo$accuracy ]] || unnoticed+=("$name")
    # With a time of its own, or the broken build would count as up to date.
    cp original "$file"
    touch "$file"
done
if ((${#unnoticed[@]})); then
    printf 'UNNOTICED: %s\n' "${unnoticed[@]}" >&2
    exit 1
fi
