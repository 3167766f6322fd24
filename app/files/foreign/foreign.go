// Package foreign lets tests ask programs of others what they make of our
// files. In CI they must be there; elsewhere the test is not run and says so.
package foreign

import (
	"os"
	"os/exec"
	"testing"
)

// Run returns what a program printed, and fails the test if it failed.
func Run(t *testing.T, name string, args ...string) string {
	t.Helper()
	if _, err := exec.LookPath(name); err != nil {
		missing(t, name)
	}
	out, err := exec.Command(name, args...).CombinedOutput()
	if err != nil {
		t.Fatalf("%s: %v: %s", name, err, out)
	}
	return string(out)
}

// Python runs a program that needs a module of Debian's, with warnings as
// errors.
func Python(t *testing.T, module, program string, args ...string) string {
	t.Helper()
	const interpreter = "/usr/bin/python3" // Debian's, for which its modules are
	if exec.Command(interpreter, "-c", "import "+module).Run() != nil {
		missing(t, "Python's "+module)
	}
	return Run(t, interpreter, append([]string{"-W", "error", "-c", program}, args...)...)
}

func missing(t *testing.T, what string) {
	t.Helper()
	if os.Getenv("CI") == "true" {
		t.Fatalf("%s is not here; sh .ci/setup test installs it", what)
	}
	t.Skipf("NOT RUN: %s is not here", what)
}
