package main

import (
	"context"
	"flag"
	"os"
	"os/signal"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"sync"
	"time"

	"golang.org/x/term"

	"wellposed/checks"
	"wellposed/checks/facts"
	"wellposed/checks/render"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

func init() {
	addVerb(verb{
		name: "lint", brief: "check models", usage: "[options] [FILE | FOLDER | GLOB | -] …",
		more: `Checks model files: whether the posterior exists for the data at hand, whether
default priors decide the answer, and whether the file can be read at all. Folders
are searched for *.bayes; ** in a glob stands for any number of folders; - reads a
model from standard input; without arguments the current folder is searched.

Exit codes; when several apply, the largest is returned:
  0   nothing at or above the level
  1   findings at or above the level
  2   a promise is broken or not shown to be kept
  3   something is not decided, under --strict
  4   a model or a data file could not be read
  64  the command line could not be understood
  70  internal fault`,
		setup: lintSetup,
	})
}

type linter struct {
	format  *choice
	level   *choice
	colour  *choice
	strict  bool
	verbose bool
	path    string
	width   int
	limit   time.Duration
	settler checks.Settler
}

func lintSetup(set *flag.FlagSet) func(*call) int {
	l := &linter{}
	var formats []string
	for _, f := range render.Formats {
		formats = append(formats, f.Name)
	}
	l.format = oneOf(set, "format", "text", "how findings are printed", formats...)
	l.level = oneOf(set, "level", "warn", "severity from which findings decide the exit code", "note", "warn", "stop")
	l.colour = oneOf(set, "colour", "auto", "colour; auto: on a terminal, unless NO_COLOR is set", "auto", "always", "never")
	set.BoolVar(&l.strict, "strict", false, "treat what is not decided as a failure, and a missing reason as a warning")
	set.BoolVar(&l.verbose, "verbose", false, "print the verdicts, and say so when nothing is found")
	set.StringVar(&l.path, "path", "", "the `NAME` of the model that is read from standard input; its tables are looked for beside it")
	set.IntVar(&l.width, "width", 0, "page width in `CELLS`; 0 asks the terminal")
	set.StringVar(&l.settler.Fixed, "config", "", "use this `FILE` instead of the nearest wellposed.toml")
	set.DurationVar(&l.limit, "limit", time.Minute, "`TIME` that one model may take; what is not ready by then is not decided")
	return l.run
}

func (l *linter) run(c *call) int {
	args := c.args
	if len(args) == 0 {
		args = []string{"."}
	}
	stdin := false
	for _, a := range args {
		stdin = stdin || a == "-"
	}
	if l.path != "" && !stdin {
		return c.misuse("--path names the model on standard input; give - to read one")
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()

	paths, trouble := findModels(args)
	for _, err := range trouble {
		c.complain("%v", err)
	}
	report := &render.Report{Rules: checks.Known(), Level: severity(l.level.value)}
	report.Version, _ = buildFacts()
	report.Files = l.all(ctx, c, paths)
	report.Files = append(l.configurations(), report.Files...)
	if !c.given["level"] {
		for _, used := range l.settler.Files() {
			report.Level = min(report.Level, used.Level)
		}
	}
	if err := render.Write(c.stdout, l.format.value, report, l.options(c)); err != nil {
		c.complain("cannot write: %v", err)
		return exitUnreadable
	}
	return l.exit(report, len(trouble) > 0)
}

// all checks the models side by side and returns them in the order of the paths.
func (l *linter) all(ctx context.Context, c *call, paths []string) []*render.File {
	out := make([]*render.File, len(paths))
	var wait sync.WaitGroup
	next := make(chan int)
	for range min(runtime.GOMAXPROCS(0), max(1, len(paths))) {
		wait.Add(1)
		go func() {
			defer wait.Done()
			for i := range next {
				out[i] = l.one(ctx, c, paths[i])
			}
		}()
	}
	for i := range paths {
		next <- i
	}
	close(next)
	wait.Wait()
	return slices.DeleteFunc(out, func(f *render.File) bool { return f == nil })
}

// configurations are the configuration files with something to report.
func (l *linter) configurations() []*render.File {
	var list []*render.File
	for _, c := range l.settler.Files() {
		if len(c.Problems) > 0 {
			list = append(list, &render.File{Path: c.Path, Source: c.Source, Findings: c.Problems})
		}
	}
	slices.SortFunc(list, func(a, b *render.File) int { return strings.Compare(a.Path, b.Path) })
	return list
}

func (l *linter) one(ctx context.Context, c *call, path string) *render.File {
	raw, name, err := readModel(c.stdin, path, l.path)
	if err != nil {
		return &render.File{Path: name, Trouble: err.Error()}
	}
	if l.limit > 0 {
		var end context.CancelFunc
		ctx, end = context.WithTimeout(ctx, l.limit)
		defer end()
	}
	set := l.settler.For(name).For(name)
	if set.Skip {
		return nil
	}
	limits := model.Disk{MaxBytes: int64(set.Limits.TableMegabytes) << 20}
	file, broken := checks.Decode(name, raw)
	m := model.Build(ctx, file, model.Options{Matters: set.Matters, MaxRows: set.Limits.Rows, Loader: limits})
	f := facts.New(ctx, m)
	found := checks.Merge(broken, checks.Run(f, checks.Options{Strict: l.strict || set.Strict, Today: time.Now().Format(time.DateOnly)}))
	return checks.Describe(f, set.Apply(found))
}

func severity(word string) diag.Severity {
	return map[string]diag.Severity{"note": diag.Note, "warn": diag.Warn, "stop": diag.Stop}[word]
}

// options are those of the text format: the width of the terminal and whether
// colour is wanted.
func (l *linter) options(c *call) render.Options {
	o := render.Options{Width: l.width, Verbose: l.verbose, Colour: l.colour.value == "always"}
	if o.Width <= 0 {
		o.Width, _ = strconv.Atoi(os.Getenv("COLUMNS"))
	}
	if fd, ok := terminal(c.out); ok {
		if width, _, err := term.GetSize(fd); err == nil && l.width <= 0 && width > 0 {
			o.Width = width
		}
		if l.colour.value == "auto" && os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb" {
			o.Colour = colourTerminal(fd)
		}
	}
	return o
}

func (l *linter) exit(r *render.Report, trouble bool) int {
	t := r.Tally()
	code := exitClean
	if r.Reaches(r.Level) {
		code = exitFindings
	}
	if t.Broken > 0 {
		code = exitBroken
	}
	if l.strict && t.NotDecided > 0 {
		code = exitNotDecided
	}
	if trouble || t.Unreadable > 0 {
		code = exitUnreadable
	}
	for _, f := range r.Files {
		for _, d := range f.Findings {
			switch {
			case d.Rule == checks.InternalFault:
				return exitFault
			case checks.Unreadable(d.Rule):
				code = exitUnreadable
			}
		}
	}
	return code
}
