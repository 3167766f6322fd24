package imaging

import (
	"context"
	"sync"
)

// Latest answers questions one at a time, off the window's thread; a new
// question replaces the one that waits and cancels the one being answered.
type Latest[Question, Answer any] struct {
	answer func(context.Context, Question) Answer
	show   func(Answer) // called from one goroutine

	mu      sync.Mutex
	waiting *Question
	cancel  context.CancelFunc
	wake    chan struct{}
}

// NewLatest returns one; Run starts it.
func NewLatest[Question, Answer any](answer func(context.Context, Question) Answer, show func(Answer)) *Latest[Question, Answer] {
	return &Latest[Question, Answer]{answer: answer, show: show, wake: make(chan struct{}, 1)}
}

// Ask replaces whatever was asked before and not yet answered.
func (l *Latest[Question, Answer]) Ask(q Question) {
	l.mu.Lock()
	l.waiting = &q
	if l.cancel != nil {
		l.cancel()
	}
	l.mu.Unlock()
	wake(l.wake)
}

// Run works until ctx ends.
func (l *Latest[Question, Answer]) Run(ctx context.Context) {
	for {
		select {
		case <-ctx.Done():
			return
		case <-l.wake:
		}
		answering, cancel := context.WithCancel(ctx)
		l.mu.Lock()
		q := l.waiting
		l.waiting, l.cancel = nil, cancel
		l.mu.Unlock()
		if q != nil {
			if a := l.answer(answering, *q); answering.Err() == nil {
				l.show(a)
			}
		}
		l.mu.Lock()
		l.cancel = nil
		l.mu.Unlock()
		cancel()
	}
}
