//! From the size that was told to the effective throat.
//!
//! Works on plain numbers in the printing set. Whether a clause accepts the size or the angle is
//! left to the sheets.

use super::{ThroatRule, WeldErrorKind};
use crate::joint::LegMeasure;
use crate::quantity::{UnitSet, real};
use std::f64::consts::{FRAC_PI_2, PI};

/// Size and kind of a weld as plain numbers; lengths in the printing set.
#[derive(Clone, Copy, PartialEq, Debug)]
pub enum Size {
    /// Fillet of equal legs.
    Equal {
        /// Leg (length).
        leg: f64,
        /// How the leg is measured.
        measured: LegMeasure,
    },
    /// Fillet of unequal legs.
    Unequal {
        /// Leg on the base part (length).
        on_base: f64,
        /// Leg on the attached part (length).
        on_attached: f64,
    },
    /// Stated effective throat of a fillet (length).
    Throat(f64),
    /// Stated effective throat of a partial penetration weld (length).
    Partial(f64),
    /// Complete penetration.
    Complete {
        /// Thickness that counts (length).
        thickness: f64,
        /// Index of the part whose thickness it is.
        part: usize,
    },
}

/// What a run has beside its size; lengths in the printing set.
#[derive(Clone, Copy, PartialEq, Debug)]
pub struct FitUp {
    /// Dihedral angle between the faces (rad).
    pub angle: f64,
    /// Root gap (length).
    pub gap: f64,
    /// Deep-penetration allowance (length).
    pub extra: f64,
}

impl FitUp {
    /// A right angle, closed root, no deep penetration.
    pub const SQUARE: Self = Self {
        angle: FRAC_PI_2,
        gap: 0.0,
        extra: 0.0,
    };
}

/// Root gap up to which a fillet keeps its leg (in).
///
/// AWS D1.1, fit-up of fillet welds (7.21.1 in the 2020 edition), from memory: to be verified.
pub const GAP_FREE_IN: f64 = 1.0 / 16.0;
/// Root gap up to which a fillet may be made with its leg increased by the gap (in). Same source.
pub const GAP_LIMIT_IN: f64 = 3.0 / 16.0;
/// Part of a threshold by which a converted length may miss it through rounding.
const ROUNDING: f64 = 1e-12;
/// Angle (rad) by which a right angle may be missed through rounding.
const SQUARE_WITHIN: f64 = 1e-9;

/// One inch in the printing set's length, exact.
#[must_use]
pub const fn inch(units: UnitSet) -> f64 {
    match units {
        UnitSet::NewtonMillimetre | UnitSet::KilonewtonMillimetre => 25.4,
        UnitSet::NewtonMetre => 0.0254,
        UnitSet::PoundInch | UnitSet::KipInch => 1.0,
    }
}

/// The rule by which the effective throat follows from the size, with the gap rule applied.
///
/// # Errors
///
/// [`WeldErrorKind`] with its data where the size, the gap, the angle or the penetration allowance
/// gives no throat.
///
/// # Source
///
/// Geometry for the throats; AWS D1.1 fit-up for the gap, from memory: a gap over 1/16 in is taken
/// off both legs in full, since the drawing's leg was to be increased by it.
pub fn throat_rule(size: Size, fit: FitUp, units: UnitSet) -> Result<ThroatRule, WeldErrorKind> {
    check_angle(fit.angle)?;
    let extra = fit.extra;
    let rule = match size {
        Size::Equal { leg, measured } => {
            let gap = working_gap(fit.gap, leg, units)?;
            let angle = fit.angle;
            match measured {
                LegMeasure::AlongFaces => ThroatRule::EqualLegs {
                    leg,
                    gap,
                    angle,
                    extra,
                },
                LegMeasure::SquareToFace => ThroatRule::SquareLegs {
                    leg,
                    gap,
                    angle,
                    extra,
                },
            }
        }
        Size::Unequal {
            on_base,
            on_attached,
        } => {
            if (fit.angle - FRAC_PI_2).abs() > SQUARE_WITHIN {
                return Err(WeldErrorKind::UnequalSkewed { angle: fit.angle });
            }
            let gap = working_gap(fit.gap, on_base.min(on_attached), units)?;
            ThroatRule::UnequalLegs {
                on_base,
                on_attached,
                gap,
                extra,
            }
        }
        Size::Throat(throat) => {
            plain_only(fit, units)?;
            ThroatRule::Stated { throat }
        }
        Size::Partial(throat) => {
            plain_only(fit, units)?;
            ThroatRule::Partial { throat }
        }
        Size::Complete { thickness, part } => {
            plain_only(fit, units)?;
            ThroatRule::Complete { thickness, part }
        }
    };
    let throat = rule.throat();
    if throat.is_finite() && throat > 0.0 && extra >= 0.0 {
        Ok(rule)
    } else {
        Err(WeldErrorKind::NoThroat { throat })
    }
}

impl ThroatRule {
    /// The effective throat (length).
    ///
    /// # Source
    ///
    /// Geometry: the height of the fillet's triangle over its hypotenuse.
    #[must_use]
    pub fn throat(&self) -> f64 {
        match *self {
            Self::EqualLegs {
                leg,
                gap,
                angle,
                extra,
            } => {
                // A right angle by its own root keeps h/√2 free of the cosine's rounding.
                (leg - gap) * half_cosine(angle) + extra
            }
            Self::SquareLegs {
                leg,
                gap,
                angle,
                extra,
            } => (leg - gap) / (2.0 * real::sin(angle / 2.0)) + extra,
            Self::UnequalLegs {
                on_base,
                on_attached,
                gap,
                extra,
            } => {
                let (h1, h2) = (on_base - gap, on_attached - gap);
                h1 * h2 / real::sqrt(h1 * h1 + h2 * h2) + extra
            }
            Self::Stated { throat } | Self::Partial { throat } => throat,
            Self::Complete { thickness, .. } => thickness,
        }
    }

    /// The leg as told (length), the larger of two; `None` where the rule knows none.
    #[must_use]
    pub fn leg(&self) -> Option<f64> {
        match *self {
            Self::EqualLegs { leg, .. } | Self::SquareLegs { leg, .. } => Some(leg),
            Self::UnequalLegs {
                on_base,
                on_attached,
                ..
            } => Some(on_base.max(on_attached)),
            Self::Stated { .. } | Self::Partial { .. } | Self::Complete { .. } => None,
        }
    }
}

/// cos(ψ/2), exactly √½ at a right angle.
fn half_cosine(angle: f64) -> f64 {
    if (angle - FRAC_PI_2).abs() <= SQUARE_WITHIN {
        std::f64::consts::FRAC_1_SQRT_2
    } else {
        real::cos(angle / 2.0)
    }
}

fn check_angle(angle: f64) -> Result<(), WeldErrorKind> {
    if angle > 0.0 && angle < PI {
        Ok(())
    } else {
        Err(WeldErrorKind::Angle { angle })
    }
}

/// The gap that is taken off the leg: nothing up to the first threshold, then all of it.
fn working_gap(gap: f64, leg: f64, units: UnitSet) -> Result<f64, WeldErrorKind> {
    let over = |threshold_in: f64| gap > threshold_in * inch(units) * (1.0 + ROUNDING);
    if gap.is_nan() || gap < 0.0 {
        Err(WeldErrorKind::GapNegative { gap })
    } else if over(GAP_LIMIT_IN) {
        Err(WeldErrorKind::GapTooWide {
            gap,
            limit: GAP_LIMIT_IN * inch(units),
        })
    } else if !over(GAP_FREE_IN) {
        Ok(0.0)
    } else if leg - gap <= 0.0 {
        Err(WeldErrorKind::GapTakesLeg { gap, leg })
    } else {
        Ok(gap)
    }
}

/// Refuses a gap over the first threshold or an allowance beside a throat that is stated.
fn plain_only(fit: FitUp, units: UnitSet) -> Result<(), WeldErrorKind> {
    if fit.extra > 0.0 {
        return Err(WeldErrorKind::PenetrationOnStated { extra: fit.extra });
    }
    // A leg without end: only the thresholds speak here.
    let gap = working_gap(fit.gap, f64::INFINITY, units)?;
    if gap > 0.0 {
        Err(WeldErrorKind::GapOnStated { gap })
    } else {
        Ok(())
    }
}
