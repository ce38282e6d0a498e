package near

import "testing"

func TestWord(t *testing.T) {
	verbs := []string{"lint", "format", "explain", "version", "serve"}
	for typed, want := range map[string]string{
		"lnit": "lint", "Lint": "lint", "fromat": "format", "explian": "explain", "xyz": "", "servers": "serve", "": "", "l": "",
		"observation": "",
	} {
		if got := Word(typed, verbs); got != want {
			t.Errorf("Word(%q) = %q, want %q", typed, got, want)
		}
	}
	if got := Suggest("vresion", verbs); got != "; did you mean version?" {
		t.Error(got)
	}
	if got := Suggest("qqqqq", verbs); got != "" {
		t.Error(got)
	}
}
