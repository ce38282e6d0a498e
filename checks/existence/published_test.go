package existence

import (
	"context"
	"os"
	"path/filepath"
	"testing"
	"time"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// TestPublished decides every model of the demo and of the published data sets;
// each must get a proof one way or the other.
func TestPublished(t *testing.T) {
	var paths []string
	for _, dir := range []string{"demo", "published"} {
		found, _ := filepath.Glob("../../testdata/" + dir + "/*.bayes")
		paths = append(paths, found...)
	}
	if len(paths) == 0 {
		t.Fatal("no models")
	}
	for _, path := range paths {
		content, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		m := model.Build(context.Background(), source.NewFile(path, string(content)), model.Options{})
		for _, p := range m.Problems {
			t.Logf("%s: %s", path, p.Headline)
		}
		start := time.Now()
		r := Decide(context.Background(), m.Declared())
		t.Logf("%s: %v", filepath.Base(path), time.Since(start))
		for _, v := range r.Verdicts {
			t.Logf("%s: %s (%s): %s", filepath.Base(path), v.Status, v.Code, v.Claim)
		}
	}
}
