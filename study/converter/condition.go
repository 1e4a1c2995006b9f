package converter

import "fmt"

// Condition names why a converter has no steady state, or none that could be
// trusted.
type Condition string

// The conditions that Solve names.
const (
	BadValue       Condition = "bad value"
	BadSupply      Condition = "bad supply"
	StiffSupply    Condition = "no reactor and a stiff supply"
	NoCapacitor    Condition = "no capacitor"
	HugeCapacitor  Condition = "enormous capacitor"
	NoLoad         Condition = "no load"
	NoConduction   Condition = "no conduction"
	FullOverlap    Condition = "full overlap"
	WeakSupply     Condition = "supply too weak"
	Unstable       Condition = "unstable"
	NotSettled     Condition = "not settled"
	FailedItsCheck Condition = "failed its check"
)

// ConditionError is a named condition with its physical reason.
type ConditionError struct {
	Condition  Condition
	Field      string  // field of Nameplate or Terminal at fault, where one is
	Reason     string  // what happens, physically
	Remedy     string  // what to do about it
	AvailableW float64 // WeakSupply: most power that the supply can deliver
}

// Error returns the condition, the reason and the remedy.
func (e *ConditionError) Error() string {
	s := string(e.Condition)
	if e.Field != "" {
		s += " (" + e.Field + ")"
	}
	s += ": " + e.Reason
	if e.Remedy != "" {
		s += "; " + e.Remedy
	}
	return s
}

func condition(c Condition, field, remedy, reason string, args ...any) *ConditionError {
	return &ConditionError{Condition: c, Field: field, Remedy: remedy, Reason: fmt.Sprintf(reason, args...)}
}
