package main

import (
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/report"
)

// completion offers words to the shell for what is typed so far.
type completion = func(c *cobra.Command, args []string, typed string) ([]string, cobra.ShellCompDirective)

// completeFlag offers words for a flag.
func completeFlag(c *cobra.Command, flag string, offer completion) {
	if err := c.RegisterFlagCompletionFunc(flag, offer); err != nil {
		panic(err) // a flag that does not exist
	}
}

// completeWords offers fixed words for a flag.
func completeWords(c *cobra.Command, flag string, words ...string) {
	completeFlag(c, flag, cobra.FixedCompletions(words, cobra.ShellCompDirectiveNoFileComp))
}

// completeList offers words for a list with commas, each once.
func completeList(c *cobra.Command, flag string, words ...string) {
	completeFlag(c, flag, func(_ *cobra.Command, _ []string, typed string) ([]string, cobra.ShellCompDirective) {
		before := typed[:strings.LastIndexByte(typed, ',')+1]
		var offered []string
		for _, w := range words {
			if !strings.Contains(","+before, ","+w+",") {
				offered = append(offered, before+w)
			}
		}
		return offered, cobra.ShellCompDirectiveNoFileComp | cobra.ShellCompDirectiveNoSpace
	})
}

// completeFiles offers files with the endings, and folders.
func completeFiles(endings ...string) completion {
	var plain []string
	for _, e := range endings {
		plain = append(plain, strings.TrimPrefix(e, "."))
	}
	return func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
		return plain, cobra.ShellCompDirectiveFilterFileExt
	}
}

func completeFolders(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
	return nil, cobra.ShellCompDirectiveFilterDirs
}

// whileWanted offers words for arguments as long as the command takes another one.
func whileWanted(offer completion) completion {
	return func(c *cobra.Command, args []string, typed string) ([]string, cobra.ShellCompDirective) {
		for n := 1; n <= 2; n++ { // a command of two arguments takes the first of them too
			if more := append(args[:len(args):len(args)], make([]string, n)...); c.ValidateArgs(more) == nil {
				return offer(c, args, typed)
			}
		}
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
}

// completePolicy offers the built-in policies and CSV files.
func completePolicy(_ *cobra.Command, _ []string, typed string) ([]string, cobra.ShellCompDirective) {
	var offered []string
	for _, name := range policy.Names() {
		if strings.HasPrefix(name, typed) {
			offered = append(offered, name)
		}
	}
	if len(offered) == 0 {
		return []string{"csv"}, cobra.ShellCompDirectiveFilterFileExt
	}
	if files, err := filepath.Glob(typed + "*.csv"); err == nil {
		offered = append(offered, files...)
	}
	return offered, cobra.ShellCompDirectiveNoFileComp
}

// completeFormat offers formats; behind FORMAT= a file is completed.
func completeFormat(formats []string) completion {
	return func(_ *cobra.Command, _ []string, typed string) ([]string, cobra.ShellCompDirective) {
		if strings.Contains(typed, "=") {
			return nil, cobra.ShellCompDirectiveDefault
		}
		return formats, cobra.ShellCompDirectiveNoFileComp
	}
}

func completeChecks(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
	var names []string
	for _, c := range report.Catalogue() {
		names = append(names, c.Name+"\t"+c.Title)
	}
	return names, cobra.ShellCompDirectiveNoFileComp
}

func completeParts(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
	var names []string
	for _, row := range parts.Default().Rows() {
		names = append(names, row.Type+"\t"+row.Kind)
	}
	return names, cobra.ShellCompDirectiveNoFileComp
}
