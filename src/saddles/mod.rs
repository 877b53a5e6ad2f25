//! Where the saddles are, how they group, and which of them a contour needs.

mod certificate;
mod crossings;
mod follow;
mod locate;
mod sheets;
mod topology;
mod trace;
mod tree;

pub(crate) use certificate::Certificate;
pub(crate) use crossings::crossings;
pub use follow::follow;
pub(crate) use locate::locate_few;
pub use locate::{Region, Saddle, locate};
pub(crate) use sheets::{Branch, Sheeting, Sheets, Unrolled};
pub(crate) use topology::{Multiplicities, Topology};
pub(crate) use tree::{Group, Tree};
