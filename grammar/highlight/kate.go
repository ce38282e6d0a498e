package highlight

import (
	"encoding/xml"
	"fmt"
	"strings"

	"wellposed/grammar"
)

// Kate is a syntax file for Kate and every program that uses KDE's syntax
// highlighting.
func Kate() string {
	var b strings.Builder
	b.WriteString(`<?xml version="1.0" encoding="UTF-8"?>
<!DOCTYPE language>
<language name="Bayes model" section="Scientific" version="1" kateversion="5.62" extensions="*.bayes" license="Apache-2.0" casesensitive="1">
  <highlighting>
`)
	for _, l := range []struct {
		name  string
		words []string
	}{{"keywords", grammar.Keywords}, {"modifiers", modifiers}, {"kinds", kinds()}, {"functions", functions()}} {
		fmt.Fprintf(&b, "    <list name=%q>\n", l.name)
		for _, w := range l.words {
			if !strings.Contains(w, "-") {
				fmt.Fprintf(&b, "      <item>%s</item>\n", escape(w))
			}
		}
		b.WriteString("    </list>\n")
	}
	names := strings.Join(distributions(), "|")
	fmt.Fprintf(&b, `    <contexts>
      <context name="Statement" attribute="Text" lineEndContext="#stay">
        <DetectSpaces/>
        <DetectChar char="#" attribute="Comment" context="Comment"/>
        <DetectChar char="&quot;" attribute="String" context="String"/>
        <RegExpr String="(?:%s)(?=\s*\()" attribute="Distribution" insensitive="true"/>
        <RegExpr String="log-gamma(?=\s*\()" attribute="Function"/>
        <keyword String="keywords" attribute="Keyword"/>
        <keyword String="functions" attribute="Function"/>
        <keyword String="kinds" attribute="Kind"/>
        <keyword String="modifiers" attribute="Modifier"/>
        <Float attribute="Number"/>
        <Int attribute="Number"/>
        <DetectIdentifier/>
      </context>
      <context name="String" attribute="String" lineEndContext="#pop">
        <HlCStringChar attribute="String"/>
        <DetectChar char="&quot;" attribute="String" context="#pop"/>
      </context>
      <context name="Comment" attribute="Comment" lineEndContext="#pop"/>
    </contexts>
    <itemDatas>
      <itemData name="Text" defStyleNum="dsNormal"/>
      <itemData name="Keyword" defStyleNum="dsKeyword"/>
      <itemData name="Modifier" defStyleNum="dsOperator"/>
      <itemData name="Kind" defStyleNum="dsDataType"/>
      <itemData name="Distribution" defStyleNum="dsFunction"/>
      <itemData name="Function" defStyleNum="dsBuiltIn"/>
      <itemData name="Number" defStyleNum="dsDecVal"/>
      <itemData name="String" defStyleNum="dsString"/>
      <itemData name="Comment" defStyleNum="dsComment"/>
    </itemDatas>
  </highlighting>
  <general>
    <comments><comment name="singleLine" start="#"/></comments>
    <keywords casesensitive="1" additionalDeliminator="-"/>
  </general>
</language>
`, escape(names))
	return b.String()
}

func escape(s string) string {
	var b strings.Builder
	_ = xml.EscapeText(&b, []byte(s))
	return b.String()
}
