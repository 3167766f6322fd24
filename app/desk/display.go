package desk

import (
	"errors"
	"fmt"
	"net"
	"os"
	"runtime"
	"strconv"
	"strings"
)

// ErrNoDisplay marks that there is no screen to open a window on.
var ErrNoDisplay = errors.New("no display")

// HasDisplay tells, before the toolkit is touched, why no window can be
// opened; nil if nothing speaks against it. Where windows do not come from X
// or Wayland it leaves the answer to the system.
func HasDisplay() error {
	switch runtime.GOOS {
	case "windows", "darwin":
		return nil
	}
	display := os.Getenv("DISPLAY")
	switch {
	case os.Getenv("WAYLAND_DISPLAY") != "":
		return nil
	case display == "":
		return fmt.Errorf("%w: neither DISPLAY nor WAYLAND_DISPLAY is set", ErrNoDisplay)
	}
	if err := dialX(display); err != nil {
		return fmt.Errorf("%w: DISPLAY is %q, but nothing answers there", ErrNoDisplay, display)
	}
	return nil
}

// dialX connects to an X server named as in DISPLAY, "host:number.screen",
// and hangs up.
func dialX(display string) error {
	const firstPort = 6000 // X11 over TCP
	host, rest, found := strings.Cut(display, ":")
	if strings.HasPrefix(display, "/") || !found {
		return nil // other forms (a socket's path) are the system's to judge
	}
	number, _, _ := strings.Cut(rest, ".")
	n, err := strconv.Atoi(number)
	if err != nil {
		return err
	}
	dials := [][2]string{{"tcp", net.JoinHostPort(host, strconv.Itoa(firstPort+n))}}
	if host == "" || host == "unix" {
		socket := "/tmp/.X11-unix/X" + number
		dials = [][2]string{{"unix", socket}, {"unix", "@" + socket}}
	}
	for _, d := range dials {
		var c net.Conn
		if c, err = net.Dial(d[0], d[1]); err == nil {
			return c.Close()
		}
	}
	return err
}
