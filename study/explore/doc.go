// Package explore evaluates one study many times: every set of its measures in
// every operating state, sizes of a component, sweeps of inputs, and random
// draws of what is not known for sure.
//
// Every figure it names comes from the same equations as study.Evaluate: sets
// and draws are solved on a reduced network by low-rank updates (study.Quick),
// which equal the full evaluation to 1e-9, and whatever is put forward (the
// least-cost set, a size) is solved again in full before it is named.
//
// Work runs on all cores, can be cancelled at any moment by its context, and
// has ended, goroutines included, when a function returns. Results do not
// depend on the number of cores.
package explore
