package report

import (
	"strings"
	"testing"
)

func TestHTMLListsTheEvidence(t *testing.T) {
	page := htmlPage(t, "quadrature")
	from, to := strings.Index(page, `<h3 id="evidence">`), strings.Index(page, `<section id="figures"`)
	if from < 0 || to < from {
		t.Fatal("no evidence between findings and figures")
	}
	for _, want := range []string{">offset</th>", ">series resistance</th>", "the bench&#39;s</td>", "resistive pick-up explains as much (weight 1)", "fall of χ²", "what decides it"} {
		if !strings.Contains(page[from:to], want) {
			t.Errorf("the evidence lacks %q", want)
		}
	}
	if !strings.Contains(page, "Akaike weights") || !strings.Contains(page, "Burnham and D. R. Anderson") {
		t.Error("the method does not say how causes are ranked")
	}
	if strings.Contains(htmlPage(t, "one-amplitude"), `id="evidence"`) {
		t.Error("a table of no evidence")
	}
}
