package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"

	"github.com/spf13/pflag"

	"holdfast/analysis/hold"
	"holdfast/internal/version"
)

// Exit statuses: 0 the answer was given; 1 it could not be, or only in part;
// 2 the command line was misused.
const (
	exitDone   = 0
	exitFailed = 1
	exitMisuse = 2
)

// A misuse is an error of the command line itself.
type misuse struct{ text string }

func (m misuse) Error() string { return m.text }

func misusef(format string, a ...any) error { return misuse{fmt.Sprintf(format, a...)} }

// A terminal is where a command prints: answers on out, the rest on err.
type terminal struct {
	out, err io.Writer
}

// A command is one word of the tool. setup declares its flags and gives the
// function that does the work, with the arguments that are not flags.
type command struct {
	name, args, summary, about string
	setup                      func(*pflag.FlagSet) work
}

type work func(ctx context.Context, t terminal, args []string) error

func commands() []command {
	return []command{checkCommand(), mapCommand(), holdCommand(), batchCommand(), leversCommand(), traceCommand()}
}

// runMain runs the command line and gives the exit status.
func runMain() int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	t := terminal{os.Stdout, os.Stderr}
	err := dispatch(ctx, t, os.Args[1:])
	var m misuse
	var option *hold.OptionError
	switch {
	case err == nil:
		return exitDone
	case errors.As(err, &m), errors.As(err, &option):
		fmt.Fprintln(t.err, "holdfast:", err)
		return exitMisuse
	default:
		fmt.Fprintln(t.err, "holdfast:", err)
		return exitFailed
	}
}

func dispatch(ctx context.Context, t terminal, args []string) error {
	if len(args) == 0 {
		writeOverview(t.err)
		return misusef("no command given")
	}
	switch name := args[0]; name {
	case "help", "--help", "-h":
		return help(t, args[1:])
	case "version", "--version":
		_, err := fmt.Fprintln(t.out, "holdfast", version.Number)
		return err
	default:
		for _, c := range commands() {
			if c.name == name {
				return c.run(ctx, t, args[1:])
			}
		}
		return misusef("there is no command %q; the commands are %s", name, commandNames())
	}
}

func (c command) run(ctx context.Context, t terminal, args []string) error {
	flags := c.flagSet()
	do := c.setup(flags)
	err := flags.Parse(args)
	if errors.Is(err, pflag.ErrHelp) {
		return c.writeHelp(t.out)
	}
	if err != nil {
		return misusef("%s: %v; 'holdfast help %s' lists the options", c.name, err, c.name)
	}
	return do(ctx, t, flags.Args())
}

func (c command) flagSet() *pflag.FlagSet {
	f := pflag.NewFlagSet(c.name, pflag.ContinueOnError)
	f.SortFlags = false
	f.SetOutput(io.Discard)
	f.Usage = func() {}
	return f
}

// oneFile gives the one file name that args must hold.
func oneFile(command string, args []string) (string, error) {
	switch len(args) {
	case 0:
		return "", misusef("%s: which design file? 'holdfast %s FILE'", command, command)
	case 1:
		return args[0], nil
	}
	return "", misusef("%s: one design file at a time, not %s", command, strings.Join(args, " "))
}
