package sharing

import (
	"context"
	"fmt"
	"os"
	"os/signal"
	"sync"
	"syscall"
)

// Interrupted is the cause of a context that a signal cancelled.
type Interrupted struct {
	Signal os.Signal
}

func (e *Interrupted) Error() string {
	return fmt.Sprintf("stopped by a signal (%v); run it again to go on", e.Signal)
}

// Interrupt returns a context that is cancelled with an *Interrupted on the
// first SIGINT or SIGTERM. On the second, exit is called with 128 plus the
// signal's number. stop ends the watch, and signals act as usual again.
func Interrupt(parent context.Context, exit func(code int)) (ctx context.Context, stop func()) {
	ctx, cancel := context.WithCancelCause(parent)
	signals := make(chan os.Signal, 2)
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM)
	done := make(chan struct{})
	go func() {
		select {
		case s := <-signals:
			cancel(&Interrupted{s})
		case <-done:
			return
		}
		select {
		case s := <-signals:
			code := 128
			if n, ok := s.(syscall.Signal); ok {
				code += int(n)
			}
			exit(code)
		case <-done:
		}
	}()
	return ctx, sync.OnceFunc(func() {
		signal.Stop(signals)
		close(done)
		cancel(nil)
	})
}
