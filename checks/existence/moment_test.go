package existence

import (
	"context"
	"testing"
)

func TestMoment(t *testing.T) {
	normal := func(n, power string) string {
		return "given y = " + n + "\nunknown mu : location\nunknown sigma : scale\nobserve y as Normal(mu, sd = sigma)\nprior mu flat\nprior sigma ∝ " + power + "\n"
	}
	cases := []struct {
		text string
		k    int
		want Status
	}{
		// Student-t with n − 1 degrees for mu: moments of order below n − 1.
		{normal("[1, 2]", "1/sigma") + "report mu\n", 1, DoesNotExist},
		{normal("[1, 2, 4]", "1/sigma") + "report mu\n", 1, Exists},
		{normal("[1, 2, 4]", "1/sigma") + "report mu\n", 2, DoesNotExist},
		{normal("[1, 2, 4, 3]", "1/sigma") + "report mu\n", 2, Exists},
		{normal("[1, 2, 4]", "1/sigma") + "report sigma\n", 1, Exists},
		{normal("[1, 2, 4]", "1/sigma") + "report sigma\n", 2, DoesNotExist},
		// E(1/p) under Beta(1, 3) does not exist.
		{"given n = 2, y = 0\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(1, 1)\nreport q = 1 / p\n", 1, DoesNotExist},
		{"given n = 2, y = 1\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(1, 1)\nreport q = 1 / p\n", 1, Exists},
		{"given n = 2, y = 1\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(1, 1)\nreport p\n", 2, Exists},
		{"given n = 2, y = 2\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(1, 1)\nreport odds(p)\n", 1, DoesNotExist},
		{"given y = 3\nunknown r : rate\nobserve y as Poisson(r)\nprior r flat\nreport exp(r)\n", 1, DoesNotExist},
		{"given y = 3\nunknown r : rate\nobserve y as Poisson(r)\nprior r flat\nreport exp(r / 2)\n", 1, Exists},
	}
	for i, c := range cases {
		a := read(t, c.text).Declared()
		v := Moment(context.Background(), a, a.Reports[0], c.k)
		if v.Status != c.want {
			t.Errorf("%d: %s, want %s: %s\n%s", i, v.Status, c.want, v.Claim, c.text)
		}
	}
}

func TestBreaking(t *testing.T) {
	cases := []struct{ text, want string }{
		{"given n = 40\nawait y\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(0, 0)\nreport p\n", "y = 0 or y = 40"},
		{"given n = 400\nawait y\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p as Beta(0, 0)\nreport p\n", "y = 0 or y = 400"},
		{"await y\nunknown p : probability\nobserve y as Binomial(40, p)\nprior p as Beta(1/2, 1/2)\nreport p\n", "none"},
		{"await y\nunknown r : rate\nobserve y as Poisson(6 * r)\nprior log(r) flat\nreport r\n", "y = 0"},
		{"await y\nunknown r : rate\nobserve y as Poisson(6 * r)\nprior r ∝ r^(-3)\nreport r\n", "y from 0 to 2"},
	}
	for _, c := range cases {
		a := read(t, c.text).Declared()
		found := Breaking(context.Background(), a)
		if len(found) != 1 || found[0].Text != c.want {
			t.Errorf("%s: %+v, want %s", c.text, found, c.want)
			if len(found) == 1 {
				t.Logf("%+v", *found[0])
			}
		}
	}
}
