package main

import (
	"bytes"
	"context"
	"flag"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"holdfast/internal/race"
)

// TestReadme runs every command that the README and the pages in docs show, in their
// console blocks, and holds the output shown against what comes out, but for seconds. With
// -update-readme it writes the pages anew; read the difference.
func TestReadme(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the plain run")
	}
	t.Chdir(filepath.Join("..", ".."))
	pages, err := filepath.Glob("docs/*.md")
	if err != nil {
		t.Fatal(err)
	}
	t.Run("README.md", func(t *testing.T) { checkPage(t, "README.md", 4) })
	for _, page := range pages {
		t.Run(page, func(t *testing.T) { checkPage(t, page, 0) })
	}
}

// checkPage does so for one page, which has at least so many console blocks.
func checkPage(t *testing.T, page string, least int) {
	update := flag.Lookup("update-readme").Value.String() == "true"
	text, err := os.ReadFile(page)
	if err != nil {
		t.Fatal(err)
	}
	parts := strings.Split(string(text), "```console\n")
	if len(parts)-1 < least {
		t.Fatalf("%d console blocks in %s", len(parts)-1, page)
	}
	for i, part := range parts[1:] {
		block, rest, found := strings.Cut(part, "\n```")
		if !found {
			t.Fatal("a console block without an end")
		}
		command, shown, _ := strings.Cut(block, "\n")
		got := outputOf(t, command)
		if !update && seconds(got) != seconds(shown) {
			t.Errorf("%s\nprints\n%s\n%s shows\n%s", command, got, page, shown)
		}
		parts[i+1] = command + "\n" + got + "\n```" + rest
	}
	if update {
		if err := os.WriteFile(page, []byte(strings.Join(parts, "```console\n")), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

func init() { flag.Bool("update-readme", false, "write the outputs in the README and docs anew") }

// shellWords splits a command at blanks outside double quotes, which it takes away.
func shellWords(command string) []string {
	quoted := false
	words := strings.FieldsFunc(command, func(r rune) bool {
		if r == '"' {
			quoted = !quoted
		}
		return r == ' ' && !quoted
	})
	for i := range words {
		words[i] = strings.ReplaceAll(words[i], `"`, "")
	}
	return words
}

func outputOf(t *testing.T, command string) string {
	t.Helper()
	words := shellWords(command)
	if len(words) < 2 || words[0] != "$" || words[1] != "holdfast" {
		t.Fatalf("%q is not '$ holdfast …'", command)
	}
	for i, w := range words { // records go where the test may write
		if w == "--out" {
			words[i+1] = filepath.Join(t.TempDir(), words[i+1])
		}
	}
	var out bytes.Buffer
	if err := dispatch(context.Background(), terminal{&out, io.Discard}, words[2:]); err != nil {
		out.WriteString("holdfast: " + err.Error())
	}
	return strings.TrimRight(out.String(), "\n")
}

// seconds blots out what a machine's speed decides.
func seconds(s string) string {
	s = regexp.MustCompile(`[0-9.e-]+ s\b`).ReplaceAllString(s, "# s")
	return regexp.MustCompile(`on \d+ threads`).ReplaceAllString(s, "on # threads")
}
