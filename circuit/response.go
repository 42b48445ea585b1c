package circuit

// Response is what the ladder does at one frequency, per volt of the generator's EMF.
//
// Arms lies in the Workspace, and so do the currents behind [Response.Sensitivity] and [Response.Power]: all hold until the Workspace is used
// again.
type Response struct {
	H              complex128   // 1, voltage at the detector's input
	Z              complex128   // Ω, output impedance at the detector's input terminals, the input connected and the EMF at zero
	InputImpedance complex128   // Ω, all that the EMF sees, source resistance and detector included
	Arms           []complex128 // A/V, current of each arm's element, R with L and C; 0 in a Tap
	Source         complex128   // A/V, out of the generator, and back to it through Return; ReturnSeen carries Source − Detector
	Detector       complex128   // A/V, in the sense lead, out of the ladder

	ws    *Workspace
	solve int // of ws
}

// Solve gives the ladder's response at f Hz, 0 for DC. ws may be nil.
func (l *Ladder) Solve(f float64, ws *Workspace) Response {
	if ws == nil {
		ws = new(Workspace)
	}
	h, z := ws.solve(l, f)
	detector := ws.load * h
	source := ws.drive - detector*ws.sourceShare
	currents := ws.currents[:len(ws.branches)]
	for k := range currents {
		b := &ws.branches[k]
		currents[k] = ws.drive*b.driven - detector*b.injected
	}
	return Response{
		H: h, Z: z, InputImpedance: 1 / source,
		Arms: currents, Source: source, Detector: detector,
		ws: ws, solve: ws.solves,
	}
}

// Transfer gives only H of [Ladder.Solve]. ws may be nil.
func (l *Ladder) Transfer(f float64, ws *Workspace) complex128 {
	if ws == nil {
		ws = new(Workspace)
	}
	h, _ := ws.solve(l, f)
	return h
}

// workspace returns the Response's workspace, which must not have been used since.
func (r *Response) workspace() *Workspace {
	if r.ws == nil || r.solve != r.ws.solves {
		panic("circuit: the Response is outdated: its Workspace has been used again")
	}
	return r.ws
}
