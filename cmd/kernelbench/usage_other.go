//go:build !linux

package main

func usage() consumption { return consumption{} }
