package main

import (
	"flag"
	"fmt"
	"os"
)

func main() {
	if err := run(os.Args[1:]); err != nil {
		fmt.Fprintln(os.Stderr, "check:", err)
		os.Exit(1)
	}
}

const usage = "usage: check settings FOLDER | check manifests -settings FILE FOLDER | check sbom PROGRAM | " +
	"check provenance -commit COMMIT [-builder URI] PROGRAM"

func run(arguments []string) error {
	if len(arguments) == 0 {
		return fmt.Errorf(usage)
	}
	flags := flag.NewFlagSet(arguments[0], flag.ContinueOnError)
	settingsFile := flags.String("settings", "", "what `kinegate serve --print-config` prints for the settings of the ConfigMap")
	commit := flags.String("commit", "", "commit that the program was built from")
	builder := flags.String("builder", "", "URI of who built it")
	if err := flags.Parse(arguments[1:]); err != nil {
		return err
	}
	if flags.NArg() != 1 {
		return fmt.Errorf(usage)
	}
	switch arguments[0] {
	case "settings":
		objects, err := readFolder(flags.Arg(0))
		if err != nil {
			return err
		}
		if len(objects.maps) != 1 {
			return fmt.Errorf("%d ConfigMaps", len(objects.maps))
		}
		fmt.Print(objects.maps[0].Data["kinegate.yaml"])
		return nil
	case "manifests":
		settings, err := readSettings(*settingsFile)
		if err != nil {
			return err
		}
		objects, err := readFolder(flags.Arg(0))
		if err != nil {
			return err
		}
		faults := objects.faults(settings)
		for _, f := range faults {
			fmt.Fprintln(os.Stderr, f)
		}
		if len(faults) > 0 {
			return fmt.Errorf("%d rules are broken", len(faults))
		}
		fmt.Printf("%d objects decode strictly and keep K1, K2, K5, K7\n", objects.count)
		return nil
	case "sbom":
		return writeSBOM(os.Stdout, flags.Arg(0))
	case "provenance":
		return writeProvenance(os.Stdout, flags.Arg(0), *commit, *builder)
	}
	return fmt.Errorf(usage)
}
