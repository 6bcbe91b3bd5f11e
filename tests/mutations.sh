#!/usr/bin/env bash
# Breaks the formulas one at a time, in a copy of the tree, and shows which checks fail. Ends with an error when a break goes
# unnoticed. Not part of the ordinary tests: it takes a minute or two for each.
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
    "theta-e: 1.78 to 17.8|pseudoadiabat.rs|s/1\.78/17.8/g"
    "theta-e: 0.448 to 0.81 (eq. 38's)|pseudoadiabat.rs|s/0\.448/0.81/g; s/0\.896/1.62/g"
    "eps: ratio of the gas constants to 0.622|constants.rs|s|= GAS_CONSTANT_DRY / GAS_CONSTANT_VAPOUR|= 0.622|"
    "Rd: 287.05 to 287.5|constants.rs|s/287\.05/287.5/"
    "kappa: 0.2854 to 0.2857|constants.rs|s/0\.2854/0.2857/"
    "g: 9.80665 to 9.81|constants.rs|s/9\.80665/9.81/"
    "eq. 10: 611.2 to 610.78 Pa|saturation.rs|s/E0: f64 = 611\.2/E0: f64 = 610.78/"
    "eq. 10: 243.5 to 243.04|saturation.rs|s/B: f64 = 243\.5/B: f64 = 243.04/"
    "over ice: 22.46 to 22.0|saturation.rs|s/22\.46 \* c/22.0 * c/"
    "eq. 15: 56 to 55|air.rs|s/td - 56\.0/td - 55.0/g; s/800\.0) + 56\.0/800.0) + 55.0/g"
    "dry ascent: exponent without vapour|air.rs|s/KAPPA \* (1\.0 - 0\.28 \* w)/KAPPA * (1.0 - 0.0 * w)/"
    "CIN: sign|lift.rs|s/let cin = GAS_CONSTANT_DRY \* negative/let cin = -GAS_CONSTANT_DRY * negative/"
    "LFC: of the smallest layer|lift.rs|s/area > other/area < other/"
    "CAPE: only the highest layer|lift.rs|s/cape: buoyant\.iter()/cape: buoyant.iter().rev().take(1)/"
    "mixed layer: moisture weighted by the foot of its step|column.rs|s/gauss4(a, a + h, .z. segment\.mixing_ratio(z) \* exp(-z))/gauss4(a, a + h, |z| segment.mixing_ratio(z) * exp(-za))/; s/720\.0 \* 1e-11/-1.0/"
    "mixed layer: depth 99 hPa|parcels.rs|s/pressure\.pa() - depth\.pa()/pressure.pa() - 0.99 * depth.pa()/"
    "areas: end correction 1/12 to 1/10|numeric.rs|s|h \* (1\.0 / 12\.0)|h * (1.0 / 10.0)|"
    "environment: no virtual correction|column.rs|s/LIGHTER: f64 = 1\.0 - EPSILON/LIGHTER: f64 = 0.0/"
    "a parcel of vapour alone is let in|path.rs|s/e >= 0\.5 \* p/e >= 5.0 * p/"
    "ice: latent heat of fusion to 3.0e5|lapse.rs|s/3\.337e5/3.0e5/"
    "reversible: weight of condensate left out|lapse.rs|s|t \* (1\.0 + vapour / EPSILON) / (1\.0 + total)|t * (1.0 + vapour / EPSILON) / (1.0 + vapour)|"
)

# The tree as it stands, tracked files only.
git -C "$root" ls-files -z | tar -C "$root" --null -T - -cf - | tar -C "$work" -xf -
cd "$work"

failing() {
    # Names of failing tests, and the first failing lines of the table.
    cargo test -p dewbound-thermo --no-fail-fast >thermo.log 2>&1 || true
    cargo test -p dewbound-tests --test accuracy >accuracy.log 2>&1 || true
    if ! grep -q '^test result' thermo.log || ! grep -q '^accuracy: [0-9]* of' accuracy.log; then
        tail -30 thermo.log accuracy.log >&2
        echo "the tests did not run" >&2
        exit 2
    fi
    thermo=$(sed -n 's/^test \(.*\) \.\.\. FAILED$/\1/p' thermo.log | sed 's/ (line [0-9]*)//; s|crates/thermo/src/||' | sort -u)
    accuracy=$(sed -n 's/^FAILED //p' accuracy.log)
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
