// Package piecewise finds the periodic steady state of a circuit of resistors,
// inductors, capacitors and ideal valves behind three phase voltages with any
// harmonic spectrum.
//
// # Model
//
// A circuit is a set of branch currents c and capacitor voltages v. Time runs
// as the angle theta = w t of the fundamental, so inductors stand as
// reactances and capacitors as susceptances at order 1:
//
//	X c' = K u(theta) + EMF k - R c - S v + (forces of the valves)
//	Y v' = S^T c - G v + Draw k
//
// k = (1, p...) holds the constants: 1 and the free parameters (a direct EMF,
// a load current) that a Control settles. The valves that conduct leave the
// branch currents a subspace c = T y; projecting on it (T^T of the first
// equation) removes the forces of the valves and gives one linear system for
// each set of conducting valves, a mode.
//
// # Exact stepping
//
// In a mode the solution is the response of each order of u in the frequency
// domain plus a transient exp(A theta) xi: both are evaluated exactly, the
// exponential from a ladder of cached steps (scaling and squaring of exp - 1,
// so that slow modes keep their accuracy). Each mode carries watches, linear
// functions that stay positive while the mode holds: the currents of the
// conducting valves, the reverse voltages of the blocking ones. A change of
// sign between two of 240 samples a period, or a dip of the parabola through three of
// them, is refined on the exact solution by safeguarded Newton steps.
//
// # Periodic state
//
// Newton shooting after Aprille and Trick, "Steady-state analysis of nonlinear
// circuits with periodic inputs", Proceedings of the IEEE 60(1), 1972: the
// state at the start of the period, and the free parameters with their
// averaged equations, are corrected by the exact derivative of the state one
// period later. The derivative includes the shift of each switching instant
// (the saltation matrix; Leine and Nijmeijer, Dynamics and Bifurcations of
// Non-Smooth Mechanical Systems, Springer 2004; from memory).
//
// Where the supply allows, only half or a sixth of the period is stepped and
// closed upon itself with the phases exchanged (Symmetry).
//
// The Fourier coefficients of the currents follow from the states at the
// switching instants by partial integration, without sampling; so does the
// linearisation, the response of a periodically time-varying linear system
// (Arrillaga and Watson, Power System Harmonics, 2nd ed., on the harmonic
// domain and its frequency-coupling matrices; from memory).
package piecewise
