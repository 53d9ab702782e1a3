package house_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"holdfast/internal/house"
)

// A source is one parsed Go file of the project.
type source struct {
	pkg  string // its folder, with forward slashes, from the module's root
	file string
	test bool
	ast  *ast.File
	fset *token.FileSet
}

func sources(t *testing.T) []source {
	t.Helper()
	root := moduleRoot(t)
	var all []source
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		name := d.Name()
		if d.IsDir() && path != root && (strings.HasPrefix(name, ".") || name == "testdata" || name == "tools") {
			return filepath.SkipDir
		}
		if d.IsDir() || !strings.HasSuffix(name, ".go") {
			return nil
		}
		fset := token.NewFileSet()
		f, err := parser.ParseFile(fset, path, nil, parser.ParseComments)
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(root, path)
		all = append(all, source{filepath.ToSlash(filepath.Dir(rel)), filepath.ToSlash(rel), strings.HasSuffix(name, "_test.go"), f, fset})
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	if len(all) < 10 {
		t.Fatalf("found %d Go files below %s: the walk is broken", len(all), root)
	}
	return all
}

func moduleRoot(t *testing.T) string {
	t.Helper()
	dir, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	for {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return dir
		}
		up := filepath.Dir(dir)
		if up == dir {
			t.Fatal("no go.mod above the test")
		}
		dir = up
	}
}

func imports(t *testing.T, s source) []string {
	t.Helper()
	var out []string
	for _, i := range s.ast.Imports {
		path, err := strconv.Unquote(i.Path.Value)
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, path)
	}
	return out
}

func TestImportsRunOneWay(t *testing.T) {
	for _, s := range sources(t) {
		if s.test { // tests may look across
			continue
		}
		layer, ok := house.LayerOf(s.pkg)
		if !ok {
			t.Errorf("%s: no rule names the folder %s", s.file, s.pkg)
			continue
		}
		for _, path := range imports(t, s) {
			own, found := strings.CutPrefix(path, "holdfast/")
			if found && !slices.ContainsFunc(layer.May, func(m string) bool { return house.Within(own, m) }) {
				t.Errorf("%s imports %s: %s may import only %v", s.file, own, layer.Path, layer.May)
			}
		}
	}
}

func TestLibrariesHaveOneImporter(t *testing.T) {
	for _, s := range sources(t) {
		for _, path := range imports(t, s) {
			for lib, may := range house.Importers() {
				if house.Within(path, lib) && !s.test && !slices.Contains(may, s.pkg) {
					t.Errorf("%s imports %s: only %v may", s.file, path, may)
				}
			}
		}
	}
}

func TestExportedNamesAreDocumented(t *testing.T) {
	for _, s := range sources(t) {
		if s.test {
			continue
		}
		for _, d := range s.ast.Decls {
			for _, bare := range undocumented(d) {
				t.Errorf("%s: exported %s has no doc comment that names it", s.file, bare)
			}
		}
	}
}

// undocumented names the exported declarations of d without a doc comment. A
// comment on a group serves the group's names.
func undocumented(d ast.Decl) []string {
	switch d := d.(type) {
	case *ast.FuncDecl:
		if d.Name.IsExported() && exportedReceiver(d) && !mentions(d.Doc, d.Name.Name) {
			return []string{d.Name.Name}
		}
	case *ast.GenDecl:
		var out []string
		for _, spec := range d.Specs {
			out = append(out, undocumentedSpec(spec, d.Doc)...)
		}
		return out
	}
	return nil
}

func undocumentedSpec(spec ast.Spec, group *ast.CommentGroup) []string {
	var out []string
	switch s := spec.(type) {
	case *ast.TypeSpec:
		if s.Name.IsExported() && !mentions(s.Doc, s.Name.Name) && !mentions(group, s.Name.Name) {
			out = append(out, s.Name.Name)
		}
	case *ast.ValueSpec:
		for _, n := range s.Names {
			if n.IsExported() && s.Doc == nil && s.Comment == nil && group == nil {
				out = append(out, n.Name)
			}
		}
	}
	return out
}

func mentions(doc *ast.CommentGroup, name string) bool {
	return doc != nil && strings.Contains(doc.Text(), name)
}

func exportedReceiver(d *ast.FuncDecl) bool {
	if d.Recv == nil {
		return true
	}
	typ := d.Recv.List[0].Type
	if star, ok := typ.(*ast.StarExpr); ok {
		typ = star.X
	}
	if index, ok := typ.(*ast.IndexExpr); ok {
		typ = index.X
	}
	id, ok := typ.(*ast.Ident)
	return ok && id.IsExported()
}

func TestEveryPackageHasAPackageComment(t *testing.T) {
	doc, seen := map[string]bool{}, map[string]bool{}
	for _, s := range sources(t) {
		if s.test {
			continue
		}
		seen[s.pkg] = true
		if s.ast.Doc != nil {
			doc[s.pkg] = true
		}
	}
	for pkg := range seen {
		if !doc[pkg] {
			t.Errorf("%s has no package comment", pkg)
		}
	}
}

func TestEveryPublicPackageHasAnExample(t *testing.T) {
	public, has := map[string]bool{}, map[string]bool{}
	for _, s := range sources(t) {
		if strings.HasPrefix(s.pkg, "internal/") || strings.HasPrefix(s.pkg, "cmd/") {
			continue
		}
		public[s.pkg] = true
		for _, d := range s.ast.Decls {
			f, ok := d.(*ast.FuncDecl)
			if ok && s.test && strings.HasPrefix(f.Name.Name, "Example") {
				has[s.pkg] = true
			}
		}
	}
	for pkg := range public {
		if !has[pkg] {
			t.Errorf("%s has no runnable example", pkg)
		}
	}
}

func TestNoMutablePackageVariables(t *testing.T) {
	for _, s := range sources(t) {
		if s.test {
			continue
		}
		for _, d := range s.ast.Decls {
			g, ok := d.(*ast.GenDecl)
			if !ok || g.Tok != token.VAR {
				continue
			}
			for _, spec := range g.Specs {
				for _, n := range spec.(*ast.ValueSpec).Names {
					if assigned(s, n.Name) {
						t.Errorf("%s: package variable %s is assigned after its declaration", s.file, n.Name)
					}
				}
			}
		}
	}
}

// assigned tells whether the file stores into the package variable: assigns to
// it or to an element of it, takes its address, increments it, or deletes from it.
func assigned(s source, name string) bool {
	found := false
	ast.Inspect(s.ast, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.AssignStmt:
			if n.Tok == token.DEFINE {
				return true
			}
			for _, l := range n.Lhs {
				found = found || root(l) == name
			}
		case *ast.IncDecStmt:
			found = found || root(n.X) == name
		}
		return true
	})
	return found
}

func root(e ast.Expr) string {
	switch e := e.(type) {
	case *ast.Ident:
		if e.Obj != nil && e.Obj.Kind == ast.Var {
			if _, field := e.Obj.Decl.(*ast.ValueSpec); !field {
				return "" // a local or a parameter
			}
		}
		return e.Name
	case *ast.IndexExpr:
		return root(e.X)
	}
	return ""
}
