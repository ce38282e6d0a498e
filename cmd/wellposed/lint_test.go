package main

import (
	"bytes"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"wellposed/checks/render"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// TestDemos holds what lint says about every model under testdata against its
// golden file, exit code included.
func TestDemos(t *testing.T) {
	t.Chdir(filepath.Join("..", ".."))
	var models []string
	for _, folder := range []string{"testdata/demo", "testdata/published"} {
		found, err := modelsUnder(folder)
		if err != nil {
			t.Fatal(err)
		}
		models = append(models, found...)
	}
	if len(models) < 15 {
		t.Fatalf("only %d models", len(models))
	}
	for _, path := range models {
		t.Run(path, func(t *testing.T) {
			code, stdout, stderr := wellposed("", "lint", "--width", "80", filepath.ToSlash(path))
			got := fmt.Sprintf("%sexit code %d\n%s", stdout, code, stderr)
			golden := strings.TrimSuffix(path, extension) + ".lint"
			if *update {
				if err := os.WriteFile(golden, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if got != string(want) {
				t.Errorf("differs from %s; run with -update and look at the difference.\n%s", golden, got)
			}
		})
	}
}

const (
	sound = `unknown p : probability
observe 30 of 400 with probability p
prior p as Beta(1, 1) because "standard" from "protocol 3"
rival "jeffreys" p as Beta(1/2, 1/2)
report p, upper 95%
`
	unsound = `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(0, 0) because "let the data speak"
rival "uniform" p as Beta(1, 1)
report p, upper 95%
`
)

func TestLintStandardInput(t *testing.T) {
	code, stdout, stderr := wellposed(unsound, "lint", "--format", "line", "--path", "plans/relay.bayes", "-")
	if code != exitFindings || !strings.Contains(stdout, "plans/relay.bayes:3:9: stop: ") || !strings.Contains(stdout, "[posterior-does-not-exist]") || stderr != "" {
		t.Errorf("code %d, stdout %q, stderr %q", code, stdout, stderr)
	}
	code, stdout, stderr = wellposed(sound, "lint", "-")
	if code != exitClean || stdout != "" || stderr != "" {
		t.Errorf("a clean model: code %d, stdout %q, stderr %q", code, stdout, stderr)
	}
	if code, _, stderr = wellposed("", "lint", "--path", "x", "y.bayes"); code != exitUsage || !strings.Contains(stderr, "--path names the model on standard input") {
		t.Errorf("--path without -: code %d, %q", code, stderr)
	}
}

func TestLintOptions(t *testing.T) {
	for _, c := range []struct {
		input string
		args  string
		code  int
		err   string
	}{
		{unsound, "lint --level stop -", exitFindings, ""},
		{sound, "lint --level note -", exitClean, ""},
		{"unknown p : probability\nobserve 30 of 400 with probability p\nprior p as Beta(1, 1)\nreport p\nrival \"x\" p as Beta(2, 2)\n", "lint -", exitClean, ""},
		{"unknown p : probability\nobserve 30 of 400 with probability p\nprior p as Beta(1, 1)\nreport p\nrival \"x\" p as Beta(2, 2)\n", "lint --level note -", exitFindings, ""},
		{"unknown p : probability\nobserve 30 of 400 with probability p\nprior p as Beta(1, 1)\nreport p\nrival \"x\" p as Beta(2, 2)\n", "lint --strict -", exitFindings, ""},
		{sound, "lint --format xml -", exitUsage, "is none of text, line, json"},
		{sound, "lint --format jsno -", exitUsage, "did you mean json?"},
		{sound, "lint --lvel stop -", exitUsage, "did you mean --level?"},
		{sound, "lint - --level", exitUsage, "needs a value"},
		{sound, "lint - --level=stop", exitClean, ""},
		{sound, "lint --width wide -", exitUsage, "option --width"},
	} {
		code, _, stderr := wellposed(c.input, strings.Fields(c.args)...)
		if code != c.code || !strings.Contains(stderr, c.err) {
			t.Errorf("%s: code %d, stderr %q; want %d, %q", c.args, code, stderr, c.code, c.err)
		}
	}
}

// Whatever the input, lint ends with a code that says what happened.
func TestLintHostileInput(t *testing.T) {
	t.Chdir(t.TempDir())
	write := func(name, text string) {
		if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	write("empty.bayes", "")
	write("latin.bayes", "title \"caf\xe9\"\n"+sound)
	write("binary.bayes", "\x00\x01\x02\x7f\xff\xfe\n\x00")
	write("utf16.bayes", "\xff\xfet\x00i\x00")
	write("nested.bayes", sound+"report "+strings.Repeat("(", 10000)+"p"+strings.Repeat(")", 10000)+"\n")
	write("longline.bayes", sound+"# "+strings.Repeat("x", 1<<19)+"\n")
	write("ragged.csv", "y,n\n1,2\n3\n")
	write("notable.bayes", "table t from \"missing.csv\"\n"+sound)
	write("ragged.bayes", "table t from \"ragged.csv\"\n"+sound)
	write("folder.bayes", "table t from \".\"\n"+sound)
	if err := os.Mkdir("d.bayes", 0o755); err != nil {
		t.Fatal(err)
	}
	large, err := os.Create("large.bayes")
	if err != nil {
		t.Fatal(err)
	}
	if err := large.Truncate(200 << 20); err != nil {
		t.Fatal(err)
	}
	large.Close()
	for _, c := range []struct {
		name   string
		code   int
		expect string
	}{
		{"missing.bayes", exitUnreadable, "no such file"},
		{"empty.bayes", -1, ""},
		{"latin.bayes", exitUnreadable, "latin.bayes:1:11: stop: 1 byte here is not UTF-8"},
		{"binary.bayes", exitUnreadable, "binary.bayes:1"},
		{"utf16.bayes", exitUnreadable, "UTF-16"},
		{"nested.bayes", exitFindings, "nested.bayes:6:"},
		{"longline.bayes", exitClean, ""},
		{"notable.bayes", exitUnreadable, "notable.bayes:1:"},
		{"ragged.bayes", exitUnreadable, "ragged.bayes:1:"},
		{"folder.bayes", exitUnreadable, "folder.bayes:1:"},
		{"large.bayes", exitUnreadable, "200 MB"},
		{"d.bayes", exitUnreadable, ""},
	} {
		code, stdout, stderr := wellposed("", "lint", "--format", "line", c.name)
		if c.code >= 0 && code != c.code || code == exitFault || !strings.Contains(stdout+stderr, c.expect) {
			t.Errorf("%s: code %d, want %d; stdout %.300q, stderr %.300q", c.name, code, c.code, stdout, stderr)
		}
		for _, format := range []string{"text", "json", "sarif", "junit", "github", "gitlab"} {
			if code2, _, _ := wellposed("", "lint", "--format", format, c.name); code2 != code {
				t.Errorf("%s: code %d as line, %d as %s", c.name, code, code2, format)
			}
		}
	}
}

// endless never ends.
type endless struct{}

func (endless) Read(p []byte) (int, error) {
	for i := range p {
		p[i] = '#'
	}
	return len(p), nil
}

func TestLintEndlessInput(t *testing.T) {
	var out, err bytes.Buffer
	if code := Main([]string{"lint", "-"}, endless{}, &out, &err); code != exitUnreadable || !strings.Contains(out.String(), "MB") {
		t.Errorf("code %d, %q", code, out.String())
	}
}

// gone is an output whose reader has left or whose disk is full.
type gone struct{}

func (gone) Write([]byte) (int, error) { return 0, io.ErrShortWrite }

func TestLintCannotWrite(t *testing.T) {
	var err bytes.Buffer
	if code := Main([]string{"lint", "-"}, strings.NewReader(unsound), gone{}, &err); code != exitUnreadable || !strings.Contains(err.String(), "cannot write") {
		t.Errorf("code %d, %q", code, err.String())
	}
}

// The order of the arguments decides the order of the output, and two runs
// print the same.
func TestLintIsDeterministic(t *testing.T) {
	t.Chdir(filepath.Join("..", ".."))
	_, first, _ := wellposed("", "lint", "--format", "json", "testdata/demo")
	for range 3 {
		if _, again, _ := wellposed("", "lint", "--format", "json", "testdata/demo"); again != first {
			t.Fatal("two runs differ")
		}
	}
}

// What lint prints about real models follows the schemas.
func TestLintFollowsTheSchemas(t *testing.T) {
	t.Chdir(filepath.Join("..", ".."))
	sarif, err := os.ReadFile("checks/render/testdata/sarif-schema-2.1.0.json")
	if err != nil {
		t.Fatal(err)
	}
	for format, schema := range map[string]string{"json": render.Schema, "sarif": string(sarif)} {
		_, out, _ := wellposed("", "lint", "--format", format, "testdata/demo")
		definition, err := jsonschema.UnmarshalJSON(strings.NewReader(schema))
		if err != nil {
			t.Fatal(err)
		}
		c := jsonschema.NewCompiler()
		if err := c.AddResource("memory:schema.json", definition); err != nil {
			t.Fatal(err)
		}
		value, err := jsonschema.UnmarshalJSON(strings.NewReader(out))
		if err != nil {
			t.Fatal(err)
		}
		if err := c.MustCompile("memory:schema.json").Validate(value); err != nil {
			t.Errorf("%s: %v", format, err)
		}
		if format == "json" && !strings.Contains(out, `"certificate"`) {
			t.Error("no certificate in the JSON")
		}
	}
}
