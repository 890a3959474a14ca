//! What a lab has: balances, ware, meters.

use super::part::{Quantity, Slot, Tolerance};
use crate::text::Span;

/// `balance readability 0.1 mg, 20 mg to 220 g`.
#[derive(Clone, Debug, PartialEq)]
pub struct Balance {
    /// Readability.
    pub readability: Quantity,
    /// Least mass.
    pub least: Option<Quantity>,
    /// Greatest mass.
    pub greatest: Option<Quantity>,
    /// `± 0.2 mg`, where stated.
    pub tolerance: Option<Tolerance>,
}

/// The kinds of volumetric ware and vessels.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs, reason = "named after their words")]
pub enum WareKind {
    Flask,
    Cylinder,
    Pipette,
    Burette,
    Vessel,
}

/// `flask 100 mL ± 0.10 mL, 250 mL ± 0.15 mL`.
#[derive(Clone, Debug, PartialEq)]
pub struct WareLine {
    /// What.
    pub kind: WareKind,
    /// Which sizes.
    pub wares: Vec<Ware>,
}

/// One piece of ware.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ware {
    /// Its place.
    pub span: Span,
    /// Its volume, or the least of an adjustable one.
    pub volume: Quantity,
    /// The greatest volume of an adjustable one.
    pub up_to: Option<Quantity>,
    /// Its tolerance.
    pub tolerance: Option<Tolerance>,
    /// Whether it says `class A`.
    pub class_a: bool,
}

/// Meters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs, reason = "named after their words")]
pub enum MeterKind {
    Ph,
    Conductivity,
    Osmometer,
}

/// `pH meter ± 0.02`, `conductivity meter ± 1 %, reference 25 °C, compensation 2.0 %`.
#[derive(Clone, Debug, PartialEq)]
pub struct Meter {
    /// Which.
    pub kind: MeterKind,
    /// Its tolerance.
    pub tolerance: Slot<Tolerance>,
    /// Reference temperature.
    pub reference: Option<Slot<Quantity>>,
    /// Compensation, per cent per kelvin.
    pub compensation: Option<Slot<Quantity>>,
}
