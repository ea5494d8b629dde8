//! Somadawn: an agent-based, spatial model of germ-soma specialization in colonies of cells.
//!
//! The rooms, from the ground up (a room uses those below it only):
//! [`theory`], [`tissue`], [`stats`], [`scenario`], [`world`], [`record`], [`evolution`],
//! [`study`], [`report`], [`commands`].

pub mod commands;
pub mod evolution;
pub mod record;
pub mod report;
pub mod scenario;
pub mod stats;
pub mod study;
pub mod theory;
pub mod tissue;
pub mod world;
