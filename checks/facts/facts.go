// Package facts holds what the rules look at: results of the engine rooms,
// computed once for a model version, when first asked for, and cancellable.
package facts

import (
	"context"
	"sync"

	"wellposed/checks/existence"
	"wellposed/checks/objective"
	"wellposed/parser/model"
)

// Facts are the results for one model. All methods may be called from several
// goroutines; each result is computed once.
type Facts struct {
	Model *model.Model

	ctx   context.Context
	mu    sync.Mutex
	memos map[string]*memo
}

type memo struct {
	once  sync.Once
	value any
}

// New makes the facts of a model; ctx ends all work on them.
func New(ctx context.Context, m *model.Model) *Facts {
	return &Facts{Model: m, ctx: ctx, memos: map[string]*memo{}}
}

// Context is the context that ends the work.
func (f *Facts) Context() context.Context { return f.ctx }

// once computes a value under a key at most once.
func once[T any](f *Facts, key string, compute func() T) T {
	f.mu.Lock()
	m := f.memos[key]
	if m == nil {
		m = &memo{}
		f.memos[key] = m
	}
	f.mu.Unlock()
	m.once.Do(func() { m.value = compute() })
	return m.value.(T)
}

// Existence is the verdict under an analysis. Analyses with the same name are
// taken to be the same.
func (f *Facts) Existence(a *model.Analysis) *existence.Result {
	return once(f, "existence/"+a.Name, func() *existence.Result {
		return existence.Decide(f.ctx, f.Resolved(a))
	})
}

// Resolved is an analysis in which the priors given by rule are replaced by
// those that the rules derive. One that can't be derived stays as it is.
func (f *Facts) Resolved(a *model.Analysis) *model.Analysis {
	return once(f, "resolved/"+a.Name, func() *model.Analysis { return objective.Resolve(f.ctx, a) })
}
