package main

import (
	"fmt"
	"io"
	"strings"
	"sync"
	"time"
)

// progress is a bar on standard error that appears when the work takes long and
// goes away when it is done.
type progress struct {
	mu    sync.Mutex
	w     io.Writer
	label string
	done  int
	total int
	shown int // width of what stands on the line
	quit  chan struct{}
	gone  sync.WaitGroup
}

const (
	progressDelay = time.Second
	progressEvery = 200 * time.Millisecond
	progressWidth = 30
)

// startProgress begins to count; without a terminal, or when quiet, nothing is
// ever shown.
func (e *env) startProgress(quiet bool, label string, total int) *progress {
	if quiet || !e.terminal {
		return &progress{total: total}
	}
	return newProgress(e.err, label, total, progressDelay, progressEvery)
}

func newProgress(w io.Writer, label string, total int, delay, every time.Duration) *progress {
	p := &progress{w: w, label: label, total: total, quit: make(chan struct{})}
	p.gone.Go(func() {
		wait := time.NewTimer(delay)
		defer wait.Stop()
		for {
			select {
			case <-p.quit:
				return
			case <-wait.C:
				p.show()
				wait.Reset(every)
			}
		}
	})
	return p
}

// step counts one piece of work.
func (p *progress) step() {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.done++
}

// stop ends the display and clears its line.
func (p *progress) stop() {
	if p.quit == nil {
		return
	}
	close(p.quit)
	p.gone.Wait()
	if p.shown > 0 {
		fmt.Fprintf(p.w, "\r%s\r", strings.Repeat(" ", p.shown))
	}
}

func (p *progress) show() {
	p.mu.Lock()
	defer p.mu.Unlock()
	filled := progressWidth * p.done / max(p.total, 1)
	line := fmt.Sprintf("%s [%s%s] %d of %d", p.label, strings.Repeat("#", filled), strings.Repeat(".", progressWidth-filled), p.done, p.total)
	fmt.Fprintf(p.w, "\r%-*s", p.shown, line)
	p.shown = len(line)
}
