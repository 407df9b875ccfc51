//! The working of a layered result: what is integrated and what is known in closed form.

use super::{LayeredGround, LayeredLoad, LayeredResponse, Level};
use crate::stress::StressError;
use crate::stress::surface::{Inputs, Trail};
use crate::working::Working;

impl LayeredGround {
    pub(super) fn write(
        &self,
        load: &LayeredLoad,
        level: &Level,
        (r_m, z_m): (f64, f64),
        response: &LayeredResponse,
        working: &mut impl Working,
    ) -> Result<(), StressError> {
        let mut trail = Trail::new(working, "Burmister 1945; Kennett 1983 (reflection matrices)");
        let place: Inputs<'_> = &[("r", r_m), ("z", z_m), ("R", load.radius_m())];
        let count = level.stack.sublayers.len() as f64;
        trail.steps(
            "",
            &[
                ("sublayers", count, "layers; one with a modulus gradient is divided"),
                (
                    "largest wave number times radius",
                    level.last_wave(),
                    "M = exponent/decay, decay = (2 h1 - z)/R in the top sublayer, z/R below it",
                ),
            ],
            place,
        );
        if level.target.index == 0 {
            let sublayer = level.target.sublayer;
            let young_kpa = sublayer.twice_shear * self.reference_kpa() * (1.0 + sublayer.poisson);
            let closed = load.on_half_space(young_kpa, sublayer.poisson, r_m, z_m)?;
            let ground: Inputs<'_> = &[("Es", young_kpa), ("nu", sublayer.poisson)];
            let (sigma_z, settlement) =
                (closed.stress.sigma_z_kpa, closed.displacement.settlement_m);
            let name = "vertical stress on a half-space of the top layer";
            trail.step("kPa", (name, sigma_z, "closed form"), ground);
            let name = "settlement on a half-space of the top layer";
            trail.step("m", (name, settlement, "closed form"), ground);
        }
        let sum = "closed form + integral of what the other layers change";
        let sigma_z = response.stress.sigma_z_kpa;
        trail.step("kPa", ("vertical stress of this division", sigma_z, sum), place);
        let settlement = response.displacement.settlement_m;
        trail.step("m", ("settlement of this division", settlement, sum), place);
        Ok(())
    }

    pub(super) fn write_result(result: &LayeredResponse, working: &mut impl Working) {
        let formula =
            "one division as it is; three as f4 + (20 (f4 - f2) - (f2 - f1))/45 by fineness";
        let mut trail = Trail::new(working, "");
        let (stress, moved) = (&result.stress, &result.displacement);
        let kpa = [
            ("vertical stress increment", stress.sigma_z_kpa, formula),
            ("radial stress increment", stress.sigma_r_kpa, formula),
            ("tangential stress increment", stress.sigma_theta_kpa, formula),
            ("shear stress increment", stress.tau_rz_kpa, formula),
        ];
        trail.steps("kPa", &kpa, &[]);
        let metres = [
            ("settlement", moved.settlement_m, formula),
            ("radial displacement, outwards", moved.radial_m, formula),
        ];
        trail.steps("m", &metres, &[]);
    }
}
