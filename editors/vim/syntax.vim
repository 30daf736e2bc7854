" Syntax colours for Portlight networks. Copied by the set-up steps to
" syntax/portlight.vim; Vim and Neovim use the same file.
if exists('b:current_syntax')
  finish
endif

syntax match plightDoc      /##.*$/
syntax match plightComment  /#\@<!#\(#\)\@!.*$/
syntax region plightString  start=/"/ end=/"/ oneline
syntax match plightKeyword  /^\s*\zs\(ground\|let\|port\|function\|tell\|require\|start\|prefer\|allow\|use\|subnetwork\|part\)\>/
syntax match plightKind     /\<\(resistor\|inductor\|capacitor\|impedance\|admittance\|voltage source\|current source\|op amp\|transformer\|coupling\|switch\|wire\)\>/
syntax match plightWord     /\s\zs\(at\|in\|from\|to\|before\|with\|without\|because\|between\|nominal\|reference\|of\|rated\|initially\|gain\|resistance\|primary\|secondary\|output\|opens\|closes\|ideal\|steady\|rest\)\ze\(\s\|,\|$\)/
syntax match plightWire     /-\[\|\]-\|||/
syntax match plightQuantity /\<\([vizyp]\|thevenin\|norton\)\ze\[/
syntax match plightCall     /\<\h\w*\ze(/
syntax match plightNumber   /\(\w\)\@<!\d*\.\?\d\+\([eE][-+]\?\d\+\)\?/ nextgroup=plightUnit
syntax match plightUnit     / \?\(1\/\)\?[qryzafpnuµμmcdhkMGTPEZYRQ]\?\(Ω\|Ω\|ohm\|dBuV\|dBV\|dBu\|dB\|Wb\|Hz\|rad\|deg\|ppm\|V\|A\|S\|H\|F\|W\|J\|C\|s\|°\|%\)\(\^-\?\d\+\)\?\([*/][a-zA-ZµμΩ]\+\(\^-\?\d\+\)\?\)*\>\?/ contained

highlight default link plightDoc      SpecialComment
highlight default link plightComment  Comment
highlight default link plightString   String
highlight default link plightKeyword  Keyword
highlight default link plightKind     Type
highlight default link plightWord     Statement
highlight default link plightWire     Delimiter
highlight default link plightQuantity Identifier
highlight default link plightCall     Function
highlight default link plightNumber   Number
highlight default link plightUnit     Constant

let b:current_syntax = 'portlight'
