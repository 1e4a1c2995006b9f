package study

// Kind names a kind of item, in the words that ref tags and messages use.
type Kind string

// The kinds of item, in the order in which they are listed and printed.
const (
	KindSupply        Kind = "supply"
	KindBus           Kind = "bus"
	KindTransformer   Kind = "transformer"
	KindCable         Kind = "cable"
	KindReactor       Kind = "reactor"
	KindCoupler       Kind = "coupler"
	KindLoad          Kind = "load"
	KindMotor         Kind = "motor"
	KindGenerator     Kind = "generator"
	KindNonlinearLoad Kind = "nonlinearLoad"
	KindBank          Kind = "bank"
	KindFilter        Kind = "filter"
	KindMeasure       Kind = "measure"
	KindAssessment    Kind = "assessment"
	KindScan          Kind = "scan"
)
