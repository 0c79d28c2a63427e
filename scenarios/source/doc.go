// Package source says what a measured source can carry on a scenario's link.
//
// Package sources knows states and laboratory data and nothing of links; here
// both meet.
package source
