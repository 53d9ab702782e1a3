package model

import (
	"errors"
	"fmt"
	"strings"

	"github.com/expr-lang/expr/ast"
	"github.com/expr-lang/expr/file"
	"github.com/expr-lang/expr/parser"
	"github.com/expr-lang/expr/parser/lexer"
)

// lawParser turns one formula into a tree. It takes grammar and syntax tree from
// the expression library's parser; meaning and evaluation are ours.
type lawParser struct {
	text  string
	names nameTable
	// constantsOnly refuses species.
	constantsOnly bool
	// lost tells whether an unknown name may have been lost to another error in
	// the file, and is not to be reported.
	lost   func(name string) bool
	hinter *hinter
	errors []lawError
	at     func(rune int) int // byte offset in the file of a rune of the formula
}

// parse gives the tree, or nil with the errors in p.errors. The names are checked
// even where the grammar is broken, so that all errors come in one go.
func (p *lawParser) parse() *Node {
	tokens, wrong := tokensOf(p.text)
	p.errors = append(p.errors, wrong...)
	if known := p.checkNames(tokens); !known || len(wrong) > 0 {
		return nil
	}
	tree, err := parser.Parse(p.text)
	if err != nil {
		p.errors = append(p.errors, p.grammarError(tokens, err))
		return nil
	}
	node := p.translate(tree.Node)
	if len(p.errors) > 0 {
		return nil
	}
	return node
}

// checkNames resolves every name in the formula, and tells whether all the
// functions are known.
func (p *lawParser) checkNames(tokens []lexer.Token) bool {
	known := true
	for i, t := range tokens {
		if t.Kind != lexer.Identifier || foreignName(t.Value) {
			continue
		}
		call := next(tokens, i).Is(lexer.Bracket, "(")
		check := p.checkName
		if call {
			check = p.checkFunction
		}
		if e := check(t); e != nil {
			p.errors = append(p.errors, *e)
			known = known && !call
		}
	}
	return known
}

func (p *lawParser) checkFunction(t lexer.Token) *lawError {
	if _, ok := functions()[t.Value]; ok {
		return nil
	}
	if thing := p.names[t.Value]; thing != nil {
		thing.used = true
		return &lawError{t.From, fmt.Sprintf("%q is a %s, not a function", t.Value, thing.kind), "write " + t.Value + "*(…) for a product"}
	}
	return &lawError{t.From, fmt.Sprintf("there is no function %q", t.Value), NameHint(t.Value, functionNames())}
}

func (p *lawParser) checkName(t lexer.Token) *lawError {
	thing := p.names[t.Value]
	switch {
	case thing == nil:
		return p.unknown(t)
	case thing.kind == speciesName && p.constantsOnly:
		thing.used = true
		return &lawError{t.From, fmt.Sprintf("%q is a species; only constants can stand in this formula", t.Value), p.hinter.list(p.names.constants)}
	}
	thing.used = true
	return nil
}

func (p *lawParser) unknown(t lexer.Token) *lawError {
	if op, ok := functions()[t.Value]; ok {
		return &lawError{t.From, fmt.Sprintf("the function %q needs its arguments in parentheses", t.Value), "write " + signature(op)}
	}
	if p.lost != nil && p.lost(t.Value) {
		return nil
	}
	if p.constantsOnly {
		return &lawError{t.From, fmt.Sprintf("no constant is called %q", t.Value), p.hinter.near(t.Value, p.names.constants)}
	}
	return &lawError{t.From, fmt.Sprintf("no species or constant is called %q", t.Value), p.hinter.near(t.Value, p.names.all)}
}

// grammarError words an error of the library's parser by the token it stopped at.
func (p *lawParser) grammarError(tokens []lexer.Token, err error) lawError {
	var place *file.Error
	if !errors.As(err, &place) {
		return lawError{0, "this formula cannot be read", operatorHint}
	}
	atEnd := strings.Contains(place.Message, "EOF") || strings.Contains(place.Message, "end of expression")
	for _, t := range tokens {
		if t.From >= place.From && t.Kind != lexer.EOF && !atEnd {
			return lawError{t.From, fmt.Sprintf("%q cannot stand here", t.Value), "between two operands there is exactly one operator; a function's arguments are separated by commas"}
		}
	}
	return lawError{len([]rune(p.text)), "the formula breaks off here", "an operand is missing at the end"}
}

func (p *lawParser) fail(n ast.Node, hint, format string, args ...any) *Node {
	p.errors = append(p.errors, lawError{n.Location().From, fmt.Sprintf(format, args...), hint})
	return nil
}

// translate turns a syntax tree into ours, reporting every error it meets.
func (p *lawParser) translate(n ast.Node) *Node {
	switch n := n.(type) {
	case *ast.IntegerNode:
		return p.place(Number(float64(n.Value)), n)
	case *ast.FloatNode:
		return p.place(Number(n.Value), n)
	case *ast.IdentifierNode:
		return p.name(n)
	case *ast.UnaryNode:
		return p.unary(n)
	case *ast.BinaryNode:
		return p.binary(n)
	case *ast.BuiltinNode:
		return p.call(n, n.Name, n.Arguments)
	case *ast.CallNode:
		if callee, ok := n.Callee.(*ast.IdentifierNode); ok {
			return p.call(n, callee.Value, n.Arguments)
		}
	}
	return p.fail(n, operatorHint, "this cannot stand in a formula")
}

// place notes where in the file a node stands.
func (p *lawParser) place(out *Node, n ast.Node) *Node {
	if out != nil && p.at != nil {
		out.At = p.at(n.Location().From)
	}
	return out
}

func (p *lawParser) unary(n *ast.UnaryNode) *Node {
	arg := p.translate(n.Node)
	switch {
	case arg == nil:
		return nil
	case n.Operator == "+":
		return arg
	case n.Operator == "-":
		return p.place(Call(OpNeg, arg), n)
	}
	return p.fail(n, operatorHint, "%q cannot stand in a formula", n.Operator)
}

func (p *lawParser) binary(n *ast.BinaryNode) *Node {
	left, right := p.translate(n.Left), p.translate(n.Right)
	if left == nil || right == nil {
		return nil
	}
	i := strings.Index("+-*/^", n.Operator)
	if len(n.Operator) != 1 || i < 0 {
		return p.fail(n, operatorHint, "%q cannot stand in a formula", n.Operator)
	}
	op := []Op{OpAdd, OpSub, OpMul, OpDiv, OpPow}[i]
	return p.place(Call(op, left, right), n)
}

// name gives a leaf. A name that was lost to another error stands for 0; the file
// has errors then, so the tree is not used.
func (p *lawParser) name(n *ast.IdentifierNode) *Node {
	thing := p.names[n.Value]
	switch {
	case thing == nil:
		return Number(0)
	case thing.kind == constantName:
		return p.place(ConstantRef(thing.index), n)
	}
	return p.place(SpeciesRef(thing.index), n)
}

// call checks the number of arguments; min and max of several become a chain.
func (p *lawParser) call(n ast.Node, name string, arguments []ast.Node) *Node {
	op, ok := functions()[name]
	if !ok {
		return p.fail(n, NameHint(name, functionNames()), "there is no function %q", name)
	}
	variadic := op == OpMin || op == OpMax
	if len(arguments) != op.Arity() && (!variadic || len(arguments) < op.Arity()) {
		return p.fail(n, "write "+signature(op), "%s takes %s, not %d", name, arityWords(op), len(arguments))
	}
	args := make([]*Node, len(arguments))
	missing := false
	for i, a := range arguments {
		args[i] = p.translate(a)
		missing = missing || args[i] == nil
	}
	if missing {
		return nil
	}
	if !variadic {
		return p.place(Call(op, args...), n)
	}
	tree := args[0]
	for _, a := range args[1:] {
		tree = p.place(Call(op, tree, a), n)
	}
	return tree
}

func arityWords(op Op) string {
	switch {
	case op == OpMin || op == OpMax:
		return "two arguments or more"
	case op.Arity() == 3:
		return "three arguments"
	}
	return "one argument"
}
