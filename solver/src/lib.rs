//! Axisymmetric eddy currents and transient heat by finite elements.
