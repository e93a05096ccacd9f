//! Binomial coefficients as whole numbers.

/// Rows 0 to 67 of Pascal's triangle: all that fit into 64 bits.
const ROWS: usize = 68;

static PASCAL: [[u64; ROWS]; ROWS] = pascal();

const fn pascal() -> [[u64; ROWS]; ROWS] {
    let mut rows = [[0; ROWS]; ROWS];
    let mut n = 0;
    while n < ROWS {
        rows[n][0] = 1;
        let mut k = 1;
        while k <= n {
            rows[n][k] = rows[n - 1][k - 1] + rows[n - 1][k];
            k += 1;
        }
        n += 1;
    }
    rows
}

/// C(n, k), zero for k outside 0..=n; `None` where the numbers on the way to
/// it leave 128 bits (never for n up to 120).
pub(super) fn binomial(n: i64, k: i64) -> Option<i128> {
    if k < 0 || k > n {
        return Some(0);
    }
    let row = usize::try_from(n).ok().and_then(|n| PASCAL.get(n));
    let entry = row.zip(usize::try_from(k).ok()).and_then(|(row, k)| row.get(k));
    entry.map_or_else(|| product(n, k.min(n - k)), |entry| Some(i128::from(*entry)))
}

/// C(n, k) factor by factor: every partial product is itself a binomial
/// coefficient, so the divisions leave no rest.
fn product(n: i64, k: i64) -> Option<i128> {
    let mut value = 1_i128;
    for step in 1..=k {
        // C(n, k) is at least 2^k on this side of the middle: whatever n is,
        // the product is done or too large after 127 steps.
        value = value.checked_mul(i128::from(n - k + step))? / i128::from(step);
    }
    Some(value)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pascals_rule_and_sums_of_rows() {
        for n in 1..=120 {
            let mut sum = 0;
            for k in 0..=n {
                let entry = binomial(n, k).unwrap();
                let above = binomial(n - 1, k - 1).unwrap() + binomial(n - 1, k).unwrap();
                assert_eq!(entry, above, "C({n}, {k})");
                assert_eq!(entry, product(n, k.min(n - k)).unwrap(), "C({n}, {k})");
                sum += entry;
            }
            assert_eq!(sum, 1 << n);
        }
    }

    #[test]
    fn outside_the_triangle_and_beyond_128_bits() {
        for (n, k) in [(5, -1), (5, 6), (0, 1), (200, 201), (-1, 0)] {
            assert_eq!(binomial(n, k), Some(0), "C({n}, {k})");
        }
        assert_eq!(binomial(10_000_000_000, 2), Some(49_999_999_995_000_000_000));
        assert_eq!(binomial(10_000_000_000, 5_000_000_000), None);
        assert_eq!(binomial(i64::MAX, 3), None);
    }
}
