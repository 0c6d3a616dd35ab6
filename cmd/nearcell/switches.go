package main

import (
	"github.com/spf13/pflag"

	"nearcell/engine"
)

// switches are the commands and options of the program, for HELP in a session.
func switches() []engine.Switch {
	root := (&app{}).command()
	list := []engine.Switch{{Name: "nearcell", Meaning: "the prompt; without a terminal, runs what the standard input says"}}
	for _, c := range root.Commands() {
		if c.IsAvailableCommand() {
			list = append(list, engine.Switch{Name: c.Use, Meaning: c.Short})
		}
	}
	root.PersistentFlags().VisitAll(func(f *pflag.Flag) {
		_, usage := pflag.UnquoteUsage(f)
		if f.DefValue != "" && f.Value.Type() == "string" {
			usage += " (default " + f.DefValue + ")"
		}
		list = append(list, engine.Switch{Name: flagText(f), Meaning: usage})
	})
	return list
}
