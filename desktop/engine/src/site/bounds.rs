//! The range of every number of a site file that the core does not state already (those are in
//! its rooms `ground` and `load`). Wide enough for anything that exists, narrow enough to catch a
//! slip of unit or of the decimal point.

use brimstead_core::quantity::Bounded;

macro_rules! bounds {
    ($($NAME:ident = $name:literal, $unit:literal, $min:literal ..= $max:literal, $remedy:literal;)*) => {
        $(
            #[doc = concat!($name, ": ", stringify!($min), " to ", stringify!($max), " ", $unit, ".")]
            pub static $NAME: Bounded =
                Bounded { name: $name, unit: $unit, min: $min, max: $max, remedy: $remedy };
        )*
    };
}

bounds! {
    // Ground, in the units of the file
    DEPTH = "depth below ground level", "m", 0.0 ..= 500.0, "Depth is positive downwards, in metres.";
    CONSOLIDATION_COEFFICIENT = "coefficient of consolidation", "m2/year", 0.0001 ..= 1e8, "1 cm2/s is 3156 m2/year.";
    // Drains
    DRAIN_SPACING = "drain spacing", "m", 0.3 ..= 10.0, "Centre to centre, in metres.";
    DRAIN_DIAMETER = "equivalent drain diameter", "m", 0.01 ..= 1.0, "Give it in metres: a band drain is about 0.05 to 0.07 m.";
    SMEAR_RATIO = "smear ratio", "", 1.0 ..= 20.0, "Diameter of the smear zone by that of the drain; 1 for none.";
    SMEAR_PERMEABILITY_RATIO = "permeability ratio of smear", "", 1.0 ..= 50.0, "Horizontal permeability undisturbed by smeared; 1 for none.";
    DRAIN_DISCHARGE = "discharge capacity of a drain", "m3/year", 0.1 ..= 1e6, "null for no well resistance.";
    DRAIN_LENGTH = "drainage length of a drain", "m", 0.5 ..= 200.0, "Longest way of the water inside a drain.";
    ZONE_RADIUS = "radius of the zone with drains", "m", 1.0 ..= 1000.0, "About the axis of the tank under test.";
    // Tanks and load
    LIQUID_LEVEL = "liquid level", "m", 0.0 ..= 60.0, "Height above the tank bottom, in metres.";
    PUMP_RATE = "pump rate", "m3/h", 0.1 ..= 20000.0, "Give it in cubic metres per hour.";
    // Band
    MULTIPLIER = "multiplier of the best estimate", "", 0.01 ..= 100.0, "1 leaves the best estimate.";
    // Instruments
    NOISE = "noise as one standard deviation", "", 0.000001 ..= 1000.0, "In the unit of the instrument; never 0, or any reading would be outside the band.";
    READING = "reading", "", -1e6 ..= 1e6, "In the unit of the instrument.";
    STALE_AFTER = "age at which a reading is stale", "min", 1.0 ..= 100000.0, "At least the longest planned interval between readings.";
    DIGITS = "zero reading of the wire", "digits", 0.0 ..= 100000.0, "From the installation sheet.";
    DIGITS_FACTOR = "gauge factor", "kPa/digit", -100.0 ..= 100.0, "From the calibration sheet.";
    TEMPERATURE = "temperature", "C", -60.0 ..= 100.0, "In degrees Celsius.";
    TEMPERATURE_FACTOR = "temperature factor", "kPa/C", -50.0 ..= 50.0, "From the calibration sheet.";
    BAROMETER = "barometric pressure", "kPa", 50.0 ..= 115.0, "Absolute, in kPa: 1013 hPa is 101.3 kPa.";
    // Limits
    BAND_MULTIPLE = "multiple of the band", "", 0.1 ..= 100.0, "1 is the edge of the band.";
    APPLIED_PRESSURE = "applied pressure", "kPa", 0.0 ..= 2000.0, "Contact pressure of tank and liquid, in kPa.";
    RATE = "rate", "per day", -1e6 ..= 1e6, "In the unit of the instrument per day.";
    WINDOW = "window of the rate", "h", 0.1 ..= 10000.0, "Two noisy points make a false rate: let the window hold several readings.";
    PERSISTENCE_MINUTES = "persistence", "min", 0.0 ..= 1440.0, "Every minute of it costs warning time.";
    HYSTERESIS = "hysteresis", "", 0.0 ..= 1e6, "In the unit of the instrument.";
}
