package response

import (
	"context"
	"errors"

	"portlight/analyze/exact"
)

func certifiedFactor(ctx context.Context, p exact.Poly) (*rootFactor, error) {
	return nil, errors.New("to come")
}
