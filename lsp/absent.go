package lsp

import "go.lsp.dev/protocol"

// absent lists every method of the protocol that Portlight deliberately does
// not serve or send, and why. A test holds it against the list of all methods.
var absent = []struct{ name, why string }{
	{protocol.MethodTextDocumentImplementation, "a subnetwork has one text, which is its definition"},
	{protocol.MethodTextDocumentPrepareTypeHierarchy, "subnetworks do not inherit; what uses what is the call hierarchy"},
	{protocol.MethodTypeHierarchySupertypes, "as above"},
	{protocol.MethodTypeHierarchySubtypes, "as above"},
	{protocol.MethodTextDocumentDocumentColor, "the notation has no colours"},
	{protocol.MethodTextDocumentColorPresentation, "as above"},
	{protocol.MethodTextDocumentInlineValue, "belongs to debuggers; values stand in inlay text"},
	{protocol.MethodWorkspaceInlineValueRefresh, "as above"},
	{protocol.MethodTextDocumentInlineCompletion, "whole lines cannot be foreseen; completion offers templates"},
	{protocol.MethodTextDocumentMoniker, "for indexes of published packages, which networks are not"},
	{protocol.MethodDocumentLinkResolve, "links are complete when they are sent"},
	{protocol.MethodWorkspaceSymbolResolve, "symbols are complete when they are sent"},
	{protocol.MethodTextDocumentWillSave, "nothing has to happen before a save"},
	{protocol.MethodTextDocumentWillSaveWaitUntil, "formatting on save is the client's to ask for"},
	{protocol.MethodNotebookDocumentDidOpen, "networks are files, not notebooks"},
	{protocol.MethodNotebookDocumentDidChange, "as above"},
	{protocol.MethodNotebookDocumentDidSave, "as above"},
	{protocol.MethodNotebookDocumentDidClose, "as above"},
	{protocol.MethodWorkspaceWillCreateFiles, "an empty file needs no edits elsewhere"},
	{protocol.MethodWorkspaceWillDeleteFiles, "a use statement of a file that goes is reported, not removed: it says what is missing"},
	{protocol.MethodWorkspaceDidCreateFiles, "watched files report it, whoever creates them"},
	{protocol.MethodWorkspaceDidRenameFiles, "as above"},
	{protocol.MethodWorkspaceDidDeleteFiles, "as above"},
	{protocol.MethodClientUnregisterCapability, "what is registered stays so for the session"},
	{protocol.MethodWorkspaceWorkspaceFolders, "the client tells of every change"},
	{protocol.MethodWorkspaceSemanticTokensRefresh, "colours change with the text only, or with a used file, which the next request shows"},
	{protocol.MethodWorkspaceFoldingRangeRefresh, "folds change with the text only"},
	{protocol.MethodWorkspaceTextDocumentContentRefresh, "the pages do not change"},
	{protocol.MethodWindowShowMessageRequest, "nothing is asked of the user in between"},
	{protocol.MethodTelemetryEvent, "nothing is reported to anybody"},
	{protocol.MethodLogTrace, "the log says what there is to say"},
}
