package handout

// placed is a figure with its place in the summary.
type placed struct{}

func (p *printer) singleLine() {}
func (p *printer) evidence()   {}
