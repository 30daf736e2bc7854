package analyze

import (
	"context"
	"errors"

	"portlight/analyze/network"
	"portlight/dialect"
)

// refusal is a question that has no answer because of what the user wrote.
// It travels as an error up to Answer, which turns it into a RefusedAnswer.
type refusal struct {
	code    dialect.Code
	why     string
	problem *network.Problem // what is wrong with the network, nil for other reasons
}

// Error implements error.
func (r *refusal) Error() string { return string(r.code) + ": " + r.why }

func refuse(code dialect.Code, why string) error { return &refusal{code: code, why: why} }

// asRefusal finds a refusal in err.
func asRefusal(err error) (*refusal, bool) {
	var r *refusal
	ok := errors.As(err, &r)
	return r, ok
}

func isCancelled(err error) bool {
	return errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded)
}
