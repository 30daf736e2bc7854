package lsp

import "go.lsp.dev/protocol"

// capabilities is what the server says it can do. Every request of the table
// in methods.go is announced here; a test compares the two.
func (s *session) capabilities() protocol.ServerCapabilities {
	long := protocol.WorkDoneProgressOptions{WorkDoneProgress: ptr(true)}
	c := protocol.ServerCapabilities{
		PositionEncoding: s.client.kind,
		TextDocumentSync: &protocol.TextDocumentSyncOptions{
			OpenClose: ptr(true), Change: ptr(protocol.TextDocumentSyncKindIncremental),
			Save: &protocol.SaveOptions{IncludeText: ptr(false)},
		},
		HoverProvider:              &protocol.HoverOptions{WorkDoneProgressOptions: long},
		DeclarationProvider:        protocol.Boolean(true),
		DefinitionProvider:         protocol.Boolean(true),
		TypeDefinitionProvider:     protocol.Boolean(true),
		ReferencesProvider:         &protocol.ReferenceOptions{WorkDoneProgressOptions: long},
		DocumentHighlightProvider:  protocol.Boolean(true),
		DocumentSymbolProvider:     protocol.Boolean(true),
		WorkspaceSymbolProvider:    protocol.Boolean(true),
		FoldingRangeProvider:       protocol.Boolean(true),
		SelectionRangeProvider:     protocol.Boolean(true),
		LinkedEditingRangeProvider: protocol.Boolean(true),
		CallHierarchyProvider:      protocol.Boolean(true),
		DocumentFormattingProvider: protocol.Boolean(true),
		DocumentRangeFormattingProvider: &protocol.DocumentRangeFormattingOptions{
			RangesSupport: ptr(true),
		},
		InlayHintProvider:    &protocol.InlayHintOptions{WorkDoneProgressOptions: long, ResolveProvider: ptr(true)},
		CodeLensProvider:     &protocol.CodeLensOptions{ResolveProvider: ptr(true)},
		DocumentLinkProvider: &protocol.DocumentLinkOptions{},
		RenameProvider:       protocol.Boolean(true),
		Workspace:            s.workspaceCapabilities(),
	}
	if s.client.prepareRename {
		c.RenameProvider = &protocol.RenameOptions{PrepareProvider: ptr(true)}
	}
	c.DocumentOnTypeFormattingProvider = protocol.DocumentOnTypeFormattingOptions{
		FirstTriggerCharacter: "\n", MoreTriggerCharacter: []string{"}"},
	}
	c.CompletionProvider = &protocol.CompletionOptions{
		TriggerCharacters: []string{"[", " ", ",", "(", ".", "\"", "/", "=", "|"},
		ResolveProvider:   ptr(true),
		CompletionItem:    &protocol.ServerCompletionItemOptions{LabelDetailsSupport: ptr(true)},
	}
	c.SignatureHelpProvider = &protocol.SignatureHelpOptions{
		TriggerCharacters: []string{"("}, RetriggerCharacters: []string{","},
	}
	c.SemanticTokensProvider = &protocol.SemanticTokensOptions{
		Legend: tokenLegend(), Range: protocol.Boolean(true),
		Full: &protocol.SemanticTokensFullDelta{Delta: ptr(true)},
	}
	c.CodeActionProvider = &protocol.CodeActionOptions{
		CodeActionKinds: actionKinds, ResolveProvider: ptr(true),
	}
	c.ExecuteCommandProvider = protocol.ExecuteCommandOptions{WorkDoneProgressOptions: long, Commands: commandNames()}
	if s.pulled() || !s.client.pulls {
		c.DiagnosticProvider = &protocol.DiagnosticOptions{
			WorkDoneProgressOptions: long, Identifier: ptr("portlight"), InterFileDependencies: true, WorkspaceDiagnostics: true,
		}
	}
	return c
}

func (s *session) workspaceCapabilities() *protocol.WorkspaceOptions {
	networks := protocol.FileOperationRegistrationOptions{Filters: []protocol.FileOperationFilter{
		{Scheme: ptr("file"), Pattern: protocol.FileOperationPattern{Glob: "**/*.plight", Matches: protocol.FileOperationPatternKindFile}},
		{Scheme: ptr("file"), Pattern: protocol.FileOperationPattern{Glob: "**", Matches: protocol.FileOperationPatternKindFolder}},
	}}
	return &protocol.WorkspaceOptions{
		WorkspaceFolders: &protocol.WorkspaceFoldersServerCapabilities{
			Supported: ptr(true), ChangeNotifications: protocol.Boolean(true),
		},
		FileOperations:      &protocol.FileOperationOptions{WillRename: networks},
		TextDocumentContent: &protocol.TextDocumentContentOptions{Schemes: []string{pageScheme}},
	}
}
