; Colours of Portlight networks for tree-sitter.
(documentation) @comment.block.documentation
(comment) @comment
(string) @string
(head) @keyword
(use "part" @keyword)
(word) @keyword
(kind) @type
(part name: (name) @variable)
(use name: (name) @variable)
(call name: (name) @function)
(subscript letter: (name) @variable.builtin)
(number) @constant.numeric
(unit) @constant
(digits) @constant.numeric
(open) @punctuation.bracket
(close) @punctuation.bracket
(path first: (node) @variable.other.member)
((statement (head) @keyword . (name) @variable)
  (#match? @keyword "^(let|port|function|subnetwork)$"))
