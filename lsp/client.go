package lsp

import (
	"slices"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// client is what the client can do, read once from its initialize request.
// Every question about the client is answered here.
type client struct {
	name     string
	encoding dialect.Encoding
	kind     protocol.PositionEncodingKind

	markdownHover, markdownCompletion, markdownSignature bool
	pictures                                             bool   // hovers may hold images
	fence                                                string // language of aligned lines in hovers

	snippets, insertReplace, labelDetails bool
	resolveCompletion                     []string
	labelOffsets                          bool // of signature parameters

	documentChanges, applyEdit bool
	showDocument, progress     bool
	configuration, folders     bool
	watchFiles, watchSettings  bool // by registration

	ownPages                                            bool // opens documents that the server provides
	relatedInformation, codeDescription, diagnosticData bool
	pulls                                               bool // asks for diagnostics itself
	relatedDocuments                                    bool
	refreshDiagnostics, refreshInlay                    bool
	refreshTokens, refreshLens                          bool

	nestedSymbols, lineFolding, collapsedText bool
	links                                     struct{ definition, declaration, typeDefinition bool }
	actionLiterals, resolveAction             bool
	disabledActions, preferredActions         bool
	prepareRename, overlappingTokens          bool
	multilineTokens                           bool
	resolveInlay                              []string
}

// picturedClients are the clients known to show images in hovers.
var picturedClients = []string{"Visual Studio Code", "code-server"}

// newClient digests the capabilities. Anything may be absent.
func newClient(p *protocol.InitializeParams) *client {
	c := &client{name: p.ClientInfo.Name}
	if c.pictures = slices.Contains(picturedClients, c.name); c.pictures {
		c.fence = "text" // VS Code reads a bare fence as a network, and colours its words
	}
	c.chooseEncoding(p.Capabilities.General)
	if w := p.Capabilities.Window; w != nil {
		c.progress = yes(w.WorkDoneProgress)
		c.showDocument = w.ShowDocument != nil && w.ShowDocument.Support
	}
	if w := p.Capabilities.Workspace; w != nil {
		c.readWorkspace(w)
	}
	if t := p.Capabilities.TextDocument; t != nil {
		c.readText(t)
		c.readCompletion(t)
		c.readNavigation(t)
	}
	return c
}

// chooseEncoding takes utf-8 wherever it stands among those offered, else
// utf-16, which every client must know; utf-32 is taken from a client that
// offers nothing else.
func (c *client) chooseEncoding(g *protocol.GeneralClientCapabilities) {
	c.encoding, c.kind = dialect.UTF16, protocol.PositionEncodingKindUTF16
	if g == nil {
		return
	}
	offered := g.PositionEncodings
	switch {
	case slices.Contains(offered, protocol.PositionEncodingKindUTF8):
		c.encoding, c.kind = dialect.UTF8, protocol.PositionEncodingKindUTF8
	case len(offered) > 0 && !slices.Contains(offered, protocol.PositionEncodingKindUTF16) &&
		slices.Contains(offered, protocol.PositionEncodingKindUTF32):
		c.encoding, c.kind = dialect.CodePoints, protocol.PositionEncodingKindUTF32
	}
}

// countIn takes the encoding that a user's initialization option names, for
// an editor that counts columns so without offering it; "auto" changes nothing.
func (c *client) countIn(name string) {
	switch name {
	case "utf-8":
		c.encoding, c.kind = dialect.UTF8, protocol.PositionEncodingKindUTF8
	case "utf-16":
		c.encoding, c.kind = dialect.UTF16, protocol.PositionEncodingKindUTF16
	case "utf-32":
		c.encoding, c.kind = dialect.CodePoints, protocol.PositionEncodingKindUTF32
	}
}

func (c *client) readWorkspace(w *protocol.WorkspaceClientCapabilities) {
	c.applyEdit = yes(w.ApplyEdit)
	c.configuration = yes(w.Configuration)
	c.folders = yes(w.WorkspaceFolders)
	c.documentChanges = w.WorkspaceEdit != nil && yes(w.WorkspaceEdit.DocumentChanges)
	c.watchFiles = w.DidChangeWatchedFiles != nil && yes(w.DidChangeWatchedFiles.DynamicRegistration)
	c.watchSettings = w.DidChangeConfiguration != nil && yes(w.DidChangeConfiguration.DynamicRegistration)
	c.ownPages = w.TextDocumentContent != nil
	c.refreshDiagnostics = w.Diagnostics != nil && yes(w.Diagnostics.RefreshSupport)
	c.refreshInlay = w.InlayHint != nil && yes(w.InlayHint.RefreshSupport)
	c.refreshTokens = w.SemanticTokens != nil && yes(w.SemanticTokens.RefreshSupport)
	c.refreshLens = w.CodeLens != nil && yes(w.CodeLens.RefreshSupport)
}

func (c *client) readText(t *protocol.TextDocumentClientCapabilities) {
	if t.Hover != nil {
		c.markdownHover = prefersMarkdown(t.Hover.ContentFormat)
	}
	if d := t.PublishDiagnostics; d != nil {
		c.relatedInformation = yes(d.RelatedInformation)
		c.codeDescription = yes(d.CodeDescriptionSupport)
		c.diagnosticData = yes(d.DataSupport)
	}
	if d := t.Diagnostic; d != nil {
		c.pulls = true
		c.relatedDocuments = yes(d.RelatedDocumentSupport)
		c.relatedInformation = c.relatedInformation || yes(d.RelatedInformation)
	}
	c.multilineTokens = yes(t.SemanticTokens.MultilineTokenSupport)
	c.overlappingTokens = yes(t.SemanticTokens.OverlappingTokenSupport)
	if t.InlayHint != nil {
		c.resolveInlay = t.InlayHint.ResolveSupport.Properties
	}
	if f := t.FoldingRange; f != nil {
		c.lineFolding = yes(f.LineFoldingOnly)
		c.collapsedText = f.FoldingRange != nil && yes(f.FoldingRange.CollapsedText)
	}
	if s := t.DocumentSymbol; s != nil {
		c.nestedSymbols = yes(s.HierarchicalDocumentSymbolSupport)
	}
}

func (c *client) readCompletion(t *protocol.TextDocumentClientCapabilities) {
	if t.Completion != nil && t.Completion.CompletionItem != nil {
		i := t.Completion.CompletionItem
		c.snippets = yes(i.SnippetSupport)
		c.insertReplace = yes(i.InsertReplaceSupport)
		c.labelDetails = yes(i.LabelDetailsSupport)
		c.markdownCompletion = prefersMarkdown(i.DocumentationFormat)
		c.resolveCompletion = i.ResolveSupport.Properties
	}
	if t.SignatureHelp != nil && t.SignatureHelp.SignatureInformation != nil {
		i := t.SignatureHelp.SignatureInformation
		c.markdownSignature = prefersMarkdown(i.DocumentationFormat)
		c.labelOffsets = i.ParameterInformation != nil && yes(i.ParameterInformation.LabelOffsetSupport)
	}
}

func (c *client) readNavigation(t *protocol.TextDocumentClientCapabilities) {
	c.links.definition = t.Definition != nil && yes(t.Definition.LinkSupport)
	c.links.declaration = t.Declaration != nil && yes(t.Declaration.LinkSupport)
	c.links.typeDefinition = t.TypeDefinition != nil && yes(t.TypeDefinition.LinkSupport)
	if a := t.CodeAction; a != nil {
		c.actionLiterals = a.CodeActionLiteralSupport.CodeActionKind.ValueSet != nil // ALE sends an empty set
		c.resolveAction = yes(a.DataSupport) && slices.Contains(a.ResolveSupport.Properties, "edit")
		c.disabledActions = yes(a.DisabledSupport)
		c.preferredActions = yes(a.IsPreferredSupport)
	}
	c.prepareRename = t.Rename != nil && yes(t.Rename.PrepareSupport)
}

// prefersMarkdown says whether Markdown may be sent: the first format that
// we can write decides, and plain text where none is named.
func prefersMarkdown(formats []protocol.MarkupKind) bool {
	for _, f := range formats {
		switch f {
		case protocol.MarkupKindMarkdown:
			return true
		case protocol.MarkupKindPlainText:
			return false
		}
	}
	return false
}

func yes(b *bool) bool { return b != nil && *b }

func ptr[T any](v T) *T { return &v }
