package study

// Validate returns every problem that keeps the study from being evaluated.
func (s *Study) Validate() []*FieldError { return nil }
