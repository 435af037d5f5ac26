package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"go/ast"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
)

// bannedPackages may not be imported at all; a name also covers what is below it.
var bannedPackages = map[string]string{
	"math/rand":                 "draws come from the keyed generator, whose bits are the same everywhere",
	"math/cmplx":                "its results differ between architectures",
	"crypto/rand":               "a run may not depend on chance",
	"hash/maphash":              "its seed differs in every process",
	"gonum.org/v1/gonum/stat":   "its sums differ between architectures; tests may use it",
	"gonum.org/v1/gonum/floats": "its sums differ between architectures; tests may use it",
	"gonum.org/v1/gonum/mat":    "its sums differ between architectures; tests may use it",
	"gonum.org/v1/gonum/blas":   "its sums differ between architectures; tests may use it",
	"gonum.org/v1/gonum/lapack": "its sums differ between architectures; tests may use it",
}

const (
	useDetmath = "differs between architectures: use thermo/detmath"
	useOrder   = "a map's order differs in every process: sort the keys first, slices.Sorted(maps.Keys(m))"
	useNothing = "a digested result may not depend on the clock, the machine, its settings or where the run was started"
)

// bannedNames are functions and variables of packages that are fine otherwise.
var bannedNames = map[string]string{}

func init() {
	for pkg, group := range map[string]struct{ names, why string }{
		"math": {"Acos Acosh Asin Asinh Atan Atan2 Atanh Cbrt Cos Cosh Erf Erfc Erfcinv Erfinv Exp Exp2 Expm1 FMA Gamma Hypot " +
			"J0 J1 Jn Lgamma Log Log10 Log1p Log2 Pow Sin Sincos Sinh Tan Tanh Y0 Y1 Yn", useDetmath},
		"maps":          {"All Keys Values", useOrder},
		"time":          {"Local Now Since Until", useNothing},
		"os":            {"Environ Executable Getenv Getpid Getwd Hostname LookupEnv", useNothing},
		"runtime":       {"GOARCH GOMAXPROCS GOOS NumCPU", useNothing},
		"runtime/debug": {"ReadBuildInfo", useNothing},
		"path/filepath": {"Abs", useNothing},
	} {
		for _, name := range strings.Fields(group.names) {
			bannedNames[pkg+"."+name] = group.why
		}
	}
}

// sortedBy take the keys of a map in any order and give them back in one.
var sortedBy = []string{"slices.Sorted", "slices.SortedFunc", "slices.SortedStableFunc"}

// allowed are the uses that reach no digest, as "file function name": the
// reason. An entry that no longer matches anything is a finding too.
var allowed = map[string]string{
	"pipeline/folder/folder.go Open path/filepath.Abs":    "where the result goes, not what it holds",
	"pipeline/folder/apart.go resolved path/filepath.Abs": "where the result goes, not what it holds",
	"pipeline/run.go Run runtime.GOMAXPROCS":              "how many workers; what they give is written in order",
	"pipeline/runlog.go newRunLog os.Hostname":            "run.log is not digested",
	"pipeline/runlog.go newRunLog runtime.GOARCH":         "run.log is not digested",
	"pipeline/runlog.go newRunLog runtime.GOOS":           "run.log is not digested",
	"pipeline/runlog.go newRunLog time.Now":               "run.log is not digested",
	"pipeline/runlog.go stage time.Since":                 "run.log is not digested",

	"ingest/plan.go known range":              "each key on its own",
	"ingest/plan.go missingHeaders range":     "collected, then sorted",
	"manifests/check.go sortedKeys range":     "collected, then sorted",
	"pipeline/problem/problem.go Len range":   "a sum of integers",
	"pipeline/problem/problem.go Lines range": "collected, then sorted",
	"pipeline/problem/problem.go Merge range": "each key on its own",
	"pipeline/summary.go cautions range":      "whether any key is there",
	"pipeline/summary.go summary range":       "collected, then sorted",
	"thermo/method/block.go Reset range":      "each column on its own",
}

// pkg is what this gate needs of go list's answer.
type pkg struct {
	ImportPath, Dir, Export          string
	Standard                         bool
	GoFiles, IgnoredGoFiles          []string
	CgoFiles, SFiles, CFiles, HFiles []string
	Module                           *struct{ Main bool }
}

// bannedCalls type-checks every digested package, tests aside, and gives the
// uses of what is banned, and how many packages it looked at.
func bannedCalls(root, overlay string) ([]Finding, int, error) {
	list, err := goList(root, overlay)
	if err != nil {
		return nil, 0, err
	}
	replaced, err := readOverlay(overlay)
	if err != nil {
		return nil, 0, err
	}
	c := &check{root: root, replaced: replaced, export: map[string]string{}, fset: token.NewFileSet(), used: map[string]bool{}}
	for _, p := range list {
		c.export[p.ImportPath] = p.Export
	}
	c.importer = importer.ForCompiler(c.fset, "gc", c.open)
	n := 0
	for _, p := range list {
		dir, inside := below(root, p.Dir)
		if p.Module == nil || !p.Module.Main || !inside || !isDigested(dir+"/") {
			continue
		}
		if err := c.pkg(p); err != nil {
			return nil, 0, err
		}
		n++
	}
	for use := range allowed {
		if !c.used[use] {
			file, what, _ := strings.Cut(use, " ")
			c.found = append(c.found, Finding{file, 1, "the gates allow " + what + " here, but it is not used: drop it from their list"})
		}
	}
	return c.found, n, nil
}

type check struct {
	root     string
	replaced map[string]string // path -> path of the text to read instead
	export   map[string]string // import path -> file with its exported types
	fset     *token.FileSet
	importer types.Importer
	function string          // the one being looked at, "" outside
	used     map[string]bool // entries of allowed that were needed
	found    []Finding
}

func (c *check) open(path string) (io.ReadCloser, error) {
	if c.export[path] == "" {
		return nil, fmt.Errorf("go list gave no types for %s", path)
	}
	return os.Open(c.export[path])
}

func (c *check) pkg(p pkg) error {
	var files []*ast.File
	for _, name := range p.GoFiles {
		f, err := c.parse(p, name)
		if err != nil {
			return err
		}
		files = append(files, f)
	}
	info := &types.Info{Uses: map[*ast.Ident]types.Object{}, Types: map[ast.Expr]types.TypeAndValue{}}
	conf := types.Config{Importer: c.importer}
	if _, err := conf.Check(p.ImportPath, c.fset, files, info); err != nil {
		return err
	}
	for _, f := range files {
		c.imports(f)
		for _, d := range f.Decls {
			c.uses(d, info)
		}
	}
	for _, name := range slices.Concat(p.CgoFiles, p.SFiles, p.CFiles, p.HFiles) {
		c.report(p, name, "assembly and C are out of these gates' sight: write it in Go")
	}
	return c.ignored(p)
}

// ignored looks at the files that this machine does not compile. They are for
// system calls; one that computes would compute on some machines only.
func (c *check) ignored(p pkg) error {
	for _, name := range p.IgnoredGoFiles {
		if strings.HasSuffix(name, "_test.go") {
			continue
		}
		f, err := c.parse(p, name)
		if err != nil {
			return err
		}
		c.imports(f)
		for _, s := range f.Imports {
			if s.Path.Value == `"math"` {
				c.add(s.Pos(), "math", "math in a file that is compiled on some machines only")
			}
		}
	}
	return nil
}

func (c *check) parse(p pkg, name string) (*ast.File, error) {
	path := filepath.Join(p.Dir, name)
	read := path
	if r, ok := c.replaced[path]; ok {
		read = r
	}
	text, err := os.ReadFile(read)
	if err != nil {
		return nil, err
	}
	return parser.ParseFile(c.fset, path, text, parser.ParseComments|parser.SkipObjectResolution)
}

func (c *check) imports(f *ast.File) {
	c.function = "imports"
	for _, s := range f.Imports {
		path, err := strconv.Unquote(s.Path.Value)
		if err != nil {
			continue // the parser has accepted it
		}
		for banned, why := range bannedPackages {
			if path == banned || strings.HasPrefix(path, banned+"/") {
				c.add(s.Pos(), path, path+": "+why)
			}
		}
	}
}

// uses walks a declaration. maps.Keys is let through as the argument of a sort.
func (c *check) uses(d ast.Decl, info *types.Info) {
	c.function = ""
	if f, ok := d.(*ast.FuncDecl); ok {
		c.function = f.Name.Name
	}
	sorts := map[ast.Node]bool{}
	ast.Inspect(d, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.CallExpr:
			if slices.Contains(sortedBy, fullName(info, n.Fun)) && len(n.Args) > 0 {
				if inner, ok := n.Args[0].(*ast.CallExpr); ok {
					sorts[calleeIdent(inner.Fun)] = true
				}
			}
		case *ast.RangeStmt:
			if _, isMap := info.TypeOf(n.X).Underlying().(*types.Map); isMap {
				c.add(n.Pos(), "range", "range over a map: "+useOrder)
			}
		case *ast.Ident:
			name := objectName(info.Uses[n])
			if why := bannedNames[name]; why != "" && !sorts[n] {
				c.add(n.Pos(), name, name+": "+why)
			}
		}
		return true
	})
}

// calleeIdent is the identifier that names what is called: Keys in maps.Keys.
func calleeIdent(fun ast.Expr) ast.Node {
	switch f := fun.(type) {
	case *ast.Ident:
		return f
	case *ast.SelectorExpr:
		return f.Sel
	case *ast.IndexExpr:
		return calleeIdent(f.X)
	case *ast.IndexListExpr:
		return calleeIdent(f.X)
	}
	return nil
}

func fullName(info *types.Info, fun ast.Expr) string {
	id, _ := calleeIdent(fun).(*ast.Ident)
	if id == nil {
		return ""
	}
	return objectName(info.Uses[id])
}

// objectName gives "math.Log" for a package-level object, "" for others.
func objectName(o types.Object) string {
	if o == nil || o.Pkg() == nil || o.Parent() != o.Pkg().Scope() {
		return ""
	}
	return o.Pkg().Path() + "." + o.Name()
}

// report adds a finding about a whole file.
func (c *check) report(p pkg, name, what string) {
	if file, ok := below(c.root, filepath.Join(p.Dir, name)); ok {
		c.found = append(c.found, Finding{file, 1, what})
	}
}

func (c *check) add(at token.Pos, name, what string) {
	pos := c.fset.Position(at)
	file, _ := below(c.root, pos.Filename)
	if use := file + " " + c.function + " " + name; allowed[use] != "" {
		c.used[use] = true
		return
	}
	c.found = append(c.found, Finding{file, pos.Line, what})
}

func goList(root, overlay string) ([]pkg, error) {
	args := []string{"list", "-export", "-deps", "-json=ImportPath,Dir,Export,Standard,GoFiles,IgnoredGoFiles,CgoFiles,SFiles,CFiles,HFiles,Module"}
	if overlay != "" {
		args = append(args, "-overlay="+overlay)
	}
	cmd := exec.Command("go", append(args, "./...")...)
	cmd.Dir = root
	cmd.Env = append(os.Environ(), "CGO_ENABLED=0")
	var out, errs bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &errs
	if err := cmd.Run(); err != nil {
		return nil, fmt.Errorf("go list: %w\n%s", err, errs.String())
	}
	var list []pkg
	for d := json.NewDecoder(&out); d.More(); {
		var p pkg
		if err := d.Decode(&p); err != nil {
			return nil, fmt.Errorf("go list: %w", err)
		}
		list = append(list, p)
	}
	return list, nil
}

func readOverlay(file string) (map[string]string, error) {
	if file == "" {
		return nil, nil
	}
	text, err := os.ReadFile(file)
	if err != nil {
		return nil, err
	}
	var o struct{ Replace map[string]string }
	if err := json.Unmarshal(text, &o); err != nil {
		return nil, fmt.Errorf("%s: %w", file, err)
	}
	return o.Replace, nil
}
