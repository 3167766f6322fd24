package sweep

import (
	"encoding/json"
	"os"
	"strconv"
	"strings"
)

// identity names one process among all hosts.
type identity struct {
	Host    string `json:"host"`    // for people
	Machine string `json:"machine"` // this boot of it and its space of process numbers; "" where the system does not tell
	Process int    `json:"process"`
	Started string `json:"started"` // ticks after boot: process numbers come again
}

// self is the identity of this process. Linux tells all of it, see proc(5);
// elsewhere Machine is empty and only counts tell who lives.
func self() identity {
	id := identity{Process: os.Getpid()}
	id.Host, _ = os.Hostname() // for people only
	boot, err := os.ReadFile("/proc/sys/kernel/random/boot_id")
	space, err2 := os.Readlink("/proc/self/ns/pid")
	started, ok := startOf(id.Process)
	if err == nil && err2 == nil && ok {
		id.Machine, id.Started = strings.TrimSpace(string(boot))+" "+space, started
	}
	return id
}

func (id identity) String() string {
	text, err := json.Marshal(id)
	if err != nil {
		panic(err) // strings and an int
	}
	return string(text)
}

func parseIdentity(text string) (id identity, ok bool) {
	return id, json.Unmarshal([]byte(text), &id) == nil && id.Process > 0
}

func (id identity) sameMachine(other identity) bool {
	return id.Machine != "" && id.Machine == other.Machine
}

// running says whether the process, of this machine, still runs.
func (id identity) running() bool {
	started, ok := startOf(id.Process)
	return ok && started == id.Started
}

// startOf reads field 22 of /proc/PID/stat; the second field, in brackets,
// may hold anything. A process that has ended and waits for its parent (Z)
// does not run.
func startOf(process int) (ticks string, ok bool) {
	text, err := os.ReadFile("/proc/" + strconv.Itoa(process) + "/stat")
	if err != nil {
		return "", false
	}
	rest := string(text)[strings.LastIndexByte(string(text), ')')+1:]
	fields := strings.Fields(rest)
	const state, start = 0, 19 // after the second field
	if len(fields) <= start || fields[state] == "Z" || fields[state] == "X" {
		return "", false
	}
	return fields[start], true
}
