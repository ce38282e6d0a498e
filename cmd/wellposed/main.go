// Command wellposed checks Bayesian model files: whether the posterior exists
// for the data at hand and whether default priors decide the answer.
package main

import "os"

func main() {
	os.Exit(Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
