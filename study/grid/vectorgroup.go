package grid

import (
	"fmt"
	"regexp"
	"strconv"
)

// VectorGroup is a parsed IEC 60076 vector group of a two-winding transformer.
type VectorGroup struct {
	HV, LV   byte // 'D', 'Y' or 'Z'
	HVN, LVN bool // neutral brought out (and earthed)
	Clock    int
}

var groupForm = regexp.MustCompile(`^(D|YN?|ZN?)(d|yn?|zn?)(\d{1,2})$`)

// ParseVectorGroup reads a vector group such as Dyn11.
func ParseVectorGroup(text string) (VectorGroup, error) {
	m := groupForm.FindStringSubmatch(text)
	if m == nil {
		return VectorGroup{}, fmt.Errorf("%q is no vector group of a two-winding transformer; write it like Dyn11", text)
	}
	clock, _ := strconv.Atoi(m[3])
	g := VectorGroup{HV: m[1][0], LV: m[2][0] - 'a' + 'A', HVN: len(m[1]) > 1, LVN: len(m[2]) > 1, Clock: clock}
	odd := (g.HV == 'D') != (g.LV == 'D')
	if g.HV == 'Z' || g.LV == 'Z' {
		odd = !((g.HV == 'D') != (g.LV == 'D'))
	}
	if clock > 11 || (clock%2 == 1) != odd {
		return g, fmt.Errorf("%q is impossible: these windings take the clock numbers %s", text, map[bool]string{true: "1, 3, 5, 7, 9, 11", false: "0, 2, 4, 6, 8, 10"}[odd])
	}
	return g, nil
}
