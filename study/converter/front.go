package converter

type FrontEnd struct{}
type frontState struct{}
type SwitchingLine struct{}

func (f *frontState) admittance(h int) [3][3]complex128              { return [3][3]complex128{} }
func solveFront(n Nameplate, t Terminal, o Options) (*Result, error) { return nil, nil }
