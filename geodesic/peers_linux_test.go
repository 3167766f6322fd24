package geodesic

import (
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"runtime"
	"slices"
	"strconv"
	"testing"
	"time"

	"golang.org/x/sys/unix"
)

// peersVariable names the folder of the peers' programs, gsl and odeint, and
// of ref.bin, which make peers fills: impact parameter, swept angle and fate
// of 4000 paths from 1000 M.
const peersVariable = "ANNULET_PEERS"

// delivery is what one method delivers at one tolerance.
type delivery struct{ perSecond, median float64 }

var peerLine = regexp.MustCompile(`rays_s=(\S+) .*mederr=(\S+)`)

// BenchmarkPeers compares single paths with the general-purpose integrators
// of GSL and Boost, all on the paths of ref.bin, every round all in turn. It
// reports paths a second of one core, and how many times those of a peer, at
// equal median error.
func BenchmarkPeers(b *testing.B) {
	folder := os.Getenv(peersVariable)
	if folder == "" {
		b.Skip("NOT RUN: " + peersVariable + " is not set: make peers")
	}
	reference := filepath.Join(folder, "ref.bin")
	impacts, angles := readPeers(b, reference)
	methods := []struct {
		name string
		run  func(tolerance float64) delivery
	}{
		{"annulet", func(tolerance float64) delivery { return sweepPeers(impacts, angles, tolerance) }},
		{"odeint-dopri5", func(tolerance float64) delivery {
			return runPeer(b, filepath.Join(folder, "odeint"), "controlled", tolerance, reference)
		}},
		{"gsl-rk8pd", func(tolerance float64) delivery {
			return runPeer(b, filepath.Join(folder, "gsl"), "rk8pd", tolerance, reference)
		}},
	}
	const steps = 15 // two a decade
	got := make([][steps]delivery, len(methods))
	rates := make([][steps][]float64, len(methods))
	for b.Loop() {
		for step := range steps {
			for k, m := range methods {
				got[k][step] = m.run(math.Pow(10, -5-float64(step)/2))
				rates[k][step] = append(rates[k][step], got[k][step].perSecond)
			}
		}
	}
	for _, median := range []float64{1e-7, 1e-9, 1e-10} {
		var ours float64
		for k, m := range methods {
			for step := range got[k] {
				slices.Sort(rates[k][step])
				got[k][step].perSecond = rates[k][step][len(rates[k][step])/2]
			}
			rate := rateAt(got[k][:], median)
			if k == 0 {
				ours = rate
				b.ReportMetric(rate, fmt.Sprintf("paths/s@%.0e", median))
				continue
			}
			b.ReportMetric(ours/rate, fmt.Sprintf("x-%s@%.0e", m.name, median))
		}
	}
}

// rateAt interpolates the rate at a median error, both as logarithms.
func rateAt(all []delivery, median float64) float64 {
	for k := 1; k < len(all); k++ {
		from, to := all[k-1], all[k]
		if to.median <= median && median <= from.median {
			share := math.Log(from.median/median) / math.Log(from.median/to.median)
			return from.perSecond * math.Pow(to.perSecond/from.perSecond, share)
		}
	}
	return math.NaN()
}

func readPeers(b *testing.B, path string) (impacts, angles []float64) {
	file, err := os.Open(path)
	if err != nil {
		b.Fatal(err)
	}
	defer file.Close()
	paths := make([][3]float64, 4000)
	if err := binary.Read(file, binary.LittleEndian, paths); err != nil {
		b.Fatal(err)
	}
	for _, p := range paths {
		impacts, angles = append(impacts, p[0]), append(angles, p[1])
	}
	return impacts, angles
}

// peerTime is how long a method is timed at one tolerance and in one round.
const peerTime = 200 * time.Millisecond

func sweepPeers(impacts, angles []float64, tolerance float64) delivery {
	runtime.LockOSThread()
	defer runtime.UnlockOSThread()
	now := func() time.Duration {
		var t unix.Timespec
		if err := unix.ClockGettime(unix.CLOCK_THREAD_CPUTIME_ID, &t); err != nil {
			panic(err) // the arguments are constants
		}
		return time.Duration(t.Nano())
	}
	swept, captured := make([]float64, len(impacts)), make([]bool, len(impacts))
	begun, rounds := now(), 0
	for ; now()-begun < peerTime; rounds++ {
		SweepAll(1e-3, 1/2.0001, tolerance, impacts, swept, captured)
	}
	took := now() - begun
	off := make([]float64, len(swept))
	for k := range swept {
		off[k] = math.Abs(swept[k] - angles[k])
	}
	slices.Sort(off)
	return delivery{float64(rounds*len(impacts)) / took.Seconds(), off[len(off)/2]}
}

func runPeer(b *testing.B, program, method string, tolerance float64, reference string) delivery {
	out, err := exec.Command(program, method, "4000", "F2", fmt.Sprint(tolerance), reference, fmt.Sprint(peerTime.Seconds())).CombinedOutput()
	found := peerLine.FindSubmatch(out)
	if err != nil || found == nil {
		b.Fatalf("%s: %v, %q", program, err, out)
	}
	rate, err1 := strconv.ParseFloat(string(found[1]), 64)
	median, err2 := strconv.ParseFloat(string(found[2]), 64)
	if err1 != nil || err2 != nil {
		b.Fatalf("%s: %q", program, out)
	}
	return delivery{rate, median}
}
