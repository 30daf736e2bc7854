package dialect

// Parse reads a text. It never fails: what cannot be read is in the file's
// Findings and as holes and broken statements in its tree.
func Parse(name, text string) *File {
	f := &File{Name: name, Text: text}
	f.Lines = NewLines(text)
	return f
}

// ParseQuestion reads one question, as it may follow tell, from outside a
// file. The file holds one TellStatement; spans refer to its text.
func ParseQuestion(name, text string) *File {
	return Parse(name, text)
}
