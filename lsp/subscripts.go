package lsp

import "portlight/dialect"

// eachSubscript calls visit for every v[…], i[…] and the like in a statement,
// in order of the text.
func eachSubscript(st dialect.Statement, visit func(*dialect.SubscriptExpr)) {
	dialect.Walk(st, func(t dialect.Tree) bool {
		if x, ok := t.(*dialect.SubscriptExpr); ok {
			visit(x)
		}
		return true
	})
}
