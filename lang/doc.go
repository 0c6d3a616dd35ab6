// Package lang turns the text of a script into a syntax tree, and a tree back into text.
package lang
