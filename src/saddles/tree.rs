//! Groups of saddles: a tree from single saddles (or merged ones) up to clusters of several.
//!
//! Which level of the tree an integral is summed at is decided at each wavenumber by the smallest
//! error figure; the tree only lists what can be chosen from.
//!
//! Method: agglomeration by complete linkage (textbook), bounded by the number of saddles that
//! has a canonical integral and by the difference of heights beyond which taking saddles together
//! cannot pay.

use super::Saddle;
use crate::integral::Phase;
use num_complex::Complex64;

/// Saddles that may be treated together.
#[derive(Clone, Debug)]
pub(crate) struct Group {
    /// Indices into the list of saddles.
    pub members: Vec<usize>,
    /// Their mean.
    pub centre: Complex64,
    /// The largest distance of a member from the centre.
    pub radius: f64,
    /// The distance from the centre to the nearest saddle outside; infinite if there is none.
    pub gap: f64,
    /// The two groups that this one joins; none for the finest level.
    pub parts: Option<(usize, usize)>,
    /// Its saddles are so close at every wavenumber of the range that they are best taken together: the
    /// parts are of use only where the whole has no expansion.
    pub close: bool,
}

/// Groups, parts before wholes.
#[derive(Clone, Debug)]
pub(crate) struct Tree {
    pub groups: Vec<Group>,
    /// Groups that are part of no other.
    pub roots: Vec<usize>,
}

/// Saddles whose phases differ by less than this over the greatest wavenumber are not worth telling
/// apart: each alone would be known to some `e^-6` at best.
const TOGETHER: f64 = 6.0;
/// No wavenumber is greater than this many times the least one: what is close even there is merged, and has no
/// parts.
const SPAN: f64 = 3e7;
/// Beyond this over the least wavenumber, taking saddles together does not pay.
const APART: f64 = 60.0;

impl Tree {
    /// `largest`: the number of saddles of the largest group; `wavenumbers`: the least and greatest.
    pub fn new(
        phase: &dyn Phase,
        saddles: &[Saddle],
        largest: usize,
        (least, greatest): (f64, f64),
    ) -> Tree {
        // Merged saddles have no hill between them; distant ones may agree by chance, and halfway too where
        // the phase is periodic.
        let within = |limit: f64, m: usize, n: usize| {
            let (a, b) = (&saddles[m], &saddles[n]);
            let near = |f: Complex64| (f - a.value).norm() < limit;
            near(b.value)
                && [0.29, 0.5, 0.77].iter().all(|part| near(phase.value(a.z + (b.z - a.z) * part)))
        };
        let merged_below = TOGETHER / (SPAN * least);
        let mut groups: Vec<Group> = Vec::new();
        let mut open: Vec<usize> = Vec::new();
        for index in 0..saddles.len() {
            let merged =
                |&g: &usize| groups[g].members.iter().any(|&m| within(merged_below, m, index));
            let open_to = |&g: &usize| groups[g].members.len() < largest && merged(&g);
            match open.iter().copied().find(open_to) {
                Some(g) => groups[g].members.push(index),
                None => {
                    open.push(groups.len());
                    groups.push(group(vec![index], None));
                }
            }
        }
        while let Some((a, b)) = nearest(&groups, &open, saddles, largest, APART / least) {
            let (first, second) = (&groups[a], &groups[b]);
            let known = |g: &Group| g.close || g.parts.is_none();
            let close = greatest < SPAN * least
                && known(first)
                && known(second)
                && first
                    .members
                    .iter()
                    .all(|&m| second.members.iter().all(|&n| within(TOGETHER / greatest, m, n)));
            let members = first.members.iter().chain(&second.members).copied().collect();
            open.retain(|&g| g != a && g != b);
            open.push(groups.len());
            groups.push(Group { close, ..group(members, Some((a, b))) });
        }
        for group in &mut groups {
            measure(group, saddles);
        }
        Tree { groups, roots: open }
    }
}

fn group(members: Vec<usize>, parts: Option<(usize, usize)>) -> Group {
    Group {
        members,
        centre: Complex64::new(0.0, 0.0),
        radius: 0.0,
        gap: f64::INFINITY,
        parts,
        close: false,
    }
}

fn measure(group: &mut Group, saddles: &[Saddle]) {
    let sum: Complex64 = group.members.iter().map(|&m| saddles[m].z).sum();
    let centre = sum / group.members.len() as f64;
    group.centre = centre;
    for (index, saddle) in saddles.iter().enumerate() {
        let distance = (saddle.z - centre).norm();
        if group.members.contains(&index) {
            group.radius = group.radius.max(distance);
        } else {
            group.gap = group.gap.min(distance);
        }
    }
}

/// The closest pair of open groups that may be joined.
fn nearest(
    groups: &[Group],
    open: &[usize],
    saddles: &[Saddle],
    largest: usize,
    limit: f64,
) -> Option<(usize, usize)> {
    let mut best = None;
    let mut least = f64::INFINITY;
    for (i, &a) in open.iter().enumerate() {
        for &b in &open[..i] {
            if groups[a].members.len() + groups[b].members.len() > largest {
                continue;
            }
            let mut distance = 0.0f64;
            let mut apart = 0.0f64;
            for &m in &groups[a].members {
                for &n in &groups[b].members {
                    distance = distance.max((saddles[m].z - saddles[n].z).norm());
                    apart = apart.max((saddles[m].value - saddles[n].value).norm());
                }
            }
            if apart < limit && distance < least {
                least = distance;
                best = Some((b, a));
            }
        }
    }
    best
}
