// Package cone decides exactly whether a finite system of homogeneous linear
// inequalities and equations has a solution other than 0.
package cone
