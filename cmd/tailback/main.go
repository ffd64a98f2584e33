// Tailback computes where queues form on a road network, how far back they reach, when they clear and what they
// cost. `tailback --help` lists its commands, README.md explains them with a worked example.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"syscall"

	"example.org/tailback/io/studyfile"
	"github.com/alecthomas/kong"
)

// version is the program's own, as in summary.json.
const version = "0.1.0"

// Exit statuses.
const (
	exitFailed = 1 // the run failed or was interrupted
	exitInput  = 2 // bad input or usage
)

// commands are the verbs, each in a file of its own.
type commands struct {
	Check   checkCommand   `cmd:"" help:"Read a study and print what was understood, without a run."`
	Run     runCommand     `cmd:"" help:"Compute a study and write its results."`
	Compare compareCommand `cmd:"" help:"Compute the base and its alternatives, and print and write the differences."`
	Hours   hoursCommand   `cmd:"" help:"Find the hours in which a closure keeps the limits of a policy."`
	Sample  sampleCommand  `cmd:"" help:"Write the demo study into a folder."`

	Version kong.VersionFlag `help:"Print the version and stop."`
}

// session is what every verb may use besides its own flags.
type session struct {
	ctx      context.Context
	out, err *os.File
}

// inputError is a mistake in what the user gave, as opposed to a run that failed.
type inputError struct{ error }

// Unwrap gives the mistake itself.
func (e inputError) Unwrap() error { return e.error }

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	if status := command(session{ctx, os.Stdout, os.Stderr}, os.Args[1:]); status != 0 {
		os.Exit(status)
	}
}

// command parses the arguments, runs their verb and returns the exit status.
func command(s session, args []string) int {
	parser, err := kong.New(&commands{}, kong.Name("tailback"),
		kong.Description("Queues, delay and throughput on a road network, from its geometry and hourly demand."),
		kong.Vars{"version": "tailback " + version},
		kong.Writers(s.out, s.err), kong.ConfigureHelp(kong.HelpOptions{Compact: true}))
	if err != nil {
		panic("tailback: " + err.Error())
	}
	verb, err := parser.Parse(args)
	if err != nil {
		complain(s.err, fmt.Errorf("%w\n  hint: tailback --help lists commands and flags", err))
		return exitInput
	}
	err = verb.Run(s)
	var faults studyfile.Errors
	var input inputError
	switch {
	case err == nil:
		return 0
	case errors.As(err, &faults):
		fmt.Fprintln(s.err, faults) // each begins with its file and line
		return exitInput
	case errors.As(err, &input):
		complain(s.err, err)
		return exitInput
	case errors.Is(err, context.Canceled):
		complain(s.err, errors.New("interrupted: earlier results are as they were"))
		return exitFailed
	}
	complain(s.err, err)
	return exitFailed
}

// complain prints an error to where errors go.
func complain(w io.Writer, err error) {
	fmt.Fprintf(w, "tailback: %v\n", err)
}
