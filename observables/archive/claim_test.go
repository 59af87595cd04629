package archive

import (
	"errors"
	"os"
	"os/exec"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"
)

// leave claims a name in a child process that ends at once without giving it
// up, and returns when the child is gone.
func leave(t *testing.T, d *Dir, name string) {
	t.Helper()
	runChild(t, "claim", nil, d.Path(), name)
}

// age makes a claim look as if it was last renewed a while ago.
func age(t *testing.T, d *Dir, name string, by time.Duration) {
	t.Helper()
	when := time.Now().Add(-by)
	if err := os.Chtimes(d.claimFile(name), when, when); err != nil {
		t.Fatal(err)
	}
}

// elsewhere rewrites a claim as that of a process whose life cannot be seen
// from here.
func elsewhere(t *testing.T, d *Dir, name string) {
	t.Helper()
	text, err := os.ReadFile(d.claimFile(name))
	if err != nil {
		t.Fatal(err)
	}
	changed := strings.Replace(string(text), self().Boot, "another-boot", 1)
	if err := os.WriteFile(d.claimFile(name), []byte(changed), 0o666); err != nil {
		t.Fatal(err)
	}
}

func mustClaim(t *testing.T, d *Dir, name string) *Claim {
	t.Helper()
	c, holder, err := d.Claim(name)
	if err != nil || c == nil {
		t.Fatalf("%s is not to be had: held by %+v, %v", name, holder, err)
	}
	return c
}

func mustNotClaim(t *testing.T, d *Dir, name string) Holder {
	t.Helper()
	c, holder, err := d.Claim(name)
	if err != nil || c != nil {
		t.Fatalf("%s was claimed although it is held, %v", name, err)
	}
	return holder
}

func TestClaimIsExclusiveUntilReleased(t *testing.T) {
	d := prepare(t, 4)
	c := mustClaim(t, d, "a-0")
	if h := mustNotClaim(t, d, "a-0"); h.PID != os.Getpid() || h.Host == "" {
		t.Errorf("holder %+v", h)
	}
	if h, ok := d.Claimed("a-0"); !ok || h.PID != os.Getpid() {
		t.Errorf("held by %+v, %v", h, ok)
	}
	mustClaim(t, d, "a-8")
	if err := c.Beat(); err != nil {
		t.Error(err)
	}
	c.Release()
	if _, ok := d.Claimed("a-0"); ok {
		t.Error("it is held after its release")
	}
	mustClaim(t, d, "a-0")
}

func TestClaimOfADeadProcessIsTakenAtOnce(t *testing.T) {
	if self().Boot == "" || self().Space == "" {
		t.Skip("this system does not say which processes run")
	}
	d := prepare(t, 4)
	leave(t, d, "a-0")
	mustClaim(t, d, "a-0")
	mustNotClaim(t, d, "a-0")

	// The same process number in another container or on another host says
	// nothing: there the claim has to grow old.
	leave(t, d, "b-0")
	elsewhere(t, d, "b-0")
	mustNotClaim(t, d, "b-0")
	age(t, d, "b-0", Stale+time.Second)
	mustClaim(t, d, "b-0")
}

func TestProcessNumbersAreUsedAgain(t *testing.T) {
	here := self()
	if here.Boot == "" || here.Space == "" {
		t.Skip("this system does not say which processes run")
	}
	if here.gone(here) {
		t.Error("this process counts as gone")
	}
	earlier := here
	earlier.Started = "1"
	if !earlier.gone(here) {
		t.Error("a process that began at another time counts as this one")
	}
	earlier.Boot = "another"
	if earlier.gone(here) {
		t.Error("a process of another boot is judged by its number")
	}
}

func TestClaimIsRenewedByBeat(t *testing.T) {
	d := prepare(t, 4)
	c := mustClaim(t, d, "a-0")
	elsewhere(t, d, "a-0")
	c.text = []byte(strings.Replace(string(c.text), self().Boot, "another-boot", 1))
	age(t, d, "a-0", Stale+time.Second)
	if err := c.Beat(); err != nil {
		t.Fatal(err)
	}
	mustNotClaim(t, d, "a-0")
	age(t, d, "a-0", Stale+time.Second)
	other := mustClaim(t, d, "a-0")
	if err := c.Beat(); !errors.Is(err, ErrLost) {
		t.Errorf("renewing a claim that was taken: %v", err)
	}
	c.Release() // not ours any more
	if err := other.Beat(); err != nil {
		t.Errorf("the taker's claim is gone: %v", err)
	}
	other.Release()
	if err := other.Beat(); !errors.Is(err, ErrLost) {
		t.Errorf("renewing a claim that was given up: %v", err)
	}
}

// Of many that find a stale claim, one gets it.
func TestOneTakesAStaleClaim(t *testing.T) {
	d := prepare(t, 4)
	for range 20 {
		old := mustClaim(t, d, "a-0")
		elsewhere(t, d, "a-0")
		age(t, d, "a-0", Stale+time.Second)
		var got atomic.Int32
		var wg sync.WaitGroup
		for range 8 {
			wg.Go(func() {
				c, _, err := d.Claim("a-0")
				if err != nil {
					t.Error(err)
				}
				if c != nil {
					got.Add(1)
				}
			})
		}
		wg.Wait()
		if got.Load() != 1 {
			t.Fatalf("%d hold one claim", got.Load())
		}
		if err := old.Beat(); !errors.Is(err, ErrLost) {
			t.Fatalf("the old holder keeps it: %v", err)
		}
		os.Remove(d.claimFile("a-0"))
	}
}

// One that judged a claim stale and was then held up does not remove the claim
// that took its place.
func TestLateTakerDoesNoHarm(t *testing.T) {
	d := prepare(t, 4)
	mustClaim(t, d, "a-0")
	elsewhere(t, d, "a-0")
	age(t, d, "a-0", Stale+time.Second)
	judged, stale, err := d.inspect(d.claimFile("a-0"))
	if err != nil || !stale {
		t.Fatal(stale, err)
	}
	now := mustClaim(t, d, "a-0")
	if err := d.removeStale(d.claimFile("a-0"), judged); err != nil {
		t.Fatal(err)
	}
	if err := now.Beat(); err != nil {
		t.Fatalf("the new claim was removed: %v", err)
	}
}

// A process that dies while it takes over a claim holds up nobody.
func TestTakerThatDies(t *testing.T) {
	if self().Boot == "" || self().Space == "" {
		t.Skip("this system does not say which processes run")
	}
	d := prepare(t, 4)
	old := mustClaim(t, d, "a-0")
	elsewhere(t, d, "a-0")
	age(t, d, "a-0", Stale+time.Second)
	right := d.claimFile("a-0") + ".tmp-taken-" + readHolder(old.path).Token
	taker, err := createClaim(right)
	if err != nil {
		t.Fatal(err)
	}
	mustNotClaim(t, d, "a-0")
	text := strings.Replace(string(taker.text), `"started":"`, `"started":"1`, 1) // it is gone
	if err := os.WriteFile(right, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	mustClaim(t, d, "a-0")
	if entries, _ := os.ReadDir(d.join(claimsDir)); len(entries) != 1 {
		t.Errorf("left beside the claim: %v", entries)
	}
}

// Where links are not known, a crash between the making of a claim and its
// writing leaves it empty.
func TestEmptyClaimGrowsOld(t *testing.T) {
	d := prepare(t, 4)
	if err := os.WriteFile(d.claimFile("a-0"), nil, 0o666); err != nil {
		t.Fatal(err)
	}
	mustNotClaim(t, d, "a-0")
	age(t, d, "a-0", Stale+time.Second)
	mustClaim(t, d, "a-0")
}

func TestHoldWaits(t *testing.T) {
	d := prepare(t, 4)
	c := mustClaim(t, d, "manifest")
	time.AfterFunc(100*time.Millisecond, c.Release)
	got, err := d.hold("manifest")
	if err != nil {
		t.Fatal(err)
	}
	d.pace.stale = 50 * time.Millisecond
	beating := make(chan struct{})
	go func() {
		defer close(beating)
		for range 40 {
			got.Beat()
			time.Sleep(10 * time.Millisecond)
		}
	}()
	if _, err := d.hold("manifest"); err == nil || !strings.Contains(err.Error(), "remove the file") {
		t.Errorf("waiting for a claim that is renewed for ever: %v", err)
	}
	<-beating
}

// runChild runs this test program as a child that does one thing.
func runChild(t *testing.T, mode string, prepare func(*exec.Cmd), args ...string) string {
	t.Helper()
	cmd := exec.Command(os.Args[0], args...)
	cmd.Env = append(os.Environ(), "ARCHIVE_TEST_CHILD="+mode)
	if prepare != nil {
		prepare(cmd)
	}
	out, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("child %s: %v\n%s", mode, err, out)
	}
	return string(out)
}
