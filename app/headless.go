package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"slices"
	"strings"

	"quietbus/study"
	"quietbus/study/handout"
)

// The exit codes.
const (
	exitOK       = 0
	exitOver     = 1 // a limit is not met, or could not be assessed
	exitBadInput = 2
	exitInternal = 3
)

const usage = `Quietbus, a workbench for harmonic studies of electrical installations.

  quietbus [STUDY.json]                  open the window, with a study or the demo
  quietbus check STUDY.json              validate and assess a study
  quietbus check FILE.limits.json        validate limits of your own
  quietbus handout STUDY.json -o DIR     write the handout: PDF, figures, tables, results.json
  quietbus version
  quietbus help

check and handout need no display. They take
  --measures as-saved|none|NAME,NAME     which measures are on (as-saved)
and handout takes
  --paper a4|letter                      paper size (a4)

Exit codes: 0 ok, 1 limits not met, 2 bad input, 3 internal failure.

Results need review by a licensed practitioner; local codes and the network
operator's rules come first.
`

// run is the whole program: it returns the exit code and never panics.
func run(args []string, stdout, stderr io.Writer) (code int) {
	defer func() {
		if r := recover(); r != nil {
			fmt.Fprintf(stderr, "quietbus: internal failure: %v\n%s", r, debug.Stack())
			code = exitInternal
		}
	}()
	command := ""
	if len(args) > 0 {
		command = args[0]
	}
	var err error
	switch command {
	case "help", "-h", "-help", "--help":
		fmt.Fprint(stdout, usage)
	case "version", "-version", "--version":
		m := readMeta()
		fmt.Fprintf(stdout, "%s %s\n", m.Name, m.Version)
	case "check":
		code, err = check(args[1:], stdout)
	case "handout":
		code, err = writeHandout(args[1:], stdout)
	default:
		switch {
		case strings.HasPrefix(command, "-"):
			err = badUse("%s is not an option of quietbus", command)
		case len(args) > 1:
			err = badUse("%q is not a command, and only one study can be opened at a time", command)
		default:
			err = openWindow(command)
		}
	}
	if err == nil {
		return code
	}
	complain(stderr, err)
	var internal *InternalError
	if errors.As(err, &internal) {
		return exitInternal
	}
	return exitBadInput
}

// complain prints an error, each of several mistakes on a line of its own.
func complain(w io.Writer, err error) {
	var several study.FieldErrors
	if errors.As(err, &several) {
		for _, e := range several {
			fmt.Fprintln(w, "quietbus:", e)
		}
		return
	}
	fmt.Fprintln(w, "quietbus:", err)
}

// badUse is an error in the command line.
func badUse(format string, args ...any) error {
	return fmt.Errorf(format+"; see quietbus help", args...)
}

// request is a command's common input.
type request struct {
	study    *study.Study
	file     []byte // as read, for the digest in print
	prepared *study.Prepared
	on       []string
	out      string
	paper    handout.Paper
}

// parse reads a command line, in which the study may stand before or after the
// options, and the study that it names.
func parse(command string, args []string) (*request, error) {
	flags := flag.NewFlagSet(command, flag.ContinueOnError)
	flags.SetOutput(io.Discard)
	measures := flags.String("measures", "as-saved", "")
	var out, paper *string
	if command == "handout" {
		out, paper = flags.String("o", "", ""), flags.String("paper", "a4", "")
	}
	var path string
	for rest := args; len(rest) > 0; {
		if err := flags.Parse(rest); err != nil {
			return nil, badUse("%s: %v", command, err)
		}
		if rest = flags.Args(); len(rest) == 0 {
			break
		}
		if path != "" {
			return nil, badUse("%s takes one study, and got %q and %q", command, path, rest[0])
		}
		path, rest = rest[0], rest[1:]
	}
	if path == "" {
		return nil, badUse("%s: name the study file", command)
	}
	r := &request{}
	if out != nil {
		if r.out = *out; r.out == "" {
			return nil, badUse("handout: say where to write it, with -o DIR")
		}
		switch strings.ToLower(*paper) {
		case "a4":
			r.paper = handout.A4
		case "letter":
			r.paper = handout.Letter
		default:
			return nil, badUse("handout: paper %q is not known; use a4 or letter", *paper)
		}
	}
	var err error
	if r.study, err = study.Open(path); err != nil {
		return nil, err
	}
	if r.file, err = os.ReadFile(path); err != nil {
		return nil, err
	}
	if r.on, err = chooseMeasures(r.study, *measures); err != nil {
		return nil, err
	}
	r.prepared, err = study.Prepare(r.study)
	return r, err
}

// chooseMeasures turns the word of the --measures option into names.
func chooseMeasures(s *study.Study, word string) ([]string, error) {
	switch word {
	case "as-saved":
		return s.OnMeasures(), nil
	case "none", "":
		return nil, nil
	}
	var names []string
	for i := range s.Measures {
		names = append(names, s.Measures[i].Name)
	}
	var on []string
	for _, name := range strings.Split(word, ",") {
		name = strings.TrimSpace(name)
		if !slices.Contains(names, name) {
			return nil, badUse("%q is not a measure of this study; it has %s", name, list(names))
		}
		if !slices.Contains(on, name) {
			on = append(on, name)
		}
	}
	return on, nil
}

func list(names []string) string {
	if len(names) == 0 {
		return "none"
	}
	return strings.Join(names, ", ")
}

// evaluate returns the outcomes in every operating state, the normal one first,
// without measures and with those asked for.
func (r *request) evaluate(ctx context.Context) (before, after []*study.Outcome, err error) {
	if before, err = r.prepared.EvaluateAll(ctx, nil); err != nil {
		return nil, nil, err
	}
	if len(r.on) == 0 {
		return before, before, nil
	}
	after, err = r.prepared.EvaluateAll(ctx, r.on)
	return before, after, err
}

// say prints warnings and verdicts and returns the exit code.
func (r *request) say(w io.Writer, before, after []*study.Outcome) int {
	fmt.Fprintf(w, "Measures on: %s\n", list(r.on))
	for _, text := range r.study.Warnings() {
		fmt.Fprintln(w, "Note:", text)
	}
	for i, o := range after {
		for _, text := range o.Warnings {
			if i == 0 {
				fmt.Fprintln(w, "Note:", text)
			} else if !slices.Contains(after[0].Warnings, text) {
				fmt.Fprintf(w, "Note, in the operating state %s: %s\n", o.State, text)
			}
		}
	}
	if len(r.on) == 0 {
		before = nil // it would repeat the same words
	}
	for _, s := range study.VerdictOver(before, after) {
		fmt.Fprintln(w, strings.TrimSpace(s.Text+" "+s.Before))
	}
	if !study.MeetsOver(after) {
		return exitOver
	}
	return exitOK
}

func check(args []string, stdout io.Writer) (int, error) {
	if len(args) == 1 && strings.HasSuffix(args[0], study.LimitFile) {
		return 0, checkLimits(args[0], stdout)
	}
	r, err := parse("check", args)
	if err != nil {
		return 0, err
	}
	before, after, err := r.evaluate(context.Background())
	if err != nil {
		return 0, err
	}
	fmt.Fprintln(stdout, "The study is valid.")
	return r.say(stdout, before, after), nil
}

func writeHandout(args []string, stdout io.Writer) (int, error) {
	r, err := parse("handout", args)
	if err != nil {
		return 0, err
	}
	if err := os.MkdirAll(r.out, 0o755); err != nil {
		return 0, fmt.Errorf("the folder of the handout cannot be made: %w", err)
	}
	before, after, err := r.evaluate(context.Background())
	if err != nil {
		return 0, err
	}
	in := handout.Input{Study: r.study, Before: before[0], After: after[0], BeforeStates: before, AfterStates: after, File: r.file, Version: readMeta().Version}
	if _, err := handout.Write(context.Background(), r.out, in, handout.Options{Paper: r.paper}); err != nil {
		return 0, err
	}
	code := r.say(stdout, before, after)
	fmt.Fprintln(stdout, "Handout written to", r.out)
	return code, nil
}
