package verify

import (
	"encoding/json"
	"testing"

	"wellposed/checks/existence/certificate"
)

func clone(c *certificate.Certificate) *certificate.Certificate {
	b, _ := json.Marshal(c)
	var d certificate.Certificate
	_ = json.Unmarshal(b, &d)
	return &d
}

func TestMutations(t *testing.T) {
	overlap := &certificate.Certificate{Kind: certificate.KindCone, Cone: &certificate.Cone{Columns: 2, Overlap: true,
		Rows: [][]string{{"1", "1"}, {"-1", "-2"}, {"1", "3"}, {"-1", "-4"}}, Equal: []bool{false, false, false, false},
		Weights: []string{"1", "3", "3", "1"}}}
	direction := &certificate.Certificate{Kind: certificate.KindCone, Cone: &certificate.Cone{Columns: 2,
		Rows: [][]string{{"-1", "-1"}, {"1", "2"}, {"0", "0"}}, Equal: []bool{false, false, true}, Direction: []string{"-3/2", "1"}}}
	sums := &certificate.Certificate{Kind: certificate.KindConditions, Conditions: &certificate.Conditions{Finite: false,
		List: []certificate.Condition{{Text: "a + y > 0", Terms: []string{"0", "0"}}, {Text: "b + n − y > 0", Terms: []string{"0", "40"}, Holds: true}}}}
	ends := &certificate.Certificate{Kind: certificate.KindEnds, Ends: &certificate.Ends{Unknown: "p", Finite: true,
		Ends: []certificate.End{{At: "0", Side: 1, Power: "2", Finite: true, Parts: []certificate.Part{{From: "prior", Power: "-1"}, {From: "likelihood", Power: "3"}}},
			{At: "1", Side: -1, Power: "-1/2", Finite: true}}}}
	cases := []struct {
		name   string
		c      *certificate.Certificate
		exists bool
		break_ []func(c *certificate.Certificate)
	}{
		{"overlap", overlap, true, []func(c *certificate.Certificate){
			func(c *certificate.Certificate) { c.Cone.Weights[0] = "2" },
			func(c *certificate.Certificate) { c.Cone.Weights[0] = "-1" },
			func(c *certificate.Certificate) { c.Cone.Rows[1][1] = "-3" },
			func(c *certificate.Certificate) { c.Cone.Rows[1][1] = "x" },
			func(c *certificate.Certificate) { c.Cone.Columns = 3 },
			func(c *certificate.Certificate) { c.Cone.Rows = c.Cone.Rows[:3] },
			func(c *certificate.Certificate) { c.Cone.Overlap = false },
			func(c *certificate.Certificate) { c.Kind = certificate.KindEnds },
			func(c *certificate.Certificate) {
				c.Cone.Rows = [][]string{{"1", "1"}, {"-1", "-1"}}
				c.Cone.Equal, c.Cone.Weights = []bool{false, false}, []string{"1", "1"}
			},
		}},
		{"direction", direction, false, []func(c *certificate.Certificate){
			func(c *certificate.Certificate) { c.Cone.Direction[0] = "0" },
			func(c *certificate.Certificate) { c.Cone.Direction = []string{"0", "0"} },
			func(c *certificate.Certificate) { c.Cone.Rows[0][0] = "1" },
			func(c *certificate.Certificate) { c.Cone.Rows[2][0] = "1" },
			func(c *certificate.Certificate) { c.Cone.Direction = c.Cone.Direction[:1] },
		}},
		{"sums", sums, false, []func(c *certificate.Certificate){
			func(c *certificate.Certificate) { c.Conditions.List[0].Terms[0] = "1" },
			func(c *certificate.Certificate) { c.Conditions.List[0].Holds = true },
			func(c *certificate.Certificate) { c.Conditions.List = c.Conditions.List[1:] },
			func(c *certificate.Certificate) { c.Conditions.Finite = true },
		}},
		{"ends", ends, true, []func(c *certificate.Certificate){
			func(c *certificate.Certificate) { c.Ends.Ends[0].Power = "3" },
			func(c *certificate.Certificate) { c.Ends.Ends[1].Power = "-1" },
			func(c *certificate.Certificate) { c.Ends.Ends[0].Parts[0].Power = "-4" },
			func(c *certificate.Certificate) { c.Ends.Ends = c.Ends.Ends[:1] },
			func(c *certificate.Certificate) { c.Ends.Ends[1].At = "-1" },
			func(c *certificate.Certificate) { c.Ends.Ends[1].Rapid = 1 },
			func(c *certificate.Certificate) { c.Ends.Slice = true },
		}},
	}
	for _, c := range cases {
		if err := Verify(c.c, c.exists); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		if Verify(c.c, !c.exists) == nil {
			t.Errorf("%s: accepted for the other verdict", c.name)
		}
		for i, f := range c.break_ {
			d := clone(c.c)
			f(d)
			if Verify(d, c.exists) == nil {
				t.Errorf("%s: mutation %d accepted", c.name, i)
			}
		}
	}
}
