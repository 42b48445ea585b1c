package main

import (
	"context"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"os/signal"
	"strconv"
	"strings"
	"time"

	"golang.org/x/term"

	"rungproof/calib"
)

// defaultTrials is what --monte-carlo takes by itself.
const defaultTrials = 1_000_000

// joined gives --monte-carlo its value from the next argument where that is one,
// since the value may be left out.
func joined(args []string) []string {
	var out []string
	for i := 0; i < len(args); i++ {
		if args[i] == "--monte-carlo" && i+1 < len(args) {
			if _, err := trials(args[i+1]); err == nil {
				out = append(out, args[i]+"="+args[i+1])
				i++
				continue
			}
		}
		out = append(out, args[i])
	}
	return out
}

// trials reads a number of trials; 0 is as many as it takes.
func trials(s string) (int, error) {
	if s == "auto" {
		return 0, nil
	}
	n, err := strconv.Atoi(s)
	if err != nil || n < 1000 || n > calib.MostTrials {
		return 0, fmt.Errorf("--monte-carlo: %q is neither auto nor a number of trials from 1000 to %d", s, calib.MostTrials)
	}
	return n, nil
}

// confirm runs the Monte Carlo; an interrupt ends it with what there is.
func (s *streams) confirm(e *calib.Evaluation, asked string, seed uint64) error {
	n, err := trials(asked)
	if err != nil {
		return err
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	bar := newProgress(s.err, "trials")
	defer bar.clear()
	e.Result.MonteCarlo, err = e.MonteCarlo(ctx, calib.MonteCarloOptions{Trials: n, Seed: seed, Progress: bar.show})
	return err
}

// seeded is the source of chance of a command.
func seeded(seed uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, 0)) }

// progress is a bar with the time left, on a terminal only.
type progress struct {
	out   io.Writer // nil where there is no terminal
	what  string
	begun time.Time
	last  time.Time
}

func newProgress(out io.Writer, what string) *progress {
	p := &progress{what: what, begun: time.Now()}
	if f, ok := out.(*os.File); ok && term.IsTerminal(int(f.Fd())) {
		p.out = out
	}
	return p
}

const barWidth = 30

func (p *progress) show(done, total int) {
	now := time.Now()
	if p.out == nil || now.Sub(p.last) < 100*time.Millisecond || done == 0 {
		return
	}
	p.last = now
	full := barWidth * done / max(total, 1)
	left := time.Duration(float64(now.Sub(p.begun)) * float64(total-done) / float64(done)).Round(time.Second)
	fmt.Fprintf(p.out, "\r[%s%s] %d of %d %s, %s left\x1b[K", strings.Repeat("=", full), strings.Repeat(" ", barWidth-full), done, total, p.what, left)
}

func (p *progress) clear() {
	if p.out != nil {
		fmt.Fprint(p.out, "\r\x1b[K")
	}
}
