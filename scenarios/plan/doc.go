// Package plan answers the questions a person has about a link: does it meet
// the need, with what margin, how far would it reach, and what stands in the
// way. Every answer is a short loop over two functions: a scenario's Link,
// and the Link's Key. The result is a Plan, whose JSON is the interface that
// the reports and other programs rely on.
package plan
