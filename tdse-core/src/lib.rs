//! Time-dependent Schrödinger equation of one active electron in a strong laser field.
//!
//! # Conventions
//!
//! Atomic units inside (CODATA 2022); electron charge -1, dipole d = -⟨r⟩.
//! H = p²/2 + V(r) + r·E(t) in length gauge, (p + A)²/2 + V in velocity gauge, E = -dA/dt.
//! A pulse is defined by its vector potential ([`field::Pulse`]), so no pulse has a net area; t = 0 is the envelope
//! centre of a pulse without delay. Intensity is cycle-averaged at the envelope's peak, ½ ε₀ c E0², whatever the
//! ellipticity. Fourier transforms in space are forward e^{-ikx}; spectra use a(ω) = ∫ a(t) w(t) e^{iωt} dt.
//! The dipole acceleration is d²d/dt² = ⟨∇V⟩ + E(t) N(0), with the initial norm: what an absorber took is still driven.
//! Scattering states have incoming-wave boundary condition and ∫ψ_k* ψ_k' dx = δ(k - k'), so that ∫|a(k)|² dk is a norm.
//! Arrays over a grid are flat with shape `[ny, nx]`; vectors are `[f64; 2]`, the second component zero in 1D.
//!
//! A wrong call by a programmer panics with the broken inequality; wrong input is a `Result`.
//! This crate never prints, opens no file and knows no clock.

pub mod absorber;
pub mod choose;
pub mod compare;
pub mod cubic;
pub mod elements;
pub mod field;
pub mod grid;
pub mod model;
pub mod outgoing;
pub mod potential;
pub mod problem;
mod quadrature;
pub mod quantities;
pub mod refine;
pub mod simulate;
pub mod spectrum;
pub mod stationary;
pub mod step;
pub mod units;
pub mod watch;
