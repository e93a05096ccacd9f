//! Directions, angles and colours that must fit each other.

use fluxloom_core::limits::plain;

use super::sound_numbers;
use crate::files::{Faults, Node, path};

/// How far a normal may be from perpendicular: one degree, as a cosine. What is
/// left below that is typing and is taken out where the vector is used.
const MOST_COSINE: f64 = 0.017_452_406_437_283_51;

/// Checks the planes of the pairs and the beams of the lattice.
pub(super) fn check(root: &Node, faults: &mut Faults) {
    check_planes(root, faults);
    check_lattice_beams(root, faults);
}

/// One beam is retro-reflected, at 180 deg; two beams need one wavelength.
fn check_lattice_beams(root: &Node, faults: &mut Faults) {
    let Some(lattice) = root.get("lattice") else { return };
    let Some(beams) = lattice.get("beams").filter(|_| !faults.spoils("lattice.beams")) else {
        return;
    };
    let names: Vec<&str> = beams.list().iter().filter_map(Node::text).collect();
    if let [name] = names.as_slice()
        && let Some(angle) = lattice.get("angle_deg")
        && let [angle_deg] = sound_numbers(angle, "lattice.angle_deg", faults).as_slice()
        && *angle_deg != 180.0
    {
        let message = format!(
            "lattice.angle_deg = {} with the one beam \"{}\" in lattice.beams: one beam is \
             retro-reflected and makes 180; name the second beam, or leave the angle out",
            plain(*angle_deg),
            path::short(name)
        );
        faults.add("file.retro_angle", angle.line, "lattice.angle_deg", message);
    }
    if names.len() == 2
        && lattice.get("angle_deg").is_none()
        && faults.is_whole()
        && !faults.expects("lattice.angle_deg")
    {
        let message = "lattice.angle_deg is missing: lattice.beams names two beams, and the angle \
             at which they cross is not 180 by itself: give the full angle between them"
            .to_owned();
        faults.add("file.missing_key", lattice.line, "lattice.angle_deg", message);
    }
    if let [first, second] = names.as_slice()
        && let (Some(first), Some(second)) =
            (wavelength(root, first, faults), wavelength(root, second, faults))
        && first != second
    {
        let message = format!(
            "lattice.beams have the wavelengths {} and {} nm: a standing wave needs one; let \
             both beams come from one laser",
            plain(first),
            plain(second)
        );
        faults.add("file.two_colours", beams.line, "lattice.beams", message);
    }
}

/// Wavelength of the laser that feeds a beam, if both can be read.
fn wavelength(root: &Node, beam: &str, faults: &Faults) -> Option<f64> {
    let laser = root.find(&["beams", beam, "laser"])?.text()?;
    let node = root.find(&["lasers", laser, "wavelength_nm"])?;
    sound_numbers(node, &format!("lasers.{laser}.wavelength_nm"), faults).first().copied()
}

/// Checks that both planes contain the lattice axis.
fn check_planes(root: &Node, faults: &mut Faults) {
    // Under a misspelt name or in a part that was not read, it is not the default.
    let unknown = |path: &str| faults.expects(path) || !faults.is_whole();
    if root.get("lattice").is_some_and(|node| !node.is_table())
        || ["lattice", "lattice.axis"].into_iter().any(unknown)
    {
        return;
    }
    let axis = direction(root, "lattice", "axis", faults);
    let axis = match (axis, root.find(&["lattice", "axis"])) {
        (Some(axis), _) => axis,
        (None, None) => [1.0, 0.0, 0.0],
        (None, Some(_)) => return,
    };
    for table in ["lattice", "raman"] {
        let Some(tables) = root.get(table).filter(|node| node.is_table()) else { continue };
        let stated = tables.get("plane_normal");
        let normal = match (direction(root, table, "plane_normal", faults), stated) {
            (Some(normal), _) => normal,
            (None, None) if faults.expects(&format!("{table}.plane_normal")) => continue,
            (None, None) => [0.0, 0.0, 1.0],
            (None, Some(_)) => continue,
        };
        let cosine = dot(axis, normal) / (dot(axis, axis) * dot(normal, normal)).sqrt();
        if cosine.abs() <= MOST_COSINE {
            continue;
        }
        let at = format!("{table}.plane_normal");
        let angle = cosine.clamp(-1.0, 1.0).acos().to_degrees();
        let (found, line) = match stated {
            Some(node) => ("", node.line),
            None => (" ([0, 0, 1] unless stated)", tables.line),
        };
        let message = format!(
            "{at}{found} is at {angle:.1} deg to lattice.axis: the plane of the pair holds the \
             lattice axis, so its normal must be perpendicular to it, to 1 deg"
        );
        faults.add("file.not_perpendicular", line, &at, message);
    }
}

fn direction(root: &Node, table: &str, key: &str, faults: &Faults) -> Option<[f64; 3]> {
    let node = root.find(&[table, key])?;
    sound_numbers(node, &format!("{table}.{key}"), faults).try_into().ok()
}

fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}
