package sharing

import (
	"errors"
	"fmt"
	"slices"

	"sojourn/observables"
	"sojourn/observables/archive"
)

// open claims a part, unless it is finished or another process holds it, and
// finds out which of its units are to be run.
func (w *work) open(part int) error {
	p, d := w.parts[part], w.job.Dir
	done, err := partDone(d, p)
	if err != nil {
		return err
	}
	if done >= p.Units {
		w.mu.Lock()
		w.finish(part, false)
		w.mu.Unlock()
		return nil
	}
	claim, _, err := d.Claim(p.name())
	if claim == nil {
		return err
	}
	h := &held{part: part, claim: claim}
	if h.todo, err = w.survey(part); err != nil {
		claim.Release()
		return err
	}
	w.mu.Lock()
	w.held = append(w.held, h)
	w.claimed = true
	w.mu.Unlock()
	w.settle(h)
	return nil
}

// survey returns the units of a part that are to be run: those that are neither
// in its tables nor in the journal. What is damaged is run anew.
func (w *work) survey(part int) (todo []int, err error) {
	p, d := w.parts[part], w.job.Dir
	done, err := d.PartDone(p.Key, p.First)
	if err == nil && done > 0 && done < p.Units {
		_, err = d.ReadUnits(p.Key, p.First) // they are needed to complete the part
	}
	if errors.Is(err, archive.ErrDamaged) {
		w.warn("%v: all its units are run anew", err)
		done, err = 0, d.DropPart(p.Key, p.First)
	}
	if err != nil {
		return nil, err
	}
	for unit := p.First + done; unit < p.First+p.Units; unit++ {
		_, _, err := d.LoadUnit(p.Key, unit)
		if errors.Is(err, archive.ErrDamaged) {
			w.warn("%v: unit %d is run anew", err, unit)
		} else if err != nil && !errors.Is(err, archive.ErrAbsent) {
			return nil, err
		}
		if err != nil {
			todo = append(todo, unit)
		}
	}
	w.meter.found(part, p.Units-len(todo))
	return todo, nil
}

// settle merges a part of which no unit is left to run, and gives it up.
func (w *work) settle(h *held) {
	w.mu.Lock()
	defer w.mu.Unlock()
	if len(h.todo) > 0 || h.busy > 0 {
		return
	}
	if !h.lost {
		h.busy++
		w.mu.Unlock()
		missing, err := w.merge(w.parts[h.part])
		w.mu.Lock()
		h.busy--
		if err != nil {
			w.fail(err)
			return
		}
		if len(missing) > 0 {
			h.todo = missing
			return
		}
		w.finish(h.part, true)
	}
	h.claim.Release()
	w.held = slices.DeleteFunc(w.held, func(x *held) bool { return x == h })
}

// finish notes a part as finished. It is called with mu held.
func (w *work) finish(part int, here bool) {
	if !w.finished[part] {
		w.finished[part] = true
		w.meter.found(part, w.parts[part].Units)
		w.meter.partDone(here)
	}
}

// merge writes a part from its tables, if it has some, and the journal. It
// returns the units that are in neither, if any: their files were removed or
// damaged since they were written.
func (w *work) merge(p Part) (missing []int, err error) {
	d := w.job.Dir
	receipt := w.job.Points[p.Point].Stamp
	receipt.Host = w.job.Host
	var units []observables.Unit
	old, err := d.Receipt(p.Key, p.First)
	switch {
	case errors.Is(err, archive.ErrAbsent):
	case err != nil:
		return nil, err
	case old.Units >= p.Units:
		return nil, nil // another process was as fast
	default:
		if units, err = d.ReadUnits(p.Key, p.First); err != nil {
			return nil, err
		}
		receipt.Seconds = old.Seconds
		if len(units) > old.Units { // a crash came when all files were exchanged
			receipt.Seconds = old.Next.Seconds
		}
	}
	for unit := p.First + len(units); unit < p.First+p.Units; unit++ {
		u, seconds, err := d.LoadUnit(p.Key, unit)
		if errors.Is(err, archive.ErrAbsent) || errors.Is(err, archive.ErrDamaged) {
			missing = append(missing, unit)
			continue
		}
		if err != nil {
			return nil, err
		}
		units = append(units, u)
		receipt.Seconds += seconds
	}
	if missing != nil {
		return missing, nil
	}
	if err := d.WritePart(p.Key, p.First, units, receipt); err != nil {
		return nil, fmt.Errorf("part %s: %w", p.name(), err)
	}
	return nil, nil
}
