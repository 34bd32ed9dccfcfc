//! The colours of pictures for paper: those of the window's themes.

use crate::figure::Role;

/// A colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Rgb(pub u8, pub u8, pub u8);

const fn rgb(hex: u32) -> Rgb {
    Rgb((hex >> 16) as u8, (hex >> 8) as u8, hex as u8)
}

/// The colours of one theme, by what they are for.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(missing_docs, reason = "each name says what the colour is for")]
pub struct Palette {
    pub ground: Rgb,
    pub text: Rgb,
    pub dim: Rgb,
    pub grid: Rgb,
    pub scan: Rgb,
    pub harmonic: Rgb,
    pub morse: Rgb,
    pub polynomial: Rgb,
    pub reach: Rgb,
    pub outside: Rgb,
    pub level: Rgb,
    pub accent: Rgb,
    pub rotation: Rgb,
}

/// Dark theme.
pub const DARK: Palette = Palette {
    ground: rgb(0x12161b),
    text: rgb(0xe8ebef),
    dim: rgb(0x97a3b3),
    grid: rgb(0x232a34),
    scan: rgb(0xf3f5f7),
    harmonic: rgb(0xf2a65a),
    morse: rgb(0x69b3f2),
    polynomial: rgb(0x5fcf9e),
    reach: rgb(0x3fb6a8),
    outside: rgb(0xd98a5b),
    level: rgb(0x8593a5),
    accent: rgb(0xe9c46a),
    rotation: rgb(0xb79cf0),
};

/// Light theme; the ground is white, as paper is.
pub const LIGHT: Palette = Palette {
    ground: rgb(0xffffff),
    text: rgb(0x1c232d),
    dim: rgb(0x56616f),
    grid: rgb(0xe8e4db),
    scan: rgb(0x1c232d),
    harmonic: rgb(0xb35c00),
    morse: rgb(0x1f6fb5),
    polynomial: rgb(0x0f7d55),
    reach: rgb(0x157f74),
    outside: rgb(0xb3592a),
    level: rgb(0x6f7a88),
    accent: rgb(0x8a6500),
    rotation: rgb(0x6d48b5),
};

/// `percent` of the way from one colour to another.
const fn mixed(from: Rgb, to: Rgb, percent: u32) -> Rgb {
    const fn part(a: u8, b: u8, percent: u32) -> u8 {
        let share = if percent > 100 { 100 } else { percent };
        ((a as u32 * (100 - share) + b as u32 * share) / 100) as u8
    }
    Rgb(part(from.0, to.0, percent), part(from.1, to.1, percent), part(from.2, to.2, percent))
}

impl Palette {
    /// The colour of a series.
    pub const fn role(&self, role: Role) -> Rgb {
        match role {
            Role::Scanned | Role::Tail => self.scan,
            Role::Parabola | Role::Harmonic => self.harmonic,
            Role::Morse => self.morse,
            Role::Polynomial => self.polynomial,
            // From the polynomials' green towards the accent, over the degrees offered.
            Role::Degree(n) => mixed(self.polynomial, self.accent, n.saturating_sub(3) * 100 / 6),
            Role::Proposal => self.outside,
            Role::Reach | Role::Tolerance => self.reach,
            Role::LeadingOrder => self.dim,
            Role::ZeroPoint => self.accent,
            Role::Zero => self.level,
            Role::Effective | Role::EffectiveTail | Role::QuasiBound | Role::Tunnelling => self.rotation,
        }
    }
}
