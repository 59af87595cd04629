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
// host. A stale claim is removed by the one process that could link it to a name
// made of its token, and then created anew by whoever comes first. Claims only
// spare double work: should two processes ever hold one (a process that was held
// up for a minute goes on, say), both write the same bytes.
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
	path := d.claimFile(name)
	for range 2 {
		c, err := createClaim(path)
		if c != nil || err != nil {
			return c, holder, err
		}
		var stale bool
		if holder, stale, err = d.inspect(path); err != nil || !stale {
			return nil, holder, err
		}
		if err := removeStale(path, holder); err != nil {
			return nil, holder, err
		}
	}
	return nil, holder, nil
}

// Claimed reports who holds a name; ok is false if nobody does, or only someone
// whose claim is stale.
func (d *Dir) Claimed(name string) (holder Holder, ok bool) {
	holder, stale, err := d.inspect(d.claimFile(name))
	return holder, err == nil && !stale
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

// removeStale removes a claim that was judged stale, unless another process
// does so, or it is not there any more.
func removeStale(path string, judged Holder) error {
	// Only one process can make this name. It stays until Prepare cleans up, so
	// that one that judged long ago cannot remove what was claimed since.
	aside := durable.Beside(path, "taken-"+judged.Token)
	err := os.Link(path, aside)
	if errors.Is(err, fs.ErrExist) || errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	linked := err == nil
	if !linked {
		// Some file systems know no links. Renaming then may take a new claim
		// for a moment; it is put back.
		if err := os.Rename(path, aside); err != nil {
			return durable.Explain("take over", path, err)
		}
	}
	if h := readHolder(aside); h.Token != judged.Token {
		if !linked {
			return os.Rename(aside, path)
		}
		return os.Remove(aside)
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
	if text, err := os.ReadFile(c.path); err == nil && string(text) == string(c.text) {
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
			removeStale(path, h)
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
