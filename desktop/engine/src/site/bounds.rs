//! The range of every number of a site file. Wide enough for any ground or tank that exists,
//! narrow enough to catch a slip of unit or of the decimal point.

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
    // Ground
    THICKNESS = "layer thickness", "m", 0.05 ..= 500.0, "Give it in metres.";
    DEPTH = "depth below ground level", "m", 0.0 ..= 500.0, "Depth is positive downwards, in metres.";
    WATER_TABLE = "depth of the water table", "m", -5.0 ..= 200.0, "Depth is positive downwards; negative for water above ground level.";
    WATER_UNIT_WEIGHT = "unit weight of the ground water", "kN/m3", 9.7 ..= 10.5, "Fresh water is 9.81, sea water about 10.05.";
    PORE_PRESSURE = "pore pressure", "kPa", 0.0 ..= 5000.0, "Give it in kPa.";
    UNIT_WEIGHT = "bulk unit weight", "kN/m3", 9.0 ..= 30.0, "A density in t/m3 must be multiplied by 9.81.";
    VOID_RATIO = "initial void ratio", "", 0.1 ..= 20.0, "Look at the oedometer sheet.";
    COMPRESSION_INDEX = "compression index Cc", "", 0.001 ..= 20.0, "Per log10 cycle of effective stress; look at the oedometer sheet.";
    RECOMPRESSION_INDEX = "recompression index Cr", "", 0.0001 ..= 5.0, "Per log10 cycle of effective stress; usually a fifth to a tenth of Cc.";
    COMPRESSION_RATIO = "compression ratio CR", "", 0.0005 ..= 0.95, "Cc/(1+e0), a pure number, not percent.";
    RECOMPRESSION_RATIO = "recompression ratio RR", "", 0.00005 ..= 0.5, "Cr/(1+e0), a pure number, not percent.";
    CONSTRAINED_MODULUS = "constrained modulus", "kPa", 50.0 ..= 1e7, "Give it in kPa; 1 MPa is 1000 kPa.";
    OCR = "overconsolidation ratio", "", 1.0 ..= 100.0, "Below 1 the layer is still consolidating, which this file cannot say.";
    POP = "pre-overburden pressure", "kPa", 0.0 ..= 5000.0, "Preconsolidation pressure less in-situ effective stress.";
    PRECONSOLIDATION = "preconsolidation pressure", "kPa", 1.0 ..= 10000.0, "Give it in kPa.";
    SECONDARY_RATIO = "secondary compression ratio", "", 0.0 ..= 0.2, "Strain per log10 cycle of time, C-alpha/(1+e0), not percent.";
    CONSOLIDATION_COEFFICIENT = "coefficient of consolidation", "m2/year", 0.0001 ..= 1e8, "1 cm2/s is 3156 m2/year.";
    PERMEABILITY = "permeability", "m/s", 1e-14 ..= 1.0, "Give it in m/s; 1 cm/s is 0.01 m/s.";
    YOUNG = "Young's modulus", "kPa", 50.0 ..= 1e8, "Give it in kPa; 1 MPa is 1000 kPa.";
    POISSON = "Poisson's ratio", "", 0.0 ..= 0.499, "The undrained value 0.5 is not entered.";
    UNDRAINED_STRENGTH = "undrained shear strength", "kPa", 0.0 ..= 2000.0, "0 for a drained layer.";
    UNDRAINED_STRENGTH_GRADIENT = "gradient of undrained shear strength with depth", "kPa/m", -20.0 ..= 50.0, "Give it in kPa per metre.";
    PORE_PRESSURE_RESPONSE = "pore-pressure response", "", 0.0 ..= 1.5, "1 for saturated soft clay, 0 for a drained layer.";
    // Drains
    DRAIN_SPACING = "drain spacing", "m", 0.3 ..= 10.0, "Centre to centre, in metres.";
    DRAIN_DIAMETER = "equivalent drain diameter", "m", 0.01 ..= 1.0, "Give it in metres: a band drain is about 0.05 to 0.07 m.";
    SMEAR_RATIO = "smear ratio", "", 1.0 ..= 20.0, "Diameter of the smear zone by that of the drain; 1 for none.";
    SMEAR_PERMEABILITY_RATIO = "permeability ratio of smear", "", 1.0 ..= 50.0, "Horizontal permeability undisturbed by smeared; 1 for none.";
    DRAIN_DISCHARGE = "discharge capacity of a drain", "m3/year", 0.1 ..= 1e6, "null for no well resistance.";
    DRAIN_LENGTH = "drainage length of a drain", "m", 0.5 ..= 200.0, "Longest way of the water inside a drain.";
    ZONE_RADIUS = "radius of the zone with drains", "m", 1.0 ..= 1000.0, "About the axis of the tank under test.";
    // Tanks and load
    COORDINATE = "site coordinate", "m", -10000.0 ..= 10000.0, "Metres in the site's own axes, not map coordinates.";
    DIAMETER = "tank diameter", "m", 1.0 ..= 200.0, "Give it in metres.";
    SHELL_HEIGHT = "shell height", "m", 0.5 ..= 60.0, "Give it in metres.";
    LOADED_DEPTH = "depth of the loaded level", "m", 0.0 ..= 30.0, "0 for a pad at ground level.";
    FLOOR_PRESSURE = "floor pressure", "kPa", 0.0 ..= 500.0, "Weight of the bottom plates by their area.";
    PAD_PRESSURE = "pad pressure", "kPa", 0.0 ..= 500.0, "Weight of the foundation pad by its area.";
    EXCAVATION_RELIEF = "excavation relief", "kPa", 0.0 ..= 500.0, "Positive; it is taken off.";
    LINE_LOAD = "ring line load", "kN/m", 0.0 ..= 5000.0, "Per metre of circumference.";
    LIQUID_LEVEL = "liquid level", "m", 0.0 ..= 60.0, "Height above the tank bottom, in metres.";
    PUMP_RATE = "pump rate", "m3/h", 0.1 ..= 20000.0, "Give it in cubic metres per hour.";
    LIQUID_UNIT_WEIGHT = "unit weight of the liquid", "kN/m3", 3.0 ..= 20.0, "Fresh water is 9.81; a density in t/m3 must be multiplied by 9.81.";
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
