package render

// FigureError says why a figure cannot be drawn.
type FigureError struct {
	What   string // what is wrong
	Where  string // in which part of the figure
	Why    string
	Remedy string
	Err    error // cause, if another error is behind it
}

func (e *FigureError) Error() string {
	s := e.Where + ": " + e.What
	if e.Why != "" {
		s += " (" + e.Why + ")"
	}
	if e.Remedy != "" {
		s += "; " + e.Remedy
	}
	return s
}

// Unwrap returns the cause.
func (e *FigureError) Unwrap() error { return e.Err }
