package sweep

import (
	"os"
	"path/filepath"
	"testing"
	"time"
)

// put writes a claim of somebody else.
func put(t *testing.T, dir, name string, count int64, who identity) {
	t.Helper()
	if err := os.MkdirAll(filepath.Join(dir, claimsFolder), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, claimsFolder, name), []byte(beatLine(count)+who.String()+"\n"), 0o666); err != nil {
		t.Fatal(err)
	}
}

func taken(t *testing.T, c *claims, name string) bool {
	t.Helper()
	l, err := c.take(name)
	if err != nil {
		t.Fatal(err)
	}
	return l != nil
}

// A claim of a process of this machine lasts as long as the process; another
// one with the same number does not keep it alive.
func TestClaimOfThisMachine(t *testing.T) {
	if self().Machine == "" {
		t.Skip("this system does not tell who runs")
	}
	dir := t.TempDir()
	c := openClaims(dir)
	defer c.close()
	live := self()
	live.Process = os.Getppid()
	live.Started, _ = startOf(live.Process)
	put(t, dir, "live.0", 0, live)
	dead := live
	dead.Started += "1"
	put(t, dir, "dead.0", 0, dead)
	if taken(t, c, "live") {
		t.Error("a live claim was overtaken")
	}
	if !taken(t, c, "dead") {
		t.Error("a dead claim was not overtaken")
	}
	if _, err := os.Stat(filepath.Join(dir, claimsFolder, "dead.1")); err != nil {
		t.Error("it is not of the next generation")
	}
	if other := openClaims(dir); taken(t, other, "dead") {
		t.Error("one case claimed twice")
	} else {
		other.close()
	}
	c.release("dead")
	if left, _ := filepath.Glob(filepath.Join(dir, claimsFolder, "dead.*")); len(left) != 0 {
		t.Errorf("left: %v", left)
	}
}

// A claim of another host lasts as long as its count changes.
func TestClaimOfAnotherHost(t *testing.T) {
	dir := t.TempDir()
	c := openClaims(dir)
	defer c.close()
	c.timeout = 50 * time.Millisecond
	far := identity{Host: "far", Machine: "another boot", Process: 1, Started: "1"}
	put(t, dir, "a.0", 0, far)
	if taken(t, c, "a") {
		t.Error("overtaken at first sight")
	}
	for n := range int64(4) {
		time.Sleep(30 * time.Millisecond)
		put(t, dir, "a.0", n+1, far)
		if taken(t, c, "a") {
			t.Fatal("overtaken while it counts")
		}
	}
	time.Sleep(60 * time.Millisecond)
	if !taken(t, c, "a") {
		t.Error("a count that stands still was not overtaken")
	}
	// an empty claim: its process died between making and writing it
	if err := os.WriteFile(filepath.Join(dir, claimsFolder, "b.0"), nil, 0o666); err != nil {
		t.Fatal(err)
	}
	if taken(t, c, "b") {
		t.Error("an empty claim was overtaken at first sight")
	}
	time.Sleep(60 * time.Millisecond)
	if !taken(t, c, "b") {
		t.Error("an empty claim was not overtaken")
	}
}

// The owner of a claim that was overtaken while it slept notices.
func TestOvertakenNotices(t *testing.T) {
	dir := t.TempDir()
	c := openClaims(dir)
	defer c.close()
	l, err := c.take("a")
	if err != nil || l == nil {
		t.Fatal(l, err)
	}
	if !c.ours(l) {
		t.Error("a fresh claim is not its owner's")
	}
	put(t, dir, "a.1", 0, identity{Host: "far", Machine: "x", Process: 1})
	if c.ours(l) {
		t.Error("an overtaken claim is still its owner's")
	}
}
