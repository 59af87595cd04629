package archive

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"sojourn/observables/internal/durable"
)

// Beat is how often the holder of a claim renews it. A claim that was not
// renewed for Stale may be taken by anyone; so may at once that of a process
// that is known to be gone. A process that was stopped for longer, and goes on,
// may find its claim lost: see Claim.Beat.
const (
	Beat  = 5 * time.Second
	Stale = 12 * Beat
)

// pace holds the intervals, which tests shorten.
type pace struct {
	stale time.Duration // age at which a claim may be taken
	retry time.Duration // between tries in hold
}

var usualPace = pace{stale: Stale, retry: 20 * time.Millisecond}

// Claim is held by this process until it is released.
//
// A claim is a file that only one process could create. Its age is the time
// since it was last written, by the clock of the file system and not of any
// host. A stale claim is removed by one process, and then created anew by
// whoever comes first. Claims only spare double work: should two processes ever
// hold one (say, one that was held up for a minute goes on), both write the same
// bytes.
type Claim struct {
	path string
	text []byte
}

// ErrLost is for a claim that another process has taken.
var ErrLost = errors.New("another process has taken the claim")

// Claim claims a name, such as PartName gives. If another process holds it, the
// claim is nil, and holder says who (with zero fields if that cannot be read).
func (d *Dir) Claim(name string) (c *Claim, holder Holder, err error) {
	if err := d.mayWrite(); err != nil {
		return nil, holder, err
	}
	return d.acquire(d.claimFile(name))
}

// acquire is Claim for a path.
func (d *Dir) acquire(path string) (c *Claim, holder Holder, err error) {
	for range 2 {
		c, err := createClaim(path)
		if c != nil || err != nil {
			return c, holder, err
		}
		var stale bool
		if holder, stale, err = d.inspect(path); err != nil || !stale {
			return nil, holder, err
		}
		if err := d.removeStale(path, holder); err != nil {
			return nil, holder, err
		}
	}
	return nil, holder, nil
}

// Claimed reports who holds a name; ok is false if nobody does, or only someone
// whose claim is stale.
func (d *Dir) Claimed(name string) (holder Holder, ok bool) {
	holder, stale, err := d.inspect(d.claimFile(name))
	if err != nil || stale {
		return Holder{}, false
	}
	return holder, true
}

// createClaim returns nil if the file is there.
func createClaim(path string) (*Claim, error) {
	h := self()
	h.Token = durable.Token()
	text, err := json.Marshal(h)
	if err != nil {
		return nil, err
	}
	c := &Claim{path: path, text: append(text, '\n')}
	// Linked to its name when it is written, a claim is never seen half made.
	draft := durable.Beside(path, h.Token)
	if err := os.WriteFile(draft, c.text, 0o666); err != nil {
		os.Remove(draft)
		return nil, durable.Explain("claim", path, err)
	}
	defer os.Remove(draft)
	err = os.Link(draft, path)
	switch {
	case err == nil, c.mine(): // the answer of a network file system may be lost
		return c, nil
	case errors.Is(err, fs.ErrExist):
		return nil, nil
	}
	// Some file systems know no links.
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if errors.Is(err, fs.ErrExist) {
		return nil, nil
	}
	if err != nil {
		return nil, durable.Explain("claim", path, err)
	}
	_, err = f.Write(c.text)
	if err = errors.Join(err, f.Close()); err != nil {
		os.Remove(path)
		return nil, durable.Explain("claim", path, err)
	}
	return c, nil
}

// mine reports whether the file is that of this claim.
func (c *Claim) mine() bool {
	text, err := os.ReadFile(c.path)
	return err == nil && string(text) == string(c.text)
}

// inspect reads a claim. One that has vanished counts as stale. A claim whose
// text cannot be read is judged by its age alone.
func (d *Dir) inspect(path string) (h Holder, stale bool, err error) {
	h = readHolder(path)
	if h.gone(self()) {
		return h, true, nil
	}
	age, err := ageOf(path)
	if errors.Is(err, fs.ErrNotExist) {
		return h, true, nil
	}
	return h, age >= d.pace.stale, err
}

// readHolder returns the holder of a claim. If its text cannot be read, as
// after a crash between its creation and its writing, only the token is set, to
// a digest of what is there.
func readHolder(path string) (h Holder) {
	text, _ := os.ReadFile(path)
	if json.Unmarshal(text, &h) != nil || h.Token == "" {
		sum := sha256.Sum256(text)
		h = Holder{Token: hex.EncodeToString(sum[:8])}
	}
	return h
}

// ageOf returns how long ago a file was written, by the clock that stamps files
// in its directory: another host's clock may be off.
func ageOf(path string) (time.Duration, error) {
	f, err := os.Open(path) // network file systems look at a file anew when it is opened
	if err != nil {
		return 0, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return 0, err
	}
	probe := durable.Beside(path, durable.Token())
	if err := os.WriteFile(probe, []byte("\n"), 0o666); err != nil {
		return 0, err
	}
	defer os.Remove(probe)
	now, err := os.Stat(probe)
	if err != nil {
		return 0, err
	}
	return now.ModTime().Sub(info.ModTime()), nil
}

// removeStale removes a claim that was judged stale, if it is still there and
// no other process is about to do so. The right to remove it is itself claimed,
// by a name made of its token: so one that judged long ago cannot remove what
// was claimed since, and a process that dies with the right holds up nobody.
func (d *Dir) removeStale(path string, judged Holder) error {
	right, _, err := d.acquire(durable.Beside(path, "taken-"+judged.Token))
	if right == nil {
		return err
	}
	defer right.Release()
	if readHolder(path).Token != judged.Token {
		return nil
	}
	if err := os.Remove(path); err != nil && !errors.Is(err, fs.ErrNotExist) {
		return durable.Explain("take over", path, err)
	}
	return nil
}

// Beat renews the claim. It returns ErrLost if another process has taken it.
func (c *Claim) Beat() error {
	f, err := os.OpenFile(c.path, os.O_RDWR, 0)
	if errors.Is(err, fs.ErrNotExist) {
		return fmt.Errorf("%s: %w", c.path, ErrLost)
	}
	if err != nil {
		return err
	}
	defer f.Close()
	text := make([]byte, len(c.text)+1)
	if n, _ := f.ReadAt(text, 0); string(text[:n]) != string(c.text) {
		return fmt.Errorf("%s: %w", c.path, ErrLost)
	}
	// Writing the same text stamps the file by the file system's clock.
	_, err = f.WriteAt(c.text, 0)
	return err
}

// Release gives the claim up. A claim that was lost stays with its taker.
func (c *Claim) Release() {
	if c.mine() {
		os.Remove(c.path)
	}
}

// cleanClaims removes stale claims. What cannot be removed stays.
func (d *Dir) cleanClaims() {
	entries, err := os.ReadDir(d.join(claimsDir))
	if err != nil {
		return
	}
	for _, e := range entries {
		path := d.join(claimsDir, e.Name())
		if durable.Temporary(e.Name()) {
			continue
		}
		if h, stale, err := d.inspect(path); err == nil && stale {
			d.removeStale(path, h)
		}
	}
}

// hold claims a name for a short time, waiting while others hold it.
func (d *Dir) hold(name string) (*Claim, error) {
	deadline := time.Now().Add(2 * d.pace.stale)
	for {
		c, holder, err := d.Claim(name)
		if c != nil || err != nil {
			return c, err
		}
		if time.Now().After(deadline) {
			return nil, fmt.Errorf("%s: process %d on host %s has held it for %v; if it does not run any more, remove the file",
				filepath.Join(d.path, claimsDir, name+".json"), holder.PID, holder.Host, 2*d.pace.stale)
		}
		time.Sleep(d.pace.retry)
	}
}
