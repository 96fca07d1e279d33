//! Reading compound units: products and quotients of named factors with whole powers.

use std::iter::Peekable;
use std::str::Chars;

use super::{EnergyUnit, PositionUnit};

/// Lower case, trimmed, with the one letter that Unicode can write in several ways in its composed form.
pub(super) fn normalized(text: &str) -> String {
    text.trim().to_lowercase().replace("a\u{30a}", "å")
}

/// The energy unit of `text`, with the position unit it is multiplied by and that unit's power:
/// `kJ/mol/nm^2` is (kJ/mol, nm, -2). Without a position unit the result is (…, none, 0).
pub(super) fn energy_and_position(text: &str) -> Option<(EnergyUnit, PositionUnit, i32)> {
    let mut energy = None;
    let mut moles = 0;
    let mut position = (PositionUnit::None, 0);
    for (name, power) in factors(text)? {
        if let Some(unit) = energy_name(&name) {
            if power != 1 || energy.replace(unit).is_some() {
                return None;
            }
        } else if matches!(name.as_str(), "mol" | "mole" | "moles") {
            moles = power;
        } else {
            match PositionUnit::from_name(&name)? {
                PositionUnit::None => {}
                _ if position.0 != PositionUnit::None => return None,
                unit => position = (unit, power),
            }
        }
    }
    let energy = energy?;
    let moles_of_energy = match energy {
        EnergyUnit::KilojoulePerMole | EnergyUnit::KilocaloriePerMole => -1,
        EnergyUnit::Kt | EnergyUnit::ElectronVolt => 0,
    };
    (moles == moles_of_energy).then_some((energy, position.0, position.1))
}

fn energy_name(name: &str) -> Option<EnergyUnit> {
    match name {
        "kj" | "kilojoule" | "kilojoules" => Some(EnergyUnit::KilojoulePerMole),
        "kcal" | "kilocalorie" | "kilocalories" => Some(EnergyUnit::KilocaloriePerMole),
        "kt" | "kbt" | "k_bt" | "rt" => Some(EnergyUnit::Kt),
        "ev" | "electronvolt" | "electronvolts" => Some(EnergyUnit::ElectronVolt),
        _ => None,
    }
}

/// The named factors of `text` and their powers, each name once, in the order of appearance.
///
/// A slash divides by the one factor or parenthesis after it, so `kJ/mol nm` is kJ·nm/mol.
fn factors(text: &str) -> Option<Vec<(String, i32)>> {
    let text = normalized(text).replace("**", "^");
    let mut characters = text.chars().peekable();
    let mut factors: Vec<(String, i32)> = Vec::new();
    // The sign that powers take in each open parenthesis, the text itself being the outermost.
    let mut signs = vec![1];
    let mut divide = false;
    while let Some(&character) = characters.peek() {
        let sign = *signs.last()?;
        let sign = if divide { -sign } else { sign };
        match character {
            '(' => signs.push(sign),
            ')' if divide || signs.len() == 1 => return None,
            ')' => {
                signs.pop();
            }
            '/' if divide => return None,
            '*' | '·' | '⋅' | '/' => {}
            _ if character.is_whitespace() => {
                characters.next();
                continue;
            }
            _ => {
                let name = take_name(&mut characters)?;
                let power = sign * take_power(&mut characters)?;
                match factors.iter_mut().find(|(known, _)| *known == name) {
                    Some((_, sum)) => *sum = sum.saturating_add(power),
                    None => factors.push((name, power)),
                }
                divide = false;
                continue;
            }
        }
        divide = character == '/';
        characters.next();
    }
    (!divide && signs.len() == 1).then_some(factors)
}

fn take_name(characters: &mut Peekable<Chars<'_>>) -> Option<String> {
    let mut name = String::new();
    if characters.next_if_eq(&'1').is_some() {
        // A plain number has no power without a mark, or 12 would read as 1².
        let glued = characters.peek().is_some_and(char::is_ascii_digit);
        return (!glued).then(|| "1".to_owned());
    }
    while let Some(character) = characters.next_if(|&next| next.is_alphabetic() || matches!(next, '_' | '°')) {
        name.push(character);
    }
    (!name.is_empty()).then_some(name)
}

/// The power after a name: 1 when there is none, a single digit with or without a sign otherwise.
fn take_power(characters: &mut Peekable<Chars<'_>>) -> Option<i32> {
    let marked = characters.next_if_eq(&'^').is_some();
    let negative = characters.next_if(|next| matches!(next, '-' | '−' | '⁻')).is_some();
    let digit = characters.next_if(|&next| digit_value(next).is_some());
    let power = match digit.and_then(digit_value) {
        Some(power) => power,
        None if marked || negative => return None,
        None => 1,
    };
    Some(if negative { -power } else { power })
}

fn digit_value(character: char) -> Option<i32> {
    match character {
        '0'..='9' => character.to_digit(10).and_then(|digit| i32::try_from(digit).ok()),
        '¹' => Some(1),
        '²' => Some(2),
        '³' => Some(3),
        _ => None,
    }
}
