// # Steady state from nameplate data
//
// Solve finds the periodic state of a converter in the time domain and returns
// what it draws. Bridges, ac controllers and their smoothing are piecewise
// linear circuits with ideal valves (forward drop as a fixed voltage), stepped
// exactly from one switching instant to the next; the periodic state comes
// from Newton shooting. The method and its sources stand in the package
// comment of internal/piecewise; the behaviour of the circuits is that of
// Arrillaga and Watson, Power System Harmonics, 2nd ed., and of Mohan,
// Undeland and Robbins, Power Electronics, 3rd ed. (both from memory).
//
// Converters with transistors that are switched many times a period are
// modelled by what their current control and their filter do at each order,
// see FrontEnd.
//
// What is left out, and matters: valves recover at once, reactors do not
// saturate, resistances do not rise with the order, snubbers and stray
// capacitance are absent. Results are for engineering judgement by a
// qualified person; measure before relying on them.
package converter
