//! **isomargin** splits one budget across activities so that the last unit earns the same
//! everywhere, and proves the answer.
//!
//! # The problem
//!
//! Activity `i` takes `spend` x_i and gives the concave return r_i(x_i). The constraints
//! k = 1…m limit what the activities use together:
//!
//! ```text
//! maximise   R(x) = Σ w_i r_i(x_i)
//! subject to Σ a_ki x_i  ≤ = ≥  b_k
//!            floor_i ≤ x_i ≤ cap_i
//! ```
//!
//! At the optimum every activity strictly between its floor and its cap earns the same at the
//! margin, w_i r_i'(x_i) = Σ_k λ_k a_ki. λ_k is the *shadow price* of constraint k: the
//! derivative of the best total with respect to that constraint's limit. With
//! [`Aim::Minimise`](model::Aim) the curves are convex costs, the best total is the least cost,
//! and the same sentence holds.
//!
//! # The journey of a plan, and the modules in its order
//!
//! | module | what happens there |
//! |---|---|
//! | [`numeric`] | sums that do not depend on the number of threads, numbers written for people |
//! | [`curves`] | the return curves, one family a file behind the contract [`curves::ReturnCurve`] |
//! | [`model`] | [`model::Problem`], the only validated form of a plan, and [`model::Solution`] |
//! | [`input`] | tables and plan files read into a problem; every fault with file, line and column |
//! | [`solver`] | from a problem to a solution, by bisection on the shadow price |
//! | [`certificate`] | the proof, recomputed from problem, spends and prices alone |
//! | [`sensitivity`] | what one more and one less unit is worth, and how far that holds |
//! | [`report`] | the findings as plain data, and their renderings |
//! | [`charts`] | the pictures, one a file, drawn once for PNG and SVG |
//! | [`cli`] | arguments, terminal, clock and exit status |
//!
//! # As a library
//!
//! ```
//! use isomargin::certificate::{CrossCheck, Verdict, certify};
//! use isomargin::curves::{Curve, Log, LogParams};
//! use isomargin::model::{Activity, Aim, Constraint, Problem};
//! use isomargin::solver::solve;
//!
//! // S. Boyd and L. Vandenberghe, Convex Optimization, 2004, Example 5.2: channels with noise
//! // .8, 1 and 1.2 and a power of 1 in all.
//! let channels = [0.8, 1.0, 1.2].map(|scale| {
//!     let curve = Log::new(LogParams { gain: 1.0, scale }).map(Curve::Log);
//!     curve.map(|curve| Activity::new(format!("noise {scale}"), curve))
//! });
//! let activities = channels.into_iter().collect::<Result<Vec<_>, _>>()?;
//! let plan = Problem::new(Aim::Maximise, activities, vec![Constraint::budget(1.0)])
//!     .map_err(|faults| faults[0].clone())?;
//! let solution = solve(&plan)?;
//! assert!((solution.spends[0] - 8.0 / 15.0).abs() < 1e-14);
//! assert!((solution.shadow_prices[0] - 0.75).abs() < 1e-14);
//! let certificate = certify(&plan, &solution, CrossCheck::WhenQuick);
//! assert_eq!(certificate.verdict, Verdict::Proven);
//! # Ok::<(), Box<dyn std::error::Error>>(())
//! ```

pub mod certificate;
pub mod charts;
pub mod cli;
pub mod curves;
pub mod input;
pub mod model;
pub mod numeric;
pub mod report;
pub mod sensitivity;
pub mod solver;
