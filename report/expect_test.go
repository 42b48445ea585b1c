package report

import (
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/plan"
)

func expectText(t testing.TB, text string) (string, *calib.Expectation) {
	t.Helper()
	p, err := plan.Parse("plan.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	x, err := calib.Expect(p)
	if err != nil {
		t.Fatal(err)
	}
	return Expect(p, x), x
}

func TestExpectStatesTheGlobalRisks(t *testing.T) {
	arrival := htmlRead(t, "arrival.toml")
	with, x := expectText(t, replaced(t, arrival, `rule = "guarded"`, "rule = \"guarded\"\nprior = { reading = \"1 %\", range = \"0.5 %\" }"))
	narrow(t, with)
	consumer, producer := &x.Steps[0], &x.Steps[0]
	for i := range x.Steps {
		if s := &x.Steps[i]; s.Global.Consumer > consumer.Global.Consumer {
			consumer = s
		}
		if s := &x.Steps[i]; s.Global.Producer > producer.Global.Producer {
			producer = s
		}
	}
	for _, want := range []string{
		"Risks of the rule (guarded acceptance, w = U), for detectors whose errors have a\n  standard deviation of 1.0 % of the value applied plus 0.50 % of full scale\n  (the prior)\n",
		"\n  accepted though bad (consumer's risk)   " + probability(consumer.Global.Consumer) + " at most, at " + consumer.ID + "\n",
		"\n  rejected though good (producer's risk)  " + probability(producer.Global.Producer) + " at most, at " + producer.ID + "\n",
	} {
		if !strings.Contains(with, want) {
			t.Errorf("%q is missing in\n%s", want, with)
		}
	}
	if without, _ := expectText(t, arrival); strings.Contains(without, "risk") {
		t.Error("risks without a prior")
	}
}
