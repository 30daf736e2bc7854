package lsp

import "go.lsp.dev/protocol"

// methods lists every method that the server handles. METHODS.md is written
// from it, and a test holds it, absent.go and the capabilities against the
// list of all methods of the protocol.
func methods() []method {
	list := []method{
		first(answers(protocol.MethodInitialize, "agree on positions and abilities, take in folders and settings", initialize)),
		notification(protocol.MethodInitialized, "register for watched files and settings, fetch the settings", (*session).initialized),
		first(answers(protocol.MethodShutdown, "refuse every later request", shutdownRequest)),
		notification(protocol.MethodExit, "end; a failure without shutdown before", func(s *session, _ *struct{}) error { s.exit(); return nil }),
		notification(protocol.MethodCancelRequest, "end a request's work and answer it as cancelled", (*session).cancelRequest),
		notification(protocol.MethodWindowWorkDoneProgressCancel, "end the analysis that the progress belongs to", (*session).cancelProgress),
		notification(protocol.MethodSetTrace, "accepted; the log is the same at every level", func(*session, *protocol.SetTraceParams) error { return nil }),
	}
	list = append(list, syncMethods()...)
	list = append(list, languageMethods()...)
	return append(list, workspaceMethods()...)
}

func syncMethods() []method {
	return []method{
		notification(protocol.MethodTextDocumentDidOpen, "take in a document", (*session).didOpen),
		notification(protocol.MethodTextDocumentDidChange, "take in an edit; findings follow as soon as they are complete", (*session).didChange),
		notification(protocol.MethodTextDocumentDidSave, "accepted; the text is known already", (*session).didSave),
		notification(protocol.MethodTextDocumentDidClose, "let the file on disk count again", (*session).didClose),
		notification(protocol.MethodWorkspaceDidChangeConfiguration, "take in settings; a wrong key is reported", (*session).didChangeConfiguration),
		notification(protocol.MethodWorkspaceDidChangeWorkspaceFolders, "take in folders that come and go", (*session).didChangeWorkspaceFolders),
		notification(protocol.MethodWorkspaceDidChangeWatchedFiles, "check again what uses a file that changed on disk; our own watcher reports the same", (*session).didChangeWatchedFiles),
	}
}

func languageMethods() []method {
	return []method{
		answers(protocol.MethodTextDocumentHover, "what stands there: kind and name, the answer, the detail; a finding's meaning", hover),
		answers(protocol.MethodTextDocumentCompletion, "what the grammar wants there: names, kinds, units, values, templates", completion),
		answers(protocol.MethodCompletionItemResolve, "documentation; of a name its hover", resolveCompletion),
		answers(protocol.MethodTextDocumentSignatureHelp, "the arguments of functions and measures", signatureHelp),
		answers(protocol.MethodTextDocumentDefinition, "where a name is defined, and a used file", definition),
		answers(protocol.MethodTextDocumentDeclaration, "where a name is declared, which is where it is defined", declaration),
		answers(protocol.MethodTextDocumentTypeDefinition, "from a use to its subnetwork", typeDefinition),
		answers(protocol.MethodTextDocumentReferences, "every place of a name, in all files", references),
		answers(protocol.MethodTextDocumentDocumentHighlight, "every place of a name in the document", documentHighlight),
		answers(protocol.MethodTextDocumentDocumentSymbol, "the outline: parts, ports, functions, constants, subnetworks", documentSymbols),
		answers(protocol.MethodTextDocumentPrepareRename, "whether a name stands there", prepareRename),
		answers(protocol.MethodTextDocumentRename, "rename in all files; a clash is refused by name", rename),
		answers(protocol.MethodTextDocumentLinkedEditingRange, "the places of a name to type into at once", linkedEditing),
		answers(protocol.MethodTextDocumentFoldingRange, "subnetworks, long statements, comments, use statements", foldingRanges),
		answers(protocol.MethodTextDocumentSelectionRange, "word, box, path, statement, body, file", selectionRanges),
		answers(protocol.MethodTextDocumentSemanticTokensFull, "colours by meaning, at any size", semanticTokens),
		answers(protocol.MethodTextDocumentSemanticTokensFullDelta, "what changed in them", semanticTokensDelta),
		answers(protocol.MethodTextDocumentSemanticTokensRange, "those of a part of the document", semanticTokensRange),
		answers(protocol.MethodTextDocumentInlayHint, "answers, verdicts, constants and reference directions between the text", inlayHints),
		answers(protocol.MethodInlayHintResolve, "the whole answer as a tooltip", resolveInlay),
		answers(protocol.MethodTextDocumentCodeLens, "a line above ports, functions and limits", codeLens),
		answers(protocol.MethodCodeLensResolve, "what the line says", resolveLens),
		answers(protocol.MethodTextDocumentCodeAction, "repairs of findings, accepting one with a reason, all repairs at once", codeActions),
		answers(protocol.MethodCodeActionResolve, "the edit of all repairs at once", resolveAction),
		answers(protocol.MethodTextDocumentFormatting, "the canonical form", formatting),
		answers(protocol.MethodTextDocumentRangeFormatting, "the canonical form of some lines", rangeFormatting),
		answers(protocol.MethodTextDocumentRangesFormatting, "the canonical form of several ranges", rangesFormatting),
		answers(protocol.MethodTextDocumentOnTypeFormatting, "tidy the line that a line feed ends, the body that a brace closes", onTypeFormatting),
		answers(protocol.MethodTextDocumentDocumentLink, "the files that use statements name", documentLinks),
		answers(protocol.MethodTextDocumentDiagnostic, "the findings, for clients that ask; with those of used files", pullDiagnostics),
		answers(protocol.MethodTextDocumentPrepareCallHierarchy, "the subnetwork that stands there", prepareCallHierarchy),
		answers(protocol.MethodCallHierarchyIncomingCalls, "who uses a subnetwork", incomingCalls),
		answers(protocol.MethodCallHierarchyOutgoingCalls, "which subnetworks one uses", outgoingCalls),
	}
}

func workspaceMethods() []method {
	return []method{
		answers(protocol.MethodWorkspaceDiagnostic, "the findings of every network file, as check gives them", workspaceDiagnostics),
		answers(protocol.MethodWorkspaceSymbol, "names anywhere in the workspace", workspaceSymbols),
		answers(protocol.MethodWorkspaceExecuteCommand, "answer a question, show an answer, explain a finding, make an edit", executeCommand),
		answers(protocol.MethodWorkspaceWillRenameFiles, "let use statements follow a file that moves", willRenameFiles),
		answers(protocol.MethodWorkspaceTextDocumentContent, "the pages that explain findings", documentContent),
	}
}

// sent lists what the server itself sends, for METHODS.md.
var sent = []struct{ name, does string }{
	{protocol.MethodTextDocumentPublishDiagnostics, "the findings of a version, once and complete, to clients that do not ask for them"},
	{protocol.MethodClientRegisterCapability, "for watched files and settings"},
	{protocol.MethodWorkspaceConfiguration, "the settings, when the client can be asked"},
	{protocol.MethodWorkspaceApplyEdit, "the edit of a repair, for clients that know only commands"},
	{protocol.MethodWorkspaceDiagnosticRefresh, "when other files change what a document says"},
	{protocol.MethodWorkspaceInlayHintRefresh, "when settings change"},
	{protocol.MethodWorkspaceCodeLensRefresh, "when settings change"},
	{protocol.MethodWindowShowDocument, "an answer or explanation, if the client opens documents"},
	{protocol.MethodWindowShowMessage, "a wrong setting; an answer, if the client opens no documents"},
	{protocol.MethodWindowLogMessage, "failures"},
	{protocol.MethodWindowWorkDoneProgressCreate, "analyses of more than a second"},
	{protocol.MethodProgress, "their progress, and parts of long results"},
	{protocol.MethodCancelRequest, "for what the server asked and needs no more"},
}

// table indexes the methods by name.
func table(extra []method) map[string]method {
	t := map[string]method{}
	for _, m := range append(methods(), extra...) {
		t[m.name] = m
	}
	return t
}
