//! The table of kinds.
//!
//! Names, symbols and units follow ISO 80000-3 (space and time), -4 (mechanics) and -5 (thermodynamics), from memory,
//! and the trade's usage; GD² as weight times squared diameter is common practice in older data sheets.
//! Angle exponents: torque -1, angular velocity 1, moment of inertia -2, energy 0, torsional stiffness -2
//! (Quincey and Brown, Metrologia 53 (2016)). A polar second moment of area is an integral of a squared radius, so its
//! natural exponent is -2; its exponent is free, so that bending formulas pass as well.

use crate::dimension::Dimension;
use crate::kind::KindDef;
use crate::types::Angle;

macro_rules! kinds {
    ($($variant:ident $name:literal [$($alias:literal),*] $words:literal $symbol:literal $unit:literal
       ($l:expr, $m:expr, $t:expr, $a:expr; $th:expr, $i:expr) $angle:ident < $base:ident;)*) => {
        /// What a quantity is beyond its dimension.
        #[derive(Copy, Clone, PartialEq, Eq, Hash, PartialOrd, Ord, Debug)]
        #[repr(u16)]
        pub enum Kind {
            $(#[doc = $words] $variant,)*
        }

        static KINDS: &[KindDef] = &[
            $(KindDef {
                kind: Kind::$variant,
                name: $name,
                aliases: &[$($alias),*],
                words: $words,
                symbol: $symbol,
                unit: $unit,
                dim: Dimension::of($l, $m, $t, $a).and($th, $i),
                angle: Angle::$angle,
                base: Kind::$base,
            },)*
        ];
    };
}

impl Kind {
    /// The whole table, general kinds before special ones of the same dimension.
    pub fn all() -> &'static [KindDef] {
        KINDS
    }

    /// Its row in the table.
    pub fn def(self) -> &'static KindDef {
        // The table is generated with the enumeration, one row a kind, in the same order.
        &KINDS[self as usize]
    }
}

// variant, name, aliases, words, symbol, display unit, (L, M, T, angle; temperature, current), angle exponent, base
kinds! {
    Ratio "ratio" ["number", "efficiency", "coefficient", "strain", "count"] "pure number" "" "1" (0, 0, 0, 0; 0, 0) Fixed < Ratio;
    Angle "angle" [] "angle" "φ" "deg" (0, 0, 0, 1; 0, 0) Fixed < Angle;

    Length "length" [] "length" "l" "mm" (1, 0, 0, 0; 0, 0) Free < Length;
    Thickness "thickness" [] "thickness" "t" "mm" (1, 0, 0, 0; 0, 0) Free < Length;
    Width "width" ["depth"] "width" "b" "mm" (1, 0, 0, 0; 0, 0) Free < Length;
    Deflection "deflection" ["compression"] "deflection" "s" "mm" (1, 0, 0, 0; 0, 0) Free < Length;
    Radius "radius" [] "radius" "r" "mm" (1, 0, 0, -1; 0, 0) Free < Length;
    Diameter "diameter" [] "diameter" "d" "mm" (1, 0, 0, -1; 0, 0) Free < Length;
    LeverArm "lever_arm" [] "lever arm" "a" "mm" (1, 0, 0, -1; 0, 0) Free < Length;
    GyrationRadius "gyration_radius" ["radius_of_gyration"] "radius of gyration" "k" "mm" (1, 0, 0, -1; 0, 0) Free < Length;
    SpecificUnbalance "specific_unbalance" ["eccentricity"] "specific unbalance" "e" "um" (1, 0, 0, -1; 0, 0) Free < Length;
    Travel "travel" ["distance", "stroke"] "travel" "s" "m" (1, 0, 0, 0; 0, 0) Fixed < Length;
    Height "height" [] "height" "h" "m" (1, 0, 0, 0; 0, 0) Fixed < Length;
    PathLength "path_length" [] "path length" "s" "m" (1, 0, 0, 0; 0, 0) Fixed < Length;
    Lead "lead" [] "lead" "p" "mm/rev" (1, 0, 0, -1; 0, 0) Free < Lead;

    Area "area" [] "area" "A" "mm^2" (2, 0, 0, 0; 0, 0) Fixed < Area;
    Volume "volume" [] "volume" "V" "m^3" (3, 0, 0, 0; 0, 0) Fixed < Volume;
    SectionModulus "section_modulus" [] "section modulus" "W" "mm^3" (3, 0, 0, -1; 0, 0) Free < SectionModulus;
    SecondMomentOfArea "second_moment_of_area" ["polar_second_moment_of_area"] "second moment of area" "I" "mm^4" (4, 0, 0, -2; 0, 0) Free < SecondMomentOfArea;
    Displacement "displacement_volume" [] "displacement volume per angle" "V_g" "cm^3/rev" (3, 0, 0, -1; 0, 0) Fixed < Displacement;

    Time "time" ["duration"] "time" "t" "s" (0, 0, 1, 0; 0, 0) Fixed < Time;
    Frequency "frequency" [] "frequency" "f" "Hz" (0, 0, -1, 0; 0, 0) Fixed < Frequency;
    RotationalFrequency "rotational_frequency" [] "rotational frequency" "n" "1/min" (0, 0, -1, 0; 0, 0) Fixed < Frequency;
    AngularVelocity "angular_velocity" ["angular_speed", "angular_frequency"] "angular velocity" "ω" "rpm" (0, 0, -1, 1; 0, 0) Fixed < AngularVelocity;
    AngularAcceleration "angular_acceleration" [] "angular acceleration" "α" "rad/s^2" (0, 0, -2, 1; 0, 0) Fixed < AngularAcceleration;
    Speed "speed" ["velocity"] "speed" "v" "m/s" (1, 0, -1, 0; 0, 0) Fixed < Speed;
    Acceleration "acceleration" [] "acceleration" "a" "m/s^2" (1, 0, -2, 0; 0, 0) Fixed < Acceleration;
    VolumeFlow "volume_flow" [] "volume flow rate" "q_V" "m^3/s" (3, 0, -1, 0; 0, 0) Fixed < VolumeFlow;

    Mass "mass" [] "mass" "m" "kg" (0, 1, 0, 0; 0, 0) Fixed < Mass;
    Density "density" [] "density" "ρ" "kg/m^3" (-3, 1, 0, 0; 0, 0) Fixed < Density;
    ArealDensity "areal_density" [] "areal density" "ρ_A" "kg/m^2" (-2, 1, 0, 0; 0, 0) Fixed < ArealDensity;
    LinearDensity "linear_density" ["mass_per_length"] "linear density" "ρ_l" "kg/m" (-1, 1, 0, 0; 0, 0) Fixed < LinearDensity;
    MassFlow "mass_flow" [] "mass flow rate" "q_m" "kg/s" (0, 1, -1, 0; 0, 0) Fixed < MassFlow;
    MomentOfInertia "moment_of_inertia" ["inertia", "product_of_inertia"] "moment of inertia" "J" "kg*m^2" (2, 1, 0, -2; 0, 0) Fixed < MomentOfInertia;
    FlywheelEffectMass "flywheel_effect_mass" [] "flywheel effect GD² in mass form" "GD²" "kg*m^2" (2, 1, 0, -2; 0, 0) Fixed < FlywheelEffectMass;
    FlywheelEffect "flywheel_effect" [] "flywheel effect GD²" "GD²" "kgf*m^2" (3, 1, -2, -2; 0, 0) Fixed < FlywheelEffect;
    Unbalance "unbalance" [] "unbalance" "U" "g*mm" (1, 1, 0, -1; 0, 0) Free < Unbalance;
    Momentum "momentum" [] "momentum" "p" "kg*m/s" (1, 1, -1, 0; 0, 0) Fixed < Momentum;
    AngularMomentum "angular_momentum" [] "angular momentum" "L" "kg*m^2/s" (2, 1, -1, -1; 0, 0) Fixed < AngularMomentum;

    Force "force" [] "force" "F" "N" (1, 1, -2, 0; 0, 0) Fixed < Force;
    Weight "weight" [] "weight" "F_g" "N" (1, 1, -2, 0; 0, 0) Fixed < Force;
    Torque "torque" ["moment_of_force", "bending_moment"] "torque" "T" "N*m" (2, 1, -2, -1; 0, 0) Fixed < Torque;
    Energy "energy" [] "energy" "E" "J" (2, 1, -2, 0; 0, 0) Fixed < Energy;
    Work "work" [] "work" "W" "J" (2, 1, -2, 0; 0, 0) Fixed < Energy;
    Heat "heat" [] "heat" "Q" "J" (2, 1, -2, 0; 0, 0) Fixed < Energy;
    Power "power" [] "power" "P" "kW" (2, 1, -3, 0; 0, 0) Fixed < Power;
    Pressure "pressure" [] "pressure" "p" "MPa" (-1, 1, -2, 0; 0, 0) Fixed < Pressure;
    GaugePressure "gauge_pressure" [] "gauge pressure" "p_e" "bar" (-1, 1, -2, 0; 0, 0) Fixed < Pressure;
    AbsolutePressure "absolute_pressure" [] "absolute pressure" "p_abs" "bar" (-1, 1, -2, 0; 0, 0) Fixed < Pressure;
    Stress "stress" [] "stress" "σ" "MPa" (-1, 1, -2, 0; 0, 0) Fixed < Pressure;
    Modulus "modulus" ["modulus_of_elasticity", "shear_modulus"] "modulus of elasticity" "E" "GPa" (-1, 1, -2, 0; 0, 0) Fixed < Pressure;
    Stiffness "stiffness" ["spring_rate"] "stiffness" "k" "N/mm" (0, 1, -2, 0; 0, 0) Fixed < Stiffness;
    LineLoad "line_load" ["force_per_length"] "force per length" "q" "N/m" (0, 1, -2, 0; 0, 0) Fixed < LineLoad;
    TorsionalStiffness "torsional_stiffness" [] "torsional stiffness" "k_t" "N*m/rad" (2, 1, -2, -2; 0, 0) Fixed < TorsionalStiffness;
    Damping "damping" ["damping_coefficient"] "damping coefficient" "c" "N*s/m" (0, 1, -1, 0; 0, 0) Fixed < Damping;
    TorsionalDamping "torsional_damping" [] "torsional damping coefficient" "c_t" "N*m*s/rad" (2, 1, -1, -2; 0, 0) Fixed < TorsionalDamping;

    Temperature "temperature" ["absolute_temperature"] "temperature level" "ϑ" "degC" (0, 0, 0, 0; 1, 0) Fixed < Temperature;
    TemperatureDifference "temperature_difference" ["temperature_rise"] "temperature difference" "ΔT" "K" (0, 0, 0, 0; 1, 0) Fixed < TemperatureDifference;
    SpecificHeat "specific_heat" ["specific_heat_capacity"] "specific heat capacity" "c" "J/(kg*K)" (2, 0, -2, 0; -1, 0) Fixed < SpecificHeat;
    HeatCapacity "heat_capacity" [] "heat capacity" "C" "kJ/K" (2, 1, -2, 0; -1, 0) Fixed < HeatCapacity;
    ThermalExpansion "thermal_expansion" [] "coefficient of thermal expansion" "α" "1/K" (0, 0, 0, 0; -1, 0) Fixed < ThermalExpansion;
    HeatTransfer "heat_transfer" ["heat_transfer_coefficient"] "heat transfer coefficient" "h" "W/(m^2*K)" (0, 1, -3, 0; -1, 0) Fixed < HeatTransfer;
    ThermalConductivity "thermal_conductivity" [] "thermal conductivity" "λ" "W/(m*K)" (1, 1, -3, 0; -1, 0) Fixed < ThermalConductivity;
    ThermalConductance "thermal_conductance" [] "thermal conductance" "G" "W/K" (2, 1, -3, 0; -1, 0) Fixed < ThermalConductance;
    SpecificEnergy "specific_energy" [] "specific energy" "e" "kJ/kg" (2, 0, -2, 0; 0, 0) Fixed < SpecificEnergy;
    EnergyPerArea "energy_per_area" [] "energy per area" "" "J/cm^2" (0, 1, -2, 0; 0, 0) Fixed < EnergyPerArea;
    PowerPerArea "power_per_area" [] "power per area" "q" "W/m^2" (0, 1, -3, 0; 0, 0) Fixed < PowerPerArea;
    DynamicViscosity "dynamic_viscosity" [] "dynamic viscosity" "η" "Pa*s" (-1, 1, -1, 0; 0, 0) Fixed < DynamicViscosity;
    KinematicViscosity "kinematic_viscosity" [] "kinematic viscosity" "ν" "mm^2/s" (2, 0, -1, 0; 0, 0) Fixed < KinematicViscosity;

    Current "current" ["electric_current"] "electric current" "I" "A" (0, 0, 0, 0; 0, 1) Fixed < Current;
    Voltage "voltage" [] "voltage" "U" "V" (2, 1, -3, 0; 0, -1) Fixed < Voltage;
    Resistance "resistance" ["electric_resistance"] "electric resistance" "R" "ohm" (2, 1, -3, 0; 0, -2) Fixed < Resistance;
}
