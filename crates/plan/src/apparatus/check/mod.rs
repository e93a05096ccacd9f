//! Everything that can be wrong with an apparatus, found in one walk: keys
//! that do not exist, keys that are missing, values that cannot be, and values
//! that contradict each other.
//!
//! A fault never hides another one, and what depends on a faulty value is not
//! reported a second time.

mod atom;
mod geometry;
mod measured;
mod names;
mod reach;
mod value;

pub(super) use measured::inner;

use fluxloom_core::limits::plain;

use super::keys::{self, Key, Kind, MEASURED_KEYS, NEEDED_TABLES, Need};
use crate::files::{Data, Entry, Faults, Node, nearest, path};

/// The name of the format.
pub(super) const FORMAT: &str = "fluxloom-apparatus";
/// The newest version of the format that can be read.
pub(super) const VERSION: f64 = 1.0;

/// Collects every fault of `root`.
pub(super) fn check(root: &Node, faults: &mut Faults) {
    if !head(root, faults) {
        return;
    }
    let mut walk = Walk { faults, atom: atom::of(root), misnamed: Vec::new() };
    walk.table(root, "", &[]);
    let misnamed = walk.misnamed;
    for name in NEEDED_TABLES.iter().filter(|name| !name.is_empty() && root.get(name).is_none()) {
        if !faults.expects(name) {
            missing_keys(&Node::new(Data::Table(Vec::new())), name, name, faults);
        }
    }
    names::check(root, &misnamed, faults);
    geometry::check(root, faults);
    reach::check(root, faults);
}

/// Whether this is a file of ours that can be judged; a target or a file of a
/// later version would only seem to be full of unknown keys.
fn head(root: &Node, faults: &mut Faults) -> bool {
    let mut readable = true;
    if let Some(node) = root.get("format")
        && let Some(found) = node.text()
        && found.starts_with("fluxloom-")
        && nearest(found, [FORMAT]).is_none()
    {
        let kind = found.trim_start_matches("fluxloom-");
        let message = format!(
            "format = \"{}\": this is a {kind} file, an apparatus is asked for: \
             give a file with format = \"{FORMAT}\"",
            value::shown(found)
        );
        faults.add("file.format", node.line, "format", message);
        readable = false;
    }
    if let Some(node) = root.get("version")
        && let Some(found) = node.number()
        && found > VERSION
        && found.fract() == 0.0
    {
        let message = format!(
            "version = {}: this file needs a newer Fluxloom, which reads version {VERSION} \
             at most: update Fluxloom",
            if found < 1e15 { format!("{found}") } else { plain(found) }
        );
        faults.add("file.version_too_new", node.line, "version", message);
        readable = false;
    }
    readable
}

struct Walk<'a, 'n> {
    faults: &'a mut Faults,
    atom: Option<fluxloom_core::Atom>,
    /// Tables under a name that nearly is the one given first: what they define
    /// is defined.
    misnamed: Vec<(&'static str, &'n Node)>,
}

impl<'n> Walk<'_, 'n> {
    /// Checks a table, whose place in the key table is `pattern`.
    fn table(&mut self, node: &'n Node, pattern: &str, here: &[String]) {
        for entry in node.entries() {
            let mut place = here.to_vec();
            place.push(entry.key.clone());
            let at = place.iter().fold(String::new(), |parent, key| path::join(&parent, key));
            if matches!(entry.node.data, Data::Unreadable) {
                // Reported as it is; but if it is misspelt too, nothing is missing.
                self.meant(entry, pattern, here);
                continue;
            }
            let inside = path::join(pattern, &entry.key);
            let named = format!("{pattern}.*");
            if let Some(key) = keys::rows(pattern).find(|key| key.name() == entry.key) {
                value::check(key, &entry.node, &at, self.atom.as_ref(), self.faults);
            } else if let Some(table) = keys::tables().find(|table| *table == inside) {
                self.inner(&entry.node, table, &place, &at);
            } else if let Some(table) = keys::tables().find(|table| *table == named) {
                self.named(entry, table, &place, &at);
            } else {
                self.unknown(entry, pattern, here, &at);
            }
        }
        let at = here.iter().fold(String::new(), |parent, key| path::join(&parent, key));
        missing_keys(node, pattern, &at, self.faults);
    }

    fn named(&mut self, entry: &'n Entry, table: &str, place: &[String], at: &str) {
        let setting = keys::rows(table)
            .find(|key| key.name() == entry.key && can_hold(key, &entry.node.data));
        if setting.is_some() {
            let parent = table.trim_end_matches(".*");
            let message = format!(
                "{at} belongs in [{parent}.<name>], with a name of your choice, not in [{parent}] \
                 itself"
            );
            return self.faults.add("file.not_a_table", entry.node.line, at, message);
        }
        if path::is_bare(&entry.key) {
            return self.inner(&entry.node, table, place, at);
        }
        let message = format!(
            "{at}: a name may hold letters, digits, _ and - only, \
             so that it can stand in a path: rename it"
        );
        self.faults.add("file.bad_name", entry.node.line, at, message);
    }

    fn inner(&mut self, node: &'n Node, table: &str, place: &[String], at: &str) {
        match &node.data {
            Data::Table(_) => self.table(node, table, place),
            Data::Tables(_) => {
                let once = if keys::rows(table).next().is_some() {
                    format!("write [{at}] once")
                } else {
                    format!("write [{at}.<name>] once for each name")
                };
                let message = format!("{at}: an apparatus has no arrays of tables: {once}");
                self.faults.add("file.array_of_tables", node.line, at, message);
            }
            _ => {
                let how = if self.faults.is_text() {
                    format!("write [{at}] and its keys below")
                } else {
                    "give a table with its keys".to_owned()
                };
                let message = format!("{at} is a table, but {} was found: {how}", node.describe());
                self.faults.add("file.not_a_table", node.line, at, message);
            }
        }
    }

    fn unknown(&mut self, entry: &'n Entry, pattern: &str, here: &[String], at: &str) {
        let meant = self.meant(entry, pattern, here);
        let place = match here {
            [] => "an apparatus".to_owned(),
            _ => format!("[{}]", path::short(&here.join("."))),
        };
        let known = path::listed(children(pattern));
        let mut message = format!("{at} is not a known key: {place} knows {known}");
        let elsewhere: Vec<String> = keys::all()
            .filter(|key| key.name() == entry.key && !key.table().is_empty())
            .filter(|key| can_hold(key, &entry.node.data))
            .map(|key| key.table().replace('*', "<name>"))
            .collect();
        if !elsewhere.is_empty() {
            message.push_str(&format!("; it belongs in [{}]", elsewhere.join("] or [")));
        }
        let meant = meant.map(str::to_owned);
        self.faults.add_meant("file.unknown_key", entry.node.line, at, message, meant);
    }

    /// The key that was probably meant by one that does not exist; it is then
    /// not reported as missing.
    fn meant(&mut self, entry: &'n Entry, pattern: &str, here: &[String]) -> Option<&'static str> {
        let known: Vec<&'static str> = children(pattern).collect();
        let meant = known.get(
            self.faults
                .suggest(&entry.key, known.iter().copied())
                .and_then(|name| known.iter().position(|known| *known == name))?,
        )?;
        let parent = here.iter().fold(String::new(), |parent, key| path::join(&parent, key));
        self.faults.expect(path::join(&parent, meant));
        if here.is_empty() {
            self.misnamed.push((meant, &entry.node));
        }
        Some(meant)
    }
}

/// Whether such a value, right or wrong, may be meant for a row: a table is
/// meant for a measured number or a map only.
fn can_hold(key: &Key, data: &Data) -> bool {
    match data {
        Data::Table(_) if key.kind.is_map() => true,
        Data::Table(entries) => {
            let measured = |entry: &Entry| MEASURED_KEYS.contains(&entry.key.as_str());
            key.kind.is_measurable() && !entries.is_empty() && entries.iter().all(measured)
        }
        Data::Tables(_) => false,
        _ => true,
    }
}

/// The keys and tables directly below a table of this pattern.
pub(super) fn children(pattern: &str) -> impl Iterator<Item = &'static str> {
    let rows = keys::rows(pattern).map(Key::name);
    let prefix = if pattern.is_empty() { String::new() } else { format!("{pattern}.") };
    let tables = keys::tables().filter_map(move |table| {
        let name = table.strip_prefix(&prefix)?;
        (!name.contains('.') && name != "*").then_some(name)
    });
    rows.chain(tables)
}

/// Reports required keys that are not there. Of a file that was not read to its
/// end nobody knows what is missing.
fn missing_keys(node: &Node, pattern: &str, at: &str, faults: &mut Faults) {
    if !faults.is_whole() {
        return;
    }
    let required = keys::rows(pattern).filter(|key| key.need == Need::Required);
    for key in required.filter(|key| node.get(key.name()).is_none()) {
        let path = path::join(at, key.name());
        if faults.expects(&path) {
            continue;
        }
        let (code, about) = match key.kind {
            Kind::Format => ("file.format", format!("format = \"{FORMAT}\"")),
            Kind::Version => ("file.version", format!("version = {VERSION}")),
            _ => ("file.missing_key", key.about.to_owned()),
        };
        let message = format!("{path} is missing: give {about}");
        let line = if pattern.is_empty() { node.line.map(|_| 1) } else { node.line };
        faults.add(code, line, &path, message);
    }
}

/// Every value whose path fits `pattern`, with its path.
pub(super) fn matching<'a>(root: &'a Node, pattern: &str) -> Vec<(String, &'a Node)> {
    let mut found = vec![(String::new(), root)];
    for word in pattern.split('.') {
        let step = |(at, node): (String, &'a Node)| {
            let entries = node.entries().iter().filter(move |e| word == "*" || e.key == word);
            entries.map(move |e| (path::join(&at, &e.key), &e.node)).collect::<Vec<_>>()
        };
        found = found.into_iter().flat_map(step).collect();
    }
    found
}

/// The numbers of a value that passed its own check: none if it did not.
pub(super) fn sound_numbers(node: &Node, at: &str, faults: &Faults) -> Vec<f64> {
    if faults.spoils(at) {
        return Vec::new();
    }
    match &node.data {
        Data::List(list) => list.iter().filter_map(Node::number).collect(),
        _ => measured::inner(node).and_then(Node::number).into_iter().collect(),
    }
}
