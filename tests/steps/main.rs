//! Preparation steps, measures and stability against reference values, and the laws of steps.

mod catalogue; // steps on rows and along the axis against general-purpose libraries
mod class; // the class of every step, and that nothing is learnt from held-out samples
mod interval; // intervals for a new sample, and for the error of a procedure
mod learned; // steps that learn from samples against general-purpose libraries
mod measure; // measures against reference values
mod null; // nothing is claimed where there is nothing to find
mod order; // remarks on the order of steps
mod preprocess; // steps against reference values
mod proof; // chains, plans and the run-time proof together
mod stability; // stability index and bounds against reference values
mod support; // reading reference values; comparing numbers
