//! Small finite rings with unit, for affine maps.

use std::sync::OnceLock;

/// A finite ring with unit: 0 is its zero, and the tables have the second argument fastest.
pub(super) struct Ring {
    pub size: usize,
    pub one: u8,
    add: Box<[u8]>,
    multiply: Box<[u8]>,
}

impl Ring {
    #[inline]
    pub(super) fn add(&self, a: u8, b: u8) -> u8 {
        self.add[usize::from(a) * self.size + usize::from(b)]
    }

    #[inline]
    pub(super) fn multiply(&self, a: u8, b: u8) -> u8 {
        self.multiply[usize::from(a) * self.size + usize::from(b)]
    }

    fn new(
        size: usize,
        one: usize,
        add: impl Fn(usize, usize) -> usize,
        multiply: impl Fn(usize, usize) -> usize,
    ) -> Self {
        let pairs = || (0..size * size).map(|pair| (pair / size, pair % size));
        Ring {
            size,
            one: one as u8,
            add: pairs().map(|(a, b)| add(a, b) as u8).collect(),
            multiply: pairs().map(|(a, b)| multiply(a, b) as u8).collect(),
        }
    }

    /// The integers modulo a number.
    pub(super) fn modulo(size: usize) -> Self {
        Ring::new(size, 1 % size, |a, b| (a + b) % size, |a, b| a * b % size)
    }

    /// The polynomials over the integers modulo `prime`, modulo the polynomial
    /// x^k + … with these lower coefficients, the constant one first. An element is the number
    /// whose digits are its coefficients.
    fn polynomials(prime: usize, lower: &[usize]) -> Self {
        let degree = lower.len();
        let size = prime.pow(degree as u32);
        let digits = |mut number: usize| -> Vec<usize> {
            let mut digit = || {
                let last = number % prime;
                number /= prime;
                last
            };
            (0..degree).map(|_| digit()).collect()
        };
        let number = |digits: &[usize]| digits.iter().rev().fold(0, |all, d| all * prime + d);
        let add = |a: usize, b: usize| {
            let sums: Vec<usize> = digits(a)
                .iter()
                .zip(digits(b))
                .map(|(a, b)| (a + b) % prime)
                .collect();
            number(&sums)
        };
        let multiply = |a: usize, b: usize| {
            let mut product = vec![0; 2 * degree];
            for (i, a) in digits(a).iter().enumerate() {
                for (j, b) in digits(b).iter().enumerate() {
                    product[i + j] = (product[i + j] + a * b) % prime;
                }
            }
            for high in (degree..2 * degree).rev() {
                let factor = std::mem::take(&mut product[high]);
                for (place, coefficient) in lower.iter().enumerate() {
                    let target = &mut product[high - degree + place];
                    *target = (*target + factor * (prime - coefficient)) % prime;
                }
            }
            number(&product[..degree])
        };
        Ring::new(size, 1, add, multiply)
    }

    /// The 2 × 2 matrices over the integers modulo 2; the bits of a number are the entries.
    fn matrices() -> Self {
        let entry = |m: usize, row: usize, column: usize| m >> (2 * row + column) & 1;
        let multiply = |a: usize, b: usize| {
            let one = |row, column| {
                entry(a, row, 0) & entry(b, 0, column) ^ entry(a, row, 1) & entry(b, 1, column)
            };
            one(0, 0) | one(0, 1) << 1 | one(1, 0) << 2 | one(1, 1) << 3
        };
        Ring::new(16, 0b1001, |a, b| a ^ b, multiply)
    }
}

/// All rings that the pool uses, in the order in which it uses them: the integers modulo 2 to 11,
/// which is where most counterexamples are; then fields and others.
pub(super) fn rings() -> &'static [Ring] {
    static RINGS: OnceLock<Vec<Ring>> = OnceLock::new();
    RINGS.get_or_init(|| {
        let mut rings: Vec<Ring> = (2..=11).map(Ring::modulo).collect();
        rings.push(Ring::polynomials(2, &[1, 1]));
        rings.push(Ring::modulo(13));
        rings.push(Ring::polynomials(2, &[1, 1, 0]));
        rings.push(Ring::polynomials(3, &[1, 0]));
        rings.push(Ring::matrices());
        rings.extend([12, 14, 15, 16, 17, 19, 23].map(Ring::modulo));
        rings.push(Ring::polynomials(2, &[1, 1, 0, 0]));
        rings
    })
}

#[cfg(test)]
mod tests {
    use super::rings;

    #[test]
    fn they_are_rings_with_unit() {
        for ring in rings() {
            let all = || 0..ring.size as u8;
            for a in all() {
                assert_eq!(ring.add(0, a), a);
                assert_eq!(ring.multiply(ring.one, a), a);
                assert_eq!(ring.multiply(a, ring.one), a);
                assert!(all().any(|b| ring.add(a, b) == 0));
                for b in all() {
                    assert_eq!(ring.add(a, b), ring.add(b, a));
                    for c in all() {
                        let (add, multiply) = (|a, b| ring.add(a, b), |a, b| ring.multiply(a, b));
                        assert_eq!(add(add(a, b), c), add(a, add(b, c)));
                        assert_eq!(multiply(multiply(a, b), c), multiply(a, multiply(b, c)));
                        assert_eq!(multiply(a, add(b, c)), add(multiply(a, b), multiply(a, c)));
                        assert_eq!(multiply(add(a, b), c), add(multiply(a, c), multiply(b, c)));
                    }
                }
            }
        }
    }

    #[test]
    fn the_polynomial_rings_are_fields() {
        for ring in rings()
            .iter()
            .filter(|ring| [4, 8, 9].contains(&ring.size))
            .skip(3)
        {
            for a in 1..ring.size as u8 {
                let inverse = (1..ring.size as u8).any(|b| ring.multiply(a, b) == ring.one);
                assert!(inverse, "{a} has no inverse among {}", ring.size);
            }
        }
    }
}
