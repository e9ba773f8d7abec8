//! One unload as pulses.

use super::table::Table;
use super::words::{number, paragraph, vector};
use crate::lifetime::TypicalUnload;
use crate::pulses::UnloadCommand;
use crate::vehicle::Thruster;

/// One row for each thruster that fires.
#[must_use]
pub fn unload_table(command: &UnloadCommand, thrusters: &[Thruster]) -> Table {
    let mut table = Table::new(&["thruster", "impulse_N_s", "pulses", "on_time_s", "propellant_kg"]);
    for firing in &command.thrusters {
        table.push(vec![
            thrusters[firing.thruster].name.clone(),
            firing.impulse_n_s.to_string(),
            firing.pulses.to_string(),
            firing.on_time_s.to_string(),
            firing.propellant_kg.to_string(),
        ]);
    }
    table
}

/// One unload as text.
#[must_use]
pub fn unload_text(unload: &TypicalUnload, thrusters: &[Thruster]) -> String {
    let command = &unload.command;
    let mut table = Table::new(&["thruster", "pulses", "on-time ms", "impulse N s", "propellant g"]);
    for firing in &command.thrusters {
        table.push(vec![
            thrusters[firing.thruster].name.clone(),
            firing.pulses.to_string(),
            number(firing.on_time_s * 1e3, 4),
            number(firing.impulse_n_s, 4),
            number(firing.propellant_kg * 1e3, 4),
        ]);
    }
    let sentence = format!(
        "Removes {} N m s from the wheels (body frame) with {} g ({} g at the steady exhaust speed) in {} s. Left in the wheels: {} N m s. \
         Push on the spacecraft: {} N s, {} mm/s.",
        vector(&command.momentum_n_m_s, 3),
        number(command.propellant_kg * 1e3, 3),
        number(command.ideal_propellant_kg * 1e3, 3),
        number(command.duration_s, 3),
        vector(&command.residual_n_m_s, 4),
        vector(&command.net_impulse_n_s, 3),
        vector(&(command.net_impulse_n_s / unload.mass_kg * 1e3), 3),
    );
    let turned = unload.transient.angle_rad.map_or_else(String::new, |angle| {
        format!(", and turns it by {} mdeg before the wheels have stopped it", number(angle.to_degrees() * 1e3, 3))
    });
    let transient =
        format!("A pulse of each gives the body {} mdeg/s{turned}.", number(unload.transient.rate_rad_per_s.to_degrees() * 1e3, 3));
    if command.thrusters.is_empty() {
        let wait = "The shortest pulses would leave more in the wheels than they take out: nothing fires. Wait until more has gathered.";
        return paragraph("  ", "  ", wait);
    }
    format!("{}{}", paragraph("  ", "  ", &format!("{sentence} {transient}")), table.to_text())
}
