package report

import (
	"fmt"

	"rungproof/calib"
	"rungproof/calib/plan"
)

// method says in plain sentences how the result was found.
func method(e *calib.Evaluation) []pair {
	p, r := e.Plan, e.Result
	out := []pair{
		{"Principle", "A generator of known amplitude drives a ladder of known resistors, and the detector reads the drop at one of the ladder's joints. " +
			"The expected drop follows from the network of all arms, wires and stray capacitances, loaded by the detector's input, at the frequency of each step and at room temperature."},
		{"Model", measurementModel(p)},
		{"Why several amplitudes", "An offset is the same at every step, while the drop on a series resistance grows with the current: steps at several amplitudes, with the reference turned, or with the source off tell the two apart. " +
			"They count as told apart where leaving the series resistance free makes the offset's uncertainty no more than 20 times as large."},
		{"Fit", "Gain, offset and series resistance are estimated together with all uncertain inputs by least squares. Each input's stated value counts as a further observation, weighted by its uncertainty; errors that several inputs share move them together. " +
			"Beside it stand the fits with a gain for each range and each frequency."},
		{"Uncertainty", fmt.Sprintf("The covariance of that one problem carries the scatter of the readings, the inputs and all correlations. "+
			"The scatter of one reading is predicted from noise, bandwidth of the filter, resolution and short-term stability; repeats reduce all but the resolution, and their observed scatter is tested against the prediction. "+
			"A tolerance is a rectangular distribution, with its half-width over √3 for its standard uncertainty. U = k·u for a coverage of %.4g %%: k is Student's t at the effective degrees of freedom (the Welch–Satterthwaite formula, GUM, G.4.1), and the normal factor where these are infinite. "+
			"Where one rectangular input is so large that all others together have at most 0.3 of its standard uncertainty, a normal distribution would give too large an interval (EA-4/02, S9): "+
			"there k comes from the convolution of that rectangle with the rest.", 100*r.Coverage)},
		{"Error", "A step's error is its mean reading less the reading expected there with every input at its stated value: the standards are not corrected by the instrument under test. " +
			"The fitted series resistance is the bench's and is counted as part of what is expected."},
	}
	if !r.NoSignal {
		out = append(out, pair{"Causes", "What can be wrong with a detector, a bench or readings is a list of terms of the model. The readings are fitted as those of a detector and a bench without fault, and each term is tried beside that: a cause weighs by how far χ² falls. " +
			"The weightiest is added and the others are tried again, as long as one is beyond chance. The level for that is shared out between the causes (Bonferroni) and within a cause between its variants (Šidák), so that readings without fault name any cause in under 5 % of all cases. " +
			"Where the readings fit worse than their uncertainties say, falls are taken relative to what is left. Rivals stand beside a cause with their Akaike weights; of causes that explain as much, the one that is met most is named first."})
	}
	if len(r.Budgets) > 0 {
		out = append(out, pair{"Uncertainty budgets", "Each line of a budget is one input that is independent of all others. Its contribution is its standard uncertainty times the change of the result with the input (the sensitivity); " +
			"contributions add by their squares, and a share is one square of the sum of all. What an improvement would bring is found by doing the whole estimate again with that one standard uncertainty a fifth of what it is: " +
			"the fit then weights the readings anew, so that it can bring more than its share."})
	}
	if r.MonteCarlo != nil {
		out = append(out, pair{"Monte Carlo", "The propagation of distributions (JCGM 101): in each trial every input and every mean reading is drawn from its own distribution, a scaled and shifted t where its uncertainty has degrees of freedom, and the full estimate is made again. " +
			"The results of all trials are the distribution of the result, whose interval needs neither linearity nor a coverage factor. The linear interval is validated to a number of digits where both of its ends agree with that of the trials within half a unit of the last of so many digits of u (clause 8). " +
			"Offset and series resistance are also looked at together (JCGM 102): about 95 % of the trials are to lie in the ellipse that the linear covariance gives for 95 %."})
	}
	if len(p.Detector.Limits) > 0 {
		out = append(out, pair{"Decision", decisionRule(p)})
	}
	return append(out, pair{"Validity", "The result holds for the detector named here, as it was at the time and in the circumstances stated."})
}

// measurementModel is the measurement model in the terms of what the detector reads.
func measurementModel(p *plan.Plan) string {
	const drop = "V is the drop, which the unknown series resistance r is part of; g is the detector's gain, o its offset and e the scatter. "
	switch p.Detector.Reads {
	case plan.TwoPhase:
		return "z = g·|V|·exp(j(φ + arg V − θ)) + o + e. " + drop +
			"φ is the phase between generator and reference, fitted for each frequency, and θ the phase that a step sets. The error is along the expected reading; what lies across it is the phase error."
	case plan.Magnitude:
		return "r = mean of |g·V + o + e|. " + drop + "Noise makes a magnitude read high (Rice's distribution); the model holds that mean, and the error has it taken off."
	}
	return "x = g·V·cos θ·(1 − a) + o + e. " + drop + "θ is the phase of the reference from where it was turned to maximum, and a the loss from setting that maximum with limited care."
}

// references are the publications that the result rests on.
func references(e *calib.Evaluation) []string {
	out := []string{
		"JCGM 100:2008, Evaluation of measurement data — Guide to the expression of uncertainty in measurement",
		"EA-4/02 M:2022, Evaluation of the uncertainty of measurement in calibration",
		"ISO/IEC 17025:2017, General requirements for the competence of testing and calibration laboratories",
		"S. W. Director and R. A. Rohrer, The generalized adjoint network and network sensitivities, IEEE Trans. Circuit Theory 16 (1969) 318–323",
	}
	if !e.Result.NoSignal {
		out = append(out, "H. Akaike, A new look at the statistical model identification, IEEE Trans. Automatic Control 19 (1974) 716–723",
			"K. P. Burnham and D. R. Anderson, Model Selection and Multimodel Inference, 2nd edition, Springer, 2002",
			"Z. Šidák, Rectangular confidence regions for the means of multivariate normal distributions, J. Amer. Statist. Assoc. 62 (1967) 626–633")
	}
	if e.Result.MonteCarlo != nil {
		out = append(out, "JCGM 101:2008, Supplement 1 to the Guide — Propagation of distributions using a Monte Carlo method",
			"JCGM 102:2011, Supplement 2 to the Guide — Extension to any number of output quantities")
	}
	if len(e.Plan.Detector.Limits) > 0 {
		out = append(out, "JCGM 106:2012, Evaluation of measurement data — The role of measurement uncertainty in conformity assessment",
			"ILAC-G8:09/2019, Guidelines on decision rules and statements of conformity")
	}
	for _, w := range e.Plan.Wires {
		if w.TempCo != 0 { // computed from its conductor
			return append(out, "IEC 60028, International standard of resistance for copper",
				"ASTM B258, Standard nominal diameters and cross-sectional areas of AWG sizes of solid round wires used as electrical conductors")
		}
	}
	return out
}
