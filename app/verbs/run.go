package verbs

import (
	"annulet/app/output"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"path/filepath"
	"strings"
	"syscall"

	"github.com/spf13/cobra"

	"annulet/app/files"
	"annulet/geodesic/guard"
)

// Version is that of the programs.
const Version = output.Version

// Exit codes.
const (
	exitDone     = 0
	exitCouldNot = 1
	exitUsage    = 2 // bad usage or scene
)

// usage marks an error that is the request's fault.
type usage struct{ err error }

func (u usage) Error() string { return u.err.Error() }
func (u usage) Unwrap() error { return u.err }

// refuse returns a usage error.
func refuse(format string, args ...any) error {
	return usage{fmt.Errorf(format, args...)}
}

// streams is where a run reads and writes.
type streams struct {
	in        io.Reader
	out, err  io.Writer
	onlyBelow *string // the folder that a scene's files must lie in; nil or "" for anywhere
}

// note prints a line beside the result.
func (s streams) note(format string, args ...any) {
	fmt.Fprintf(s.err, format+"\n", args...)
}

// Run does what the arguments (without the program's name) ask and returns
// the exit code. An interrupt or a termination signal cancels the work.
func Run(args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	ctx, stop := interruptible()
	defer stop()
	return run(ctx, args, streams{in: stdin, out: stdout, err: stderr})
}

// interruptible returns a context that the first interrupt or termination
// signal cancels. A second one ends the program at once, without waiting for
// the work; temporary files are still removed.
func interruptible() (ctx context.Context, stop func()) {
	ctx, cancel := context.WithCancel(context.Background())
	signals := make(chan os.Signal, 2)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	go func() {
		select {
		case <-signals:
			cancel()
		case <-ctx.Done():
			return
		}
		if _, again := <-signals; again {
			files.Abandon()
			os.Exit(exitCouldNot)
		}
	}()
	return ctx, func() {
		signal.Stop(signals)
		cancel()
		close(signals)
	}
}

// run is Run under a context of the caller's.
func run(ctx context.Context, args []string, s streams) int {
	root := newRoot(s)
	root.SetArgs(args)
	begun := false // everything cobra finds wrong before that is usage
	root.PersistentPreRun = func(*cobra.Command, []string) { begun = true }

	err := guard.Work(func() error { return root.ExecuteContext(ctx) })()
	if err == nil {
		return exitDone
	}
	if ctx.Err() != nil {
		s.note("%s: interrupted, nothing left behind", root.Name())
		return exitCouldNot
	}
	s.note("%s: %s", root.Name(), strings.TrimSpace(err.Error()))
	if !begun || errors.As(err, new(usage)) {
		return exitUsage
	}
	return exitCouldNot
}

// IsVerb says whether name is a first argument that Run understands. The
// desk's program opens everything else as a scene.
func IsVerb(name string) bool {
	switch name {
	case "help", "-h", "--help", "--version", cobra.ShellCompRequestCmd, cobra.ShellCompNoDescRequestCmd:
		return true
	}
	for _, c := range newRoot(streams{}).Commands() {
		if c.Name() == name {
			return true
		}
	}
	return false
}

// programName is annulet or annulet-batch, whichever is running.
func programName() string {
	if len(os.Args) > 0 && filepath.Base(os.Args[0]) == "annulet" {
		return "annulet"
	}
	return "annulet-batch"
}

// newRoot returns the whole tree of commands, fresh: flags hold state.
func newRoot(s streams) *cobra.Command {
	s.onlyBelow = new(string)
	root := &cobra.Command{
		Use:   programName(),
		Short: "lensed images of gas around a compact object",
		Long: "Annulet traces light around a black hole, a star or a shell: single paths,\n" +
			"lines of sight through a scene, whole images, and grids of them; and tells\n" +
			"clocks, rulers and light times at any radius. SCENE is a TOML file or a built-in\n" +
			"scene, named with an @ (see scene list).\n\n" + notIncludedLine,
		Version:       Version,
		SilenceUsage:  true,
		SilenceErrors: true,
		Args:          cobra.ArbitraryArgs,
		RunE:          groupOnly,
	}
	root.SetIn(s.in)
	root.SetOut(s.out)
	root.SetErr(s.err)
	root.SetVersionTemplate("annulet {{.Version}}\n")
	root.CompletionOptions.DisableDefaultCmd = true
	root.PersistentFlags().StringVar(s.onlyBelow, "only-below", "", "refuse scenes that name files (sky, table, uv) outside the folder `DIR`, links followed")
	root.AddCommand(
		newTrace(s), newProbe(s), newRender(s), newFigure(s), newScene(s),
		newStations(s), newSweep(s), newBench(s), newAudit(s),
		newRings(s), newLine(s), newCut(s), newVisibility(s), newCompare(s), newSpectrum(s), newLightcurve(s),
		newVersion(s), newCompletion(s), newMan(s),
	)
	return root
}

// groupOnly is what a command does that has only subcommands.
func groupOnly(cmd *cobra.Command, args []string) error {
	var names []string
	for _, c := range cmd.Commands() {
		if c.IsAvailableCommand() {
			names = append(names, c.Name())
		}
	}
	allowed := strings.Join(names, ", ")
	if len(args) == 0 {
		return refuse("what shall be done? One of: %s (%s --help tells more)", allowed, cmd.CommandPath())
	}
	return refuse("%s has no verb %q; allowed: %s", cmd.CommandPath(), args[0], allowed)
}

// takes refuses any but n arguments, which what names.
func takes(n int, what string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		if len(args) == n {
			return nil
		}
		if n == 0 {
			return refuse("%s takes no argument, got %q", cmd.CommandPath(), args[0])
		}
		return refuse("%s takes %s, got %d arguments", cmd.CommandPath(), what, len(args))
	}
}
