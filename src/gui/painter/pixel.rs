//! One pixel: packed premultiplied colour and the "over" rule.
//!
//! A pixel is `0xAARRGGBB`, the order a window's buffer wants. Colours are multiplied by their alpha
//! and blended as they are stored (in gamma space), which is what egui's own shaders do, so that both
//! painters give the same picture.

/// Red, green, blue and alpha packed as `0xAARRGGBB`.
#[inline]
pub(super) const fn pack([r, g, b, a]: [u8; 4]) -> u32 {
    (a as u32) << 24 | (r as u32) << 16 | (g as u32) << 8 | b as u32
}

/// The four channels of a packed pixel: red, green, blue, alpha.
#[inline]
pub(super) const fn unpack(p: u32) -> [u8; 4] {
    [(p >> 16) as u8, (p >> 8) as u8, p as u8, (p >> 24) as u8]
}

const LOW: u32 = 0x00ff_00ff;

/// `round(x * k / 255)` for the two channels in bits 0..8 and 16..24 of `x`; `k` is at most 255.
#[inline]
const fn scale_pair(x: u32, k: u32) -> u32 {
    // Division by 255 with exact rounding; each half stays below 2^16, so none spills into the other.
    let t = x * k + 0x0080_0080;
    ((t + ((t >> 8) & LOW)) >> 8) & LOW
}

/// Sum of two channel pairs, each channel stopping at 255.
#[inline]
const fn add_pair(a: u32, b: u32) -> u32 {
    let sum = a + b;
    let full = sum & 0x0100_0100;
    (sum | (full - (full >> 8))) & LOW
}

/// `source` over `below`, both premultiplied.
///
/// Channels larger than alpha (egui's additive colours) are allowed: the sum stops at 255.
#[inline]
pub(super) const fn over(source: u32, below: u32) -> u32 {
    let k = 255 - (source >> 24);
    let rb = add_pair(source & LOW, scale_pair(below & LOW, k));
    let ag = add_pair((source >> 8) & LOW, scale_pair((below >> 8) & LOW, k));
    rb | ag << 8
}

/// Channel by channel `round(a * b / 255)`.
#[inline]
pub(super) fn multiply(a: [u8; 4], b: [u8; 4]) -> [u8; 4] {
    std::array::from_fn(|i| {
        let t = u32::from(a[i]) * u32::from(b[i]) + 128;
        ((t + (t >> 8)) >> 8) as u8
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scaling_rounds_exactly() {
        for x in 0..=255_u32 {
            for k in 0..=255_u32 {
                let want = (f64::from(x) * f64::from(k) / 255.0).round() as u32;
                let both = scale_pair(x | (255 - x) << 16, k);
                assert_eq!(both & 0xff, want, "{x} * {k}");
                let other = (f64::from(255 - x) * f64::from(k) / 255.0).round() as u32;
                assert_eq!(both >> 16, other, "{} * {k}", 255 - x);
            }
        }
    }

    #[test]
    fn over_keeps_opaque_and_stops_at_white() {
        let below = pack([10, 200, 30, 255]);
        assert_eq!(over(pack([1, 2, 3, 255]), below), pack([1, 2, 3, 255]));
        assert_eq!(over(0, below), below);
        // An additive colour: no alpha, yet light.
        assert_eq!(over(pack([250, 100, 0, 0]), below), pack([255, 255, 30, 255]));
        // Half of white over black.
        assert_eq!(over(pack([128; 4]), pack([0, 0, 0, 255])), pack([128, 128, 128, 255]));
    }

    #[test]
    fn packing_goes_both_ways() {
        let p = [1, 2, 3, 4];
        assert_eq!(unpack(pack(p)), p);
        assert_eq!(pack(p), 0x0401_0203);
    }
}
