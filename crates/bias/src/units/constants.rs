//! Physical constants. Since the 2019 revision of the SI all of them are exact by definition
//! (CODATA 2022: Mohr, Newell, Taylor & Tiesinga, Rev. Mod. Phys. 97, 025002, 2025).

/// Boltzmann constant in J/K.
pub const BOLTZMANN: f64 = 1.380_649e-23;

/// Avogadro constant in 1/mol.
pub const AVOGADRO: f64 = 6.022_140_76e23;

/// Elementary charge in C, which is also one electronvolt in J.
pub const ELEMENTARY_CHARGE: f64 = 1.602_176_634e-19;

/// Molar gas constant in kJ/(mol K): the Boltzmann constant times the Avogadro constant.
pub const GAS_CONSTANT: f64 = 8.314_462_618_153_24e-3;

/// One electronvolt a particle in kJ/mol: the elementary charge times the Avogadro constant, which is
/// the Faraday constant in kC/mol.
pub const FARADAY: f64 = 96.485_332_123_310_02;

/// Thermochemical calorie in J.
pub const CALORIE: f64 = 4.184;

#[cfg(test)]
mod tests {
    use super::*;

    // The defining numbers as whole numbers: k = 1380649e-29 J/K, N_A = 602214076e15 1/mol,
    // e = 1602176634e-28 C. Their products fit 64 bits, so the quotient below is rounded once.
    const BOLTZMANN_DIGITS: u64 = 1_380_649;
    const AVOGADRO_DIGITS: u64 = 602_214_076;
    const CHARGE_DIGITS: u64 = 1_602_176_634;

    /// `digits`·10^-`decimals`, rounded by the standard library's correct decimal parser.
    fn exact(digits: u64, exponent: i32) -> f64 {
        format!("{digits}e{exponent}").parse().unwrap_or(f64::NAN)
    }

    #[test]
    fn constants_are_the_nearest_numbers_to_the_exact_products_of_the_defining_constants() {
        let bits = |value: f64| value.to_bits();
        assert_eq!(bits(BOLTZMANN), bits(exact(BOLTZMANN_DIGITS, -29)));
        assert_eq!(bits(AVOGADRO), bits(exact(AVOGADRO_DIGITS, 15)));
        assert_eq!(bits(ELEMENTARY_CHARGE), bits(exact(CHARGE_DIGITS, -28)));
        // J to kJ takes off three more powers of ten.
        assert_eq!(bits(GAS_CONSTANT), bits(exact(BOLTZMANN_DIGITS * AVOGADRO_DIGITS, -29 + 15 - 3)));
        assert_eq!(bits(FARADAY), bits(exact(CHARGE_DIGITS * AVOGADRO_DIGITS, -28 + 15 - 3)));
    }
}
